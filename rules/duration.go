package rules

// Duration is how long stages last.
var Duration = &Kind{Name: "duration", Unit: "min", Needs: [][]string{{"Stage"}, {"Time"}, {"Compare time"}}, May: []string{},
	Help: "the stages last at least or at most Time, whatever the temperature"}
