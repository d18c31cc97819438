package rules

import (
	"regexp"
	"strings"
	"unicode"
)

// Stated is a condition that the user answers.
var Stated = &Kind{Name: "stated", May: []string{"Answer", "Stage"},
	Help: "only you can answer it: yes, no, or yes with a comma and a remark that takes nothing back; blank cannot be told", judge: judgeStated}

func judgeStated(v *view) Finding {
	a := strings.TrimSpace(v.l.Answer)
	h := holes{"answer": strings.TrimRight(a, ".")}
	first, rest := strings.ToLower(a), ""
	if i := strings.IndexFunc(first, func(r rune) bool { return !unicode.IsLetter(r) }); i >= 0 {
		first, rest = first[:i], first[i:]
	}
	switch {
	case a == "":
		return v.blank(CannotTell, say("stated blank", h))
	case first == "yes" && plainYes(rest):
		return v.blank(Met, say("stated yes", h))
	case first == "no":
		return v.blank(NotMet, say("stated no", h))
	}
	return v.blank(CannotTell, say("stated text", h))
}

// doubts are words in an answer that may take back its yes.
var doubts = wordsOf("no not never nothing none neither nor unless cannot except excluding excludes barring apart other without but although though " +
	"however if when whenever while until till once provided providing assuming assumed depends depending subject pending awaiting outstanding open " +
	"due tbc tbd tba todo later soon tomorrow next will be being progress unconfirmed unverified planned plan intended expected estimated proposed " +
	"almost nearly mostly mainly largely partly partially roughly approximately usually normally generally typically often sometimes occasionally " +
	"rarely hardly seldom only some most maybe perhaps probably possibly likely presumably hopefully apparently supposedly theoretically theory " +
	"principle should would could might may think believe guess hope suppose try trying aim unsure unclear unknown uncertain doubtful")

// plainUses are uses of such words that doubt nothing: a date in May, and a bound.
var plainUses = regexp.MustCompile(`[0-9][.]?\s+may\b|\bmay\s+[0-9]|\bat most\b`)

// wordsOf makes a set of the words in a text.
func wordsOf(text string) map[string]bool {
	set := map[string]bool{}
	for _, w := range strings.Fields(text) {
		set[w] = true
	}
	return set
}

// plainYes tells whether what follows a yes (in lower case) leaves it a yes: nothing, or a mark and words that take nothing back.
func plainYes(rest string) bool {
	rest = strings.TrimSpace(rest)
	if rest == "" {
		return true
	}
	if !strings.ContainsAny(rest[:1], ",-:;.") && !strings.HasPrefix(rest, "–") && !strings.HasPrefix(rest, "—") || strings.Contains(rest, "?") {
		return false
	}
	for _, w := range strings.FieldsFunc(plainUses.ReplaceAllString(rest, " "), func(r rune) bool { return !unicode.IsLetter(r) && r != '\'' && r != '’' }) {
		if doubts[w] || strings.HasSuffix(w, "n't") || strings.HasSuffix(w, "n’t") {
			return false
		}
	}
	return true
}
