package rules

// HoldTable is a table of temperatures and times of which any row may be met.
var HoldTable = &Kind{Name: "hold table", Unit: "1", Needs: [][]string{{"Table"}, {"Counting"}}, May: []string{"Stage", "Where", "Compare", "Compare time"},
	Help: "some row of the table is met: time at or above its temperature is at least its time; rows only, nothing between them"}
