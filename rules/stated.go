package rules

import (
	"strings"
	"unicode"
)

// Stated is a condition that the user answers.
var Stated = &Kind{Name: "stated", May: []string{"Answer", "Stage"},
	Help: "only you can answer it: yes, no, or yes with words; blank cannot be told", judge: judgeStated}

func judgeStated(v *view) Finding {
	a := strings.TrimSpace(v.l.Answer)
	h := holes{"answer": strings.TrimRight(a, ".")}
	first := strings.ToLower(a)
	if i := strings.IndexFunc(first, func(r rune) bool { return !unicode.IsLetter(r) }); i >= 0 {
		first = first[:i]
	}
	switch {
	case a == "":
		return v.blank(CannotTell, say("stated blank", h))
	case first == "yes":
		return v.blank(Met, say("stated yes", h))
	case first == "no":
		return v.blank(NotMet, say("stated no", h))
	}
	return v.blank(CannotTell, say("stated text", h))
}
