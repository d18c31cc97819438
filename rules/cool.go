package rules

// CoolWithin is a cooling window: from the clock to To within Time.
var CoolWithin = &Kind{Name: "cool", Unit: "min", Needs: [][]string{{"To"}, {"Time"}, {"Clock starts"}}, May: []string{"From", "Stage", "Where", "Compare", "Compare time"},
	Help: "from the clock down to To, and staying there, within Time"}
