package report

import (
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// WorstCase is how a limit fares between the ends of what varies.
type WorstCase struct {
	Limit   *rules.Limit
	At      []float64     // where each spread of the product stands: −1 at Minus, 0 as typed, 1 at Plus, and in proportion between these
	Ends    []string      // the unfavourable ends, or values between them, that it is judged at, in words; none: the typed values are the least favourable
	Nominal rules.Finding // what the typed values give
	Share   *Share        // of drawn pieces; nil if none were drawn
	Drivers []Driver      // what varies, that which alone leaves the least room first
}

// Share is how many of some drawn pieces meet a limit.
type Share struct {
	Pieces, Met int     // drawn pieces that the limit applied to, and those of them that meet it
	Low, High   float64 // of the true share, with 95 %
	Seed        uint64
}

// shareWords are the share of drawn pieces for the card of a limit; "" if none were drawn.
func (x *sheet) shareWords(f *rules.Finding) string {
	w := x.p.worstCase(f)
	if w == nil || w.Share == nil {
		return ""
	}
	s := w.Share
	return say("share", s.Met, s.Pieces, decimal(100*float64(s.Met)/float64(s.Pieces), 1, down), decimal(100*s.Low, 1, down), decimal(100*s.High, 1, up), s.Seed)
}

// Driver is what one quantity does alone to the room of a limit.
type Driver struct {
	Quantity, Basis string
	At              cell.Ref
	Ends            []DriverEnd // Minus, Plus, those that there are
}

// DriverEnd is one end of it.
type DriverEnd struct {
	Words   string
	Verdict rules.Verdict // of the limit, with everything else as typed
	K, S    *float64      // change of its margins, K and s; nil where one of the two does not exist
}

// worstRun is a run at unfavourable ends.
type worstRun struct {
	name    string
	history *model.History
	product *model.Product // as it is there
}

// AtWorst keeps a run at unfavourable ends, of a number, and gives it a name. of is which run of that product it is.
func (p *Product) AtWorst(number, of string, h *model.History, at *model.Product) string {
	name := strings.Join([]string{"worst", number, of}, " ")
	if p.run(name) == nil {
		p.atWorst = append(p.atWorst, worstRun{name, h, at})
	}
	return name
}

// worstOf tells which run of the product at unfavourable ends a name is of, as rules.LowConductivity, and whether it is of one at all.
func worstOf(name string) (of string, ok bool) {
	rest, ok := strings.CutPrefix(name, "worst ")
	_, of, _ = strings.Cut(rest, " ")
	return of, ok
}

// kindOf is the further run that a name is of, at unfavourable ends or as typed.
func kindOf(name string) string {
	if of, ok := worstOf(name); ok {
		return of
	}
	return name
}

// productOf is the product as it is in a run.
func (p *Product) productOf(h *model.History) *model.Product {
	for i := range p.atWorst {
		if p.atWorst[i].history == h {
			return p.atWorst[i].product
		}
	}
	return &p.Product
}

// Words say at which ends a limit is judged and what the typed values give; "" where the typed values are judged.
func (w *WorstCase) Words() string {
	if len(w.Ends) == 0 {
		return ""
	}
	return say("worst why", strings.Join(w.Ends, ", "), w.Nominal.Verdict)
}

// worstCase finds the worst case of a finding; nil if nothing varies.
func (p *Product) worstCase(f *rules.Finding) *WorstCase {
	for i := range p.Worst {
		if p.Worst[i].Limit == f.Limit {
			return &p.Worst[i]
		}
	}
	return nil
}

// endsWords are the unfavourable ends for the card of a limit; "" if nothing varies.
func (x *sheet) endsWords(f *rules.Finding) string {
	w := x.p.worstCase(f)
	switch {
	case w == nil:
		return ""
	case len(w.Ends) == 0:
		return say("worst none")
	}
	return strings.Join(w.Ends, ", ")
}

// typedWords are what the typed values give, for the card of a limit; "" if nothing varies or they are judged.
func (x *sheet) typedWords(f *rules.Finding) string {
	w := x.p.worstCase(f)
	if w == nil || len(w.Ends) == 0 {
		return ""
	}
	s := w.Nominal.Verdict.String()
	if room := x.head.room(&w.Nominal); room != "" {
		s += ": " + room
	}
	return s
}

// change words how an end moves the room of a limit.
func (h *Head) change(e *DriverEnd) string {
	var s []string
	if finite(e.K) {
		s = append(s, signed(*e.K, func(v float64) string { return h.difference(v, nearest) }))
	}
	if finite(e.S) {
		s = append(s, signed(*e.S, func(v float64) string { return duration(v, nearest) }))
	}
	if len(s) == 0 {
		return e.Words + ": " + e.Verdict.String()
	}
	return e.Words + ": " + strings.Join(s, ", ") + " (" + e.Verdict.String() + ")"
}

// signed puts a plus sign before what is more.
func signed(v float64, words func(float64) string) string {
	if v > 0 {
		return "+" + words(v)
	}
	return words(v)
}

// driverRows are the table of what drives the margin of a limit: rank, quantity, Minus end, Plus end, basis.
func (x *sheet) driverRows(w *WorstCase) [][]string {
	var out [][]string
	for i := range w.Drivers {
		d := &w.Drivers[i]
		var ends []string
		for k := range d.Ends {
			ends = append(ends, x.head.change(&d.Ends[k]))
		}
		out = append(out, []string{d.Quantity, strings.Join(ends, "; "), d.Basis + " (" + d.At.String() + ")"})
	}
	return out
}

// drivers is the part of the report on what drives each margin.
func (x *sheet) drivers() {
	if len(x.p.Worst) == 0 {
		return
	}
	d := x.doc
	d.heading(say("drivers title"), 0, 60)
	d.text(say("drivers sentence"))
	for _, f := range x.order {
		w := x.p.worstCase(f)
		if w == nil || f.Limit == nil || f.Verdict == rules.NotApplicable {
			continue
		}
		d.heading(f.Limit.Name, 2, 25)
		d.table([]col{{title: say("col quantity"), wide: 42, bold: true}, {title: say("col alone"), wide: frameWide - 42 - 52}, {title: say("col basis"), wide: 52}},
			x.driverRows(w), small)
	}
}

// inTyped is the place of the product as typed that lies where a place of another run does, in proportion to the sizes.
func (p *Product) inTyped(at model.Place, h *model.History) model.Place {
	q := p.productOf(h)
	if q == &p.Product || p.Product.Shape == nil {
		return at
	}
	for i, v := range []*float64{&at.UpM, &at.AcrossM, &at.AlongM}[:len(p.Product.Shape.Ways)] {
		column := p.Product.Shape.Ways[i].Size
		if now := *q.Size.Of(column); now > 0 {
			*v *= *p.Product.Size.Of(column) / now
		}
	}
	return at
}
