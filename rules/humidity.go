package rules

import "math"

// Humidity is a condition on the stated relative humidity.
var Humidity = &Kind{Name: "humidity", Unit: "min", Needs: [][]string{{"Humidity"}, {"Share of stage", "Time"}},
	May:  []string{"Stage", "Compare", "Compare time"},
	Help: "the stated relative humidity of the stages for the longer of Share of stage and Time", judge: judgeHumidity}

func judgeHumidity(v *view) Finding {
	l := v.l
	need := 0.0
	if l.TimeS != nil {
		need = *l.TimeS
	}
	whole, unknown := 0.0, 0.0
	p := *v.c.humidity()
	for _, iv := range v.stages {
		whole += iv.b - iv.a
		q := p.in(iv)
		for i := 0; i+1 < len(q.t); i++ {
			if math.IsNaN(q.c[i]) || math.IsNaN(q.c[i+1]) {
				unknown += q.t[i+1] - q.t[i]
			}
		}
	}
	if l.SharePc != nil {
		need = math.Max(need, *l.SharePc/100*whole)
	}
	sp := p.stay(v.stages, l.warmSide(*l.HumidityPc))
	o := none(NotMet, "humidity")
	o.value, o.margin = sp.total.s/60, sp.total.s-need
	o.start, o.end, o.at = when(sp.total, sp.count)
	o.holes = holes{"value": lasting(sp.total.s, -1), "need": lasting(need, 1)}
	switch {
	case l.enough(sp.total.s, need):
		o.verdict = Met
	case l.enough(sp.total.s+unknown, need):
		o.verdict, o.word = CannotTell, "humidity open"
		o.margin = math.NaN()
	}
	f := v.finding(o, question{unit: "min", need: need / 60})
	f.Why = v.sentence(&f, o, "")
	return f
}
