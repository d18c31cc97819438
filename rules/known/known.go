// Package known holds courses of temperature whose judgement is known from outside this program: lethality in closed form, and published
// tables of time and temperature row by row. The command that verifies an installation and the report use them beside those of model/verify.
package known

import (
	"errors"
	"fmt"

	"slowpoint/model"
	"slowpoint/model/verify"
	"slowpoint/rules"
)

const (
	closedForm = "closed form, worked out apart from this program with 60-digit decimals; the general method of Bigelow (1920; from memory)"
	ukList     = "UK list of equivalents of 70 °C for 2 min, as printed by the Food Standards Agency"
	ukSource   = ukList + "; closed form, worked out apart from this program"
	fsis       = "USDA FSIS Appendix A, beef, 6.5-log column; the same rows stand in FDA Food Code 3-401.11(B)(1) for roasts"
	spores     = "FSA / Campden and Chorleywood Food Research Association (2006), equivalents of 90 °C for 10 min (non-proteolytic Clostridium botulinum)"
)

// exact is the allowance of what is known in closed form, as a share: the sum over straight pieces has no error but that of arithmetic.
const exact = 1e-9

// reading is a temperature in °C at a time in min.
type reading struct{ min, c float64 }

// cookRestChill is a record of a cook, a rest and a chill.
var cookRestChill = []reading{{0, 4}, {10, 9}, {20, 22}, {30, 38}, {40, 51}, {50, 60}, {60, 66.5}, {70, 70.2}, {75, 72}, {80, 73.1}, {90, 71.4}, {120, 58}, {180, 33}, {240, 18}, {360, 7}}

// Cases lists them.
func Cases() []verify.Case {
	var out []verify.Case
	add := func(name, source, unit string, expected, allowance float64, l rules.Limit, course ...reading) {
		out = append(out, verify.Case{Name: name, Area: verify.Judging, Source: source, Unit: unit, Expected: expected, Allowance: allowance,
			Got: func() (float64, error) { return judge(l, course) }})
	}
	p70 := func(z float64) rules.Limit { return lethality(70, z) }
	f0 := lethality(121.1, 10)
	p90 := lethality(90, 9)
	above := 10.0
	p90.ZAboveK = &above
	logs := p70(7.5)
	d, six := 20.0, 6.0
	logs.DS, logs.Logs, logs.TimeS = &d, &six, nil
	hold := func(c, min float64) []reading { return []reading{{0, c}, {min, c}} }
	closed := func(name string, expected float64, l rules.Limit, course ...reading) {
		add(name, closedForm, "min", expected, expected*exact, l, course...)
	}

	closed("121.1 °C for 3 min at 121.1 °C, z 10 °C", 3, f0, hold(121.1, 3)...)
	closed("115 °C for 12.2217 min at 121.1 °C, z 10 °C", 3.00007159548, f0, hold(115, 12.2217)...)
	closed("80 °C for 129 min at 90 °C, z 9 °C below it", 9.98800150659, p90, hold(80, 129)...)
	closed("steadily from 20 to 80 °C in 60 min at 70 °C, z 7.5 °C", 70.1744316109, p70(7.5), reading{0, 20}, reading{60, 80})
	closed("steadily from 20 to 121.1 °C in 40 min at 121.1 °C, z 10 °C", 1.71827688178, f0, reading{0, 20}, reading{40, 121.1})
	closed("steadily from 85 to 95 °C in 10 min at 90 °C, z 9 °C below it and 10 °C above", 12.2116977241, p90, reading{0, 85}, reading{10, 95})
	closed("readings of a cook, a rest and a chill at 70 °C, z 7.5 °C", 57.4881930685, p70(7.5), cookRestChill...)
	closed("the same readings, z 6 °C", 62.0935457487, p70(6), cookRestChill...)
	closed("the same readings at 121.1 °C, z 10 °C", 0.000432339893669, f0, cookRestChill...)
	add("the same readings, D 20 s at 70 °C, z 7.5 °C", closedForm, "log10", 172.464579205, 172.464579205*exact, logs, cookRestChill...)
	for _, r := range []struct{ c, min, z75, z6 float64 }{{60, 45, 2.08871497513, 0.969495610514}, {65, 10, 2.15443469003, 1.46779926762}, {70, 2, 2, 2}} {
		words := fmt.Sprintf("%g °C for %g min at 70 °C, z ", r.c, r.min)
		add(words+"7.5 °C", ukSource, "min", r.z75, r.z75*exact, p70(7.5), hold(r.c, r.min)...)
		add(words+"6 °C", ukSource, "min", r.z6, r.z6*exact, p70(6), hold(r.c, r.min)...)
	}
	for _, t := range []struct {
		source string
		rows   []rules.Row
	}{
		{fsis, []rules.Row{fahrenheit(130, 112*60), fahrenheit(140, 12*60), fahrenheit(145, 4*60), fahrenheit(146, 169), fahrenheit(150, 67), fahrenheit(157, 14)}},
		{ukList, []rules.Row{celsius(60, 45*60), celsius(65, 10*60), celsius(70, 2*60), celsius(75, 30), celsius(80, 6)}},
		{spores, []rules.Row{celsius(80, 129*60), celsius(85, 36*60), celsius(90, 10*60)}},
	} {
		table := &rules.Table{Name: "table", Rows: t.rows}
		l := rules.Limit{Name: "table", Kind: rules.HoldTable, Table: table, Counting: rules.Total, Applies: rules.Applies{All: true}}
		for i, r := range t.rows {
			add("held for the time of the row "+r.Typed+": share of the row", t.source, "", 1, exact, l, hold(r.C, r.S/60)...)
			if i+1 == len(t.rows) {
				continue
			}
			next := t.rows[i+1] // between two rows only the colder one counts
			add("held half its time between "+r.Typed+" and "+next.Typed+": share of the row", t.source, "", 0.5, exact, l, hold((r.C+next.C)/2, r.S/120)...)
		}
	}
	return out
}

