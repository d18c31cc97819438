package rules

// Humidity is a condition on the stated relative humidity.
var Humidity = &Kind{Name: "humidity", Unit: "min", Needs: [][]string{{"Humidity"}, {"Share of stage", "Time"}}, May: []string{"Stage", "Compare", "Compare time"},
	Help: "the stated relative humidity of the stages for the longer of Share of stage and Time"}
