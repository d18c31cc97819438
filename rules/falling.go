package rules

// Falling is a temperature that only falls.
var Falling = &Kind{Name: "falling", Unit: "K", Needs: [][]string{{"Stage"}, {"Allowance"}}, May: []string{"Where"},
	Help: "the temperature never rises by more than the allowance during the stages"}
