package rules

// Lethality is the integral of the lethal rate over one heating.
var Lethality = &Kind{Name: "lethality", Unit: "", Needs: [][]string{{"Reference temperature"}, {"z"}, {"Time", "D"}, {"Time", "Log reductions"}}, May: []string{"From", "z above the reference temperature", "Stage", "Where", "Compare time"},
	Help: "equivalent minutes at the reference temperature, added up over one heating; From is the floor below which nothing is credited"}
