package report

import (
	"strings"

	"slowpoint/model"
	"slowpoint/rules"
)

// Deviation is a product calculated with the surroundings that were recorded in the place of the planned ones.
type Deviation struct {
	Records   []Measured     // of the surroundings
	Steps     []string       // the step of each record
	History   *model.History // with the readings as they stand
	Judgement rules.Judgement
	WithinK   float64 // how far the straight lines that stand for the records may lie from their readings
}

// names are those of the records that were used; of all, if none was.
func (v *Deviation) names() string {
	var s, all []string
	for i := range v.Records {
		all = append(all, v.Records[i].Name)
		if v.Records[i].Problems.Faults() == 0 {
			s = append(s, v.Records[i].Name)
		}
	}
	if len(s) == 0 {
		s = all
	}
	return strings.Join(s, ", ")
}

// worst is the finding that settles its verdict; nil if no limit was judged.
func (v *Deviation) worst() *rules.Finding {
	var worst *rules.Finding
	for i := range v.Judgement.Findings {
		f := &v.Judgement.Findings[i]
		if f.Level == "must" && f.Verdict != rules.NotApplicable && f.Limit != nil && (worst == nil || rules.Worse(f, worst)) {
			worst = f
		}
	}
	return worst
}

// verdict is what the limits say, in a sentence.
func (v *Deviation) verdict() string {
	why := sentence(v.Judgement.Why)
	if f := v.worst(); f != nil {
		why = f.Limit.Name + ": " + sentence(f.Why)
	}
	return say("deviated verdict", v.names(), overall(v.Judgement.Verdict).String(), why)
}

// before is the finding of the plan on a limit; nil if there is none.
func (p *Product) before(l *rules.Limit) *rules.Finding {
	for i := range p.Judgement.Findings {
		if f := &p.Judgement.Findings[i]; f.Limit != nil && l != nil && f.Limit.At == l.At && f.Limit.Name == l.Name && f.Level != "alternative" {
			return f
		}
	}
	return nil
}

// besideWords are the margins of each limit as planned and as recorded: limit, before, after.
func (x *sheet) besideWords() [][]string {
	var rows [][]string
	words := func(f *rules.Finding) string {
		if f == nil {
			return ""
		}
		return joinedBy(verdictWord(f.Verdict), x.head.room(x.p.telling(f)))
	}
	for i := range x.p.Deviation.Judgement.Findings {
		f := &x.p.Deviation.Judgement.Findings[i]
		before := x.p.before(f.Limit)
		if f.Limit == nil || f.Verdict == rules.NotApplicable && (before == nil || before.Verdict == rules.NotApplicable) {
			continue
		}
		rows = append(rows, []string{f.Limit.Name, words(before), words(f), f.Why})
	}
	return rows
}

// deviated is what the product came to with the surroundings as they were recorded, beside the plan.
func (x *sheet) deviated() {
	v := x.p.Deviation
	if v == nil {
		return
	}
	d := x.doc
	d.heading(say("deviated title"), 0, 60)
	d.para(v.verdict(), style{size: body, bold: true, after: 1})
	d.text(say("deviated note"))
	d.table([]col{{title: say("col limit"), wide: 44, bold: true}, {title: say("col planned"), wide: 34}, {title: say("col recorded"), wide: 34}, {title: say("col why"), wide: frameWide - 112}},
		x.besideWords(), small)
	for i := range v.Records {
		m := &v.Records[i]
		d.heading(say("record title", m.Name), 2, 30)
		if len(m.Problems) > 0 {
			x.problems(m.Problems)
			d.y += 1.5
		}
		d.pairs(m.facts(x.head), 34)
		x.echo(m)
	}
	if v.History != nil {
		d.text(say("deviated spread", three(v.WithinK)))
	}
	if v.History != nil {
		q := &Product{Product: x.p.Product, Steps: x.p.Steps, History: v.History, Judgement: rules.Judgement{Findings: v.Judgement.Findings}}
		q.Further = nil
		y := &sheet{doc: d, p: q, decides: q.decides(), order: q.worstFirst()}
		if y.decides.history != nil && y.decides.history.Course != nil {
			d.need(92)
			x.head.history(q, y.decides, small, 96, true).draw(d.canvas(d.left, d.y, frameWide, 88))
			d.y += 89
			d.text(y.slowestSentence())
		}
	}
}
