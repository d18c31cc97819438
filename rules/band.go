package rules

// Band is the time spent between two temperatures.
var Band = &Kind{Name: "band", Unit: "min", Needs: [][]string{{"From"}, {"To"}, {"Time"}, {"Counting"}}, May: []string{"Stage", "Where", "Compare time"},
	Help: "time strictly between From and To is at most Time, over the stages or the whole chain"}
