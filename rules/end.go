package rules

// ByTheEnd is a temperature at one instant.
var ByTheEnd = &Kind{Name: "by the end", Unit: "°C", Needs: [][]string{{"From", "To"}}, May: []string{"Time", "Clock starts", "Stage", "Where", "Compare"},
	Help: "at or above From (at or below To) when the stage ends, or Time after the clock"}
