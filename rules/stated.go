package rules

// Stated is a condition that the user answers.
var Stated = &Kind{Name: "stated", Unit: "", Needs: [][]string{}, May: []string{"Answer", "Stage"},
	Help: "only you can answer it: yes, no, or yes with words; blank cannot be told"}
