package rules

import "strings"

// same compares two words as a person would: without regard to case and surrounding blanks.
func same(a, b string) bool { return strings.EqualFold(strings.TrimSpace(a), strings.TrimSpace(b)) }

// Judge holds a subject against the limits that apply to it, in the order given.
func Judge(limits []Limit, groups []Group, s Subject) Judgement {
	return Judgement{Why: "no limit judged"}
}

type view struct{}