// lethality is a limit of 2 min at a temperature in °C with a z in K.
func lethality(refC, zK float64) rules.Limit {
	two := 120.0
	return rules.Limit{Name: "lethality", Kind: rules.Lethality, ReferenceC: &refC, ZK: &zK, TimeS: &two, Applies: rules.Applies{All: true}}
}

func celsius(c, s float64) rules.Row { return rules.Row{C: c, S: s, Typed: row(c, "°C", s)} }

func fahrenheit(f, s float64) rules.Row {
	return rules.Row{C: (f - 32) / 1.8, S: s, Typed: row(f, "°F", s)}
}

func row(t float64, unit string, s float64) string {
	if s < 180 {
		return fmt.Sprintf("%g %s, %g s", t, unit, s)
	}
	return fmt.Sprintf("%g %s, %g min", t, unit, s/60)
}

// judge gives the value that a cook of this course earns at its only place.
func judge(l rules.Limit, course []reading) (float64, error) {
	tr := model.Trace{Point: model.Point{Name: "centre"}}
	for _, r := range course {
		tr.TimesS, tr.C = append(tr.TimesS, 60*r.min), append(tr.C, r.c)
	}
	step := &model.Step{Name: "cook", Stage: model.Cook, DurationS: tr.TimesS[len(tr.TimesS)-1]}
	h, err := model.NewRecord([]model.Span{{Step: step, EndS: step.DurationS}}, []model.Trace{tr}, nil)
	if err != nil {
		return 0, err
	}
	if faults := l.Faults(); len(faults) > 0 {
		return 0, fmt.Errorf("the limit is faulty: %v", faults)
	}
	j := rules.Judge([]rules.Limit{l}, nil, rules.Subject{Product: "course", History: h})
	if len(j.Findings) != 1 || j.Findings[0].Value == nil {
		return 0, errors.New("no value was found")
	}
	return *j.Findings[0].Value, nil
}
