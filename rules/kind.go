package rules

// Kind is a kind of limit: the word of the column Rule.
type Kind struct {
	Name, Help string
	Needs      [][]string // each entry: columns of which one must be filled ("From" or "To")
	May        []string   // further columns that may be filled, besides those every limit has
	Unit       string     // of value and required; "" where it depends
	judge      func(*Limit, *view) Finding
}

// view is a history seen through one limit. (To be filled in.)
type view struct{}

// Kinds lists the kinds of limit; one file each.
var Kinds = []*Kind{}

// Judge holds a subject against the limits that apply to it, in the order given.
func Judge(limits []Limit, groups []Group, s Subject) Judgement {
	return Judgement{Why: "no limit judged"}
}
