package rules

// HeatWithin is a heating window: from the clock up to To within Time.
var HeatWithin = &Kind{Name: "heat", Unit: "min", Needs: [][]string{{"To"}, {"Time"}, {"Clock starts"}}, May: []string{"From", "Second time", "Stage", "Where", "Compare", "Compare time"},
	Help: "reaches To (and stays Second time) within Time of the clock"}
