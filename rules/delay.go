package rules

// Delay is the time between two stages.
var Delay = &Kind{Name: "delay", Unit: "min", Needs: [][]string{{"Stage"}, {"Time"}}, May: []string{"Compare time"},
	Help: "the second stage starts within Time of the end of the first (Stage: cook > cool)"}
