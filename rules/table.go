package rules

import "math"

// HoldTable is a table of temperatures and times of which any row may be met; nothing is read between or beyond its rows.
var HoldTable = &Kind{Name: "hold table", Unit: "1", Needs: [][]string{{"Table"}, {"Counting"}},
	May:  []string{"Stage", "Where", "Compare", "Compare time"},
	Help: "some row of the table is met: time at or above its temperature is at least its time; rows only, nothing between them", judge: judgeTable}

func judgeTable(v *view) Finding {
	l := v.l
	rows := sortedRows(l.Table)
	q := question{unit: "1", need: 1, warm: true, needs: true, adds: true}
	q.risks = func(t tilt) []risk {
		var all []risk
		for _, row := range rows {
			all = append(all, v.risk(turns{breaking: true, another: v.single()}, v.stages, v.rowRegion(row, t)))
		}
		return all
	}
	q.traits = func(t tilt) []trait {
		var all []trait
		for _, row := range rows {
			all = append(all, periods(v.stages, v.rowRegion(row, t)))
		}
		return all
	}
	q.measure = func(p path, t tilt) outcome {
		best := none(NotMet, "table missed")
		best.bad, best.value = math.Inf(1), 0
		_, top := p.mostOf(v.stages, 1)
		for _, row := range rows {
			o := v.row(p, t, row, top)
			if o.verdict == Met && best.verdict != Met || o.verdict == best.verdict && o.bad < best.bad {
				best = o
			}
		}
		if best.verdict == Met && t == (tilt{}) {
			best = v.shown(best, p, rows, top)
			if best.row.C < 60-sameK {
				best.cautions = append(best.cautions, "below 60 °C table row")
			}
		}
		return best
	}
	return v.judgePlaces(q)
}

// shown replaces a row that the readings of a record are too far apart to show by one that they show, if there is one.
func (v *view) shown(best outcome, p path, rows []*Row, top float64) outcome {
	v.sparse(&best, p, v.l.warmSide(best.row.C), best.row.S, lasting(best.row.S, 1))
	if best.sparse == "" {
		return best
	}
	for _, row := range rows {
		if o := v.row(p, tilt{}, row, top); o.verdict == Met {
			if v.sparse(&o, p, v.l.warmSide(row.C), row.S, lasting(row.S, 1)); o.sparse == "" {
				return o
			}
		}
	}
	return best
}

// rowTie is what a kelvin weighs between places that kept the same row all the while, in shares of the row's time: so little
// that it changes no row.
const rowTie = 1e-4

// rowRegion is where a place has to be for a row, its temperature moved against it.
func (v *view) rowRegion(row *Row, t tilt) region { return v.l.warmSide(row.C + t.errK + t.ownK) }

// row judges one row at one place, whose warmest temperature is top.
func (v *view) row(p path, t tilt, row *Row, top float64) outcome {
	r := v.rowRegion(row, t)
	o := none(NotMet, "table missed")
	o.row, o.slow = row, true
	if !t.rank {
		o.holes = holes{"row": row.words(), "table": v.l.Table.Name, "value": "0 s", "need": lasting(row.S, 1)}
	}
	if row.S == 0 {
		o.value = 0
		if r.holds(top) {
			o.value, o.verdict, o.word = 1, Met, "table instant"
			o.at, _ = p.mostOf(v.stages, 1)
		}
		o.bad = -o.value - rowTie*math.Max(0, top-row.C)
		if o.value == 0 {
			o.bad = row.C + t.errK + t.ownK - top
		}
		return o
	}
	var sp spent
	if r.holds(top) {
		sp = p.stay(v.stages, r)
	}
	count := v.counting(t)
	held := sp.counted(count)
	o.value, o.bad, o.margin = held.s/row.S, -held.s/row.S, held.s-row.S
	if d := v.depth(p, r, held.s, count); d < 0 {
		o.bad -= d
	} else {
		o.bad -= rowTie * d
	}
	o.start, o.end, o.at = when(held, sp.count)
	if !t.rank {
		o.holes["value"] = lasting(held.s, -1)
	}
	switch {
	case count == Once && sp.count > 1:
		o.margin = math.NaN()
	case t.bound && count == Once && v.mayMultiply(held, false):
		o.verdict = CannotTell
	case v.l.enough(held.s, row.S):
		o.verdict, o.word = Met, "table met"
	}
	return o
}

// words is a row as typed.
func (r *Row) words() string {
	if r.Typed != "" {
		return r.Typed
	}
	return exactly(r.C, "°C") + ", " + exactly(r.S/60, "min")
}
