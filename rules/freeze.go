package rules

// FreezeHold is freezing in two phases.
var FreezeHold = &Kind{Name: "freeze", Unit: "min", Needs: [][]string{{"From"}, {"Time"}, {"To"}, {"Second time"}}, May: []string{"Stage", "Where", "Compare", "Compare time"},
	Help: "at or below From for Time, then at or below To for Second time"}
