package rules

// StayAbove and StayBelow are keeping hot and keeping cold: no excursion, or none longer than Time.
var (
	StayAbove = &Kind{Name: "stay above", Needs: [][]string{{"From", "To"}}, May: []string{"Time", "Counting", "Stage", "Where", "Compare", "Compare time"},
		Help: "never below From during the stages; with Time: the longest excursion allowed (Counting total: all of them together; once: one only)"}
	StayBelow = &Kind{Name: "stay below", Needs: [][]string{{"To", "From"}}, May: []string{"Time", "Counting", "Stage", "Where", "Compare", "Compare time"},
		Help: "never above To during the stages; with Time: the longest excursion allowed (Counting total: all of them together; once: one only)"}
)
