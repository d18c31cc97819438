package report

import (
	"math"
	"sort"

	"slowpoint/model/cell"
	"slowpoint/rules"
)

// slim is what remains of a product for a list of all of them.
type slim struct {
	Row
	order                 int // in the plan, from 1
	family, recipe, batch string
	at                    cell.Ref
	calculated            bool
	cautions              int
}

// word is the verdict in words.
func (s *slim) word() string {
	if !s.calculated {
		return "not calculated"
	}
	return s.Row.Words(rules.Verdict.String)
}

// slimOf keeps what a list needs of a product.
func slimOf(h *Head, p *Product, order int) slim {
	s := slim{Row: p.Row(), order: order, family: p.Family, recipe: p.RecipeVersion, batch: p.Batch,
		at: p.Product.At, calculated: true, cautions: len(Cautions(h, p))}
	s.Verdict = overall(s.Verdict)
	return s
}

// Worst is the less favourable of what was predicted and what was measured.
func (r *Row) Worst() rules.Verdict {
	if r.Measured != nil && weight(*r.Measured) < weight(r.Verdict) {
		return *r.Measured
	}
	return r.Verdict
}

// Words is the verdict in words, and the worst of the records beside it.
func (r *Row) Words(word func(rules.Verdict) string) string {
	if r.Measured == nil {
		return word(overall(r.Verdict))
	}
	return say("verdict beside record", word(overall(r.Verdict)), word(*r.Measured))
}

// overall is the verdict of a product: one of three words.
func overall(v rules.Verdict) rules.Verdict {
	if v == rules.NotApplicable {
		return rules.CannotTell
	}
	return v
}

// listed gives the products that were not calculated and those that were, the worst first: not calculated, not met,
// cannot tell, met; then the smallest room; then the order of the plan.
func listed(ns []NotCalculated, rows []slim) []slim {
	out := make([]slim, 0, len(ns)+len(rows))
	for _, n := range ns {
		s := slim{Row: Row{Product: n.Product, tight: math.Inf(1)}, at: n.At}
		if len(n.Because) > 0 {
			s.Why = n.Because[0].Error()
		}
		out = append(out, s)
	}
	out = append(out, rows...)
	sort.SliceStable(out, func(i, j int) bool {
		a, b := &out[i], &out[j]
		switch {
		case a.calculated != b.calculated:
			return b.calculated
		case a.Worst() != b.Worst():
			return weight(a.Worst()) < weight(b.Worst())
		}
		return a.tight < b.tight
	})
	return out
}
