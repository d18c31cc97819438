package rules

// Hold is the time at or above (at or below) a temperature.
var Hold = &Kind{Name: "hold", Unit: "min", Needs: [][]string{{"From", "To"}, {"Time"}, {"Counting"}}, May: []string{"Stage", "Where", "Compare", "Compare time"},
	Help: "at or above From (at or below To) for Time within the stages; Time 0: reached once"}
