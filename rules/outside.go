package rules

// Outside is hot or cold, nothing in between.
var Outside = &Kind{Name: "outside", Unit: "min", Needs: [][]string{{"From"}, {"To"}}, May: []string{"Stage", "Where", "Compare"},
	Help: "never strictly between From and To: at or below From, or at or above To"}
