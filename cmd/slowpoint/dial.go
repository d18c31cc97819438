package main

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/unit"
)

// How far a search goes unless told otherwise: sizes from leverLeast of the present one to sizeMost times, durations from one step to
// leverMost times and five minutes, temperatures so many K to either side.
const (
	sizeMost   = 3.0
	sizeMediaK = 30.0
)

// mostSteps is the largest number of steps that a range may be cut into.
const mostSteps = 100_000

// dial is one number of a product that can be varied by whole steps. Values are what the program computes in: m, s, °C.
type dial struct {
	what     string                                   // "thickness", "duration of simmer"
	quantity *unit.Quantity                           // Length, Duration or Temperature
	step     float64                                  // one step; a difference
	lo, hi   int                                      // the range in steps from zero, both included
	zero     float64                                  // the value of step 0
	now      float64                                  // the present value
	most     bool                                     // the largest value that meets is asked for, not the smallest
	set      func(q *workbook.Product, value float64) // puts a value in; q is a copy whose steps may be changed
}

// value is that of a step.
func (d *dial) value(k int) float64 { return d.zero + float64(k)*d.step }

// sizeOptions are the flags of size.
type sizeOptions struct {
	products                              []string
	vary, find, from, to, step, out, date string
}

// dialOf makes the dial that the flags name for a product.
func (r *runner) dialOf(p *workbook.Product, o *sizeOptions) (*dial, error) {
	word, rest, _ := strings.Cut(strings.Join(strings.Fields(strings.Replace(o.vary, "-temperature", " temperature", 1)), " "), " ")
	word = strings.ToLower(word)
	var d *dial
	var err error
	switch {
	case word == "":
		if column := governingColumn(&p.Product); column != "" {
			d = r.sizeDial(p, column)
		} else {
			err = errors.New("it has no size of its own to vary (it is stirred, or made of layers): name a step or the start with --vary")
		}
	case rest == "" && slices.Contains([]string{"thickness", "width", "length", "diameter"}, word):
		column := strings.ToUpper(word[:1]) + word[1:]
		if p.Shape == nil || !slices.Contains(p.Shape.Needs, column) {
			return nil, fmt.Errorf("--vary %s: its shape, %s, has no %s", o.vary, p.Shape.Name, word)
		}
		d = r.sizeDial(p, column)
	case word == "duration" && rest != "":
		d, err = r.durationDial(p, rest)
	case word == "medium" && strings.HasPrefix(strings.ToLower(rest), "temperature "):
		d, err = r.mediumDial(p, strings.TrimSpace(rest[len("temperature "):]))
	case word == "until" && rest != "":
		d, err = r.untilDial(p, rest)
	case word == "start" && strings.EqualFold(rest, "temperature"):
		d = r.startDial(p)
	default:
		err = fmt.Errorf("--vary %q: expected thickness, width, length, diameter, duration STEP, until STEP, medium temperature STEP or start temperature", o.vary)
	}
	if err != nil {
		return nil, err
	}
	return d, r.adjust(d, p, o)
}

// sizeDial varies a size: the largest that meets is asked for.
func (r *runner) sizeDial(p *workbook.Product, column string) *dial {
	now := *p.Size.Of(column)
	d := &dial{what: strings.ToLower(column), quantity: &unit.Length, step: 0.001, now: now, most: true,
		set: func(q *workbook.Product, v float64) { resize(q, column, v) }}
	if p.Inches {
		d.step = inch.In(1) / 20
	}
	d.between(leverLeast*now, sizeMost*now)
	d.lo = max(d.lo, 1)
	return d
}

// durationDial varies the duration of a step: the shortest that meets is asked for.
func (r *runner) durationDial(p *workbook.Product, name string) (*dial, error) {
	i, err := stepOf(p, name)
	if err != nil {
		return nil, err
	}
	s := &p.Steps[i]
	if s.UntilC != nil {
		return nil, fmt.Errorf("--vary: %s ends at a temperature, so that its duration is only the longest that it may last: vary that temperature with --vary \"until %s\", or clear its Until in the plan", s.Name, s.Name)
	}
	d := &dial{what: "duration of " + s.Name, quantity: &unit.Duration, step: 60, now: s.DurationS,
		set: func(q *workbook.Product, v float64) { lasting(q, i, v) }}
	d.between(60, leverMost*s.DurationS+300)
	return d, nil
}

// mediumDial varies the medium of a step: the coldest that meets is asked for in heating, the warmest elsewhere.
func (r *runner) mediumDial(p *workbook.Product, name string) (*dial, error) {
	i, err := stepOf(p, name)
	if err != nil {
		return nil, err
	}
	s := &p.Steps[i]
	if len(s.Medium.C) != 1 {
		return nil, fmt.Errorf("--vary: the surroundings of %s have no single temperature to vary", s.Name)
	}
	d := r.degreesDial("medium temperature of "+s.Name, s.Medium.C[0])
	d.most = s.Stage == nil || !s.Stage.Heats
	d.set = func(q *workbook.Product, v float64) { surround(q, i, v) }
	low := d.now - sizeMediaK
	if d.now >= leverColdestC {
		low = max(low, leverColdestC)
	}
	d.between(low, d.now+sizeMediaK)
	return d, nil
}

// untilDial varies the temperature at which a step ends: the coldest that meets is asked for in heating, the warmest elsewhere.
func (r *runner) untilDial(p *workbook.Product, name string) (*dial, error) {
	i, err := stepOf(p, name)
	if err != nil {
		return nil, err
	}
	s := &p.Steps[i]
	if s.UntilC == nil {
		return nil, fmt.Errorf("--vary: %s ends after its duration and not at a temperature: vary its duration, or give it an Until in the plan", s.Name)
	}
	d := r.degreesDial("end temperature of "+s.Name, *s.UntilC)
	d.most = s.Stage == nil || !s.Stage.Heats
	d.set = func(q *workbook.Product, v float64) { q.Steps[i].UntilC = &v }
	d.between(d.now-sizeMediaK, d.now+sizeMediaK)
	return d, nil
}

// startDial varies the start temperature: the warmest that meets is asked for.
func (r *runner) startDial(p *workbook.Product) *dial {
	d := r.degreesDial("start temperature", p.StartC)
	d.most = true
	d.set = func(q *workbook.Product, v float64) { q.StartC = v }
	low := d.now - sizeMediaK
	if d.now >= leverColdestC {
		low = max(low, leverColdestC)
	}
	d.between(low, d.now+sizeMediaK)
	return d
}

// degreesDial begins a dial of whole degrees of the user's own scale.
func (r *runner) degreesDial(what string, now float64) *dial {
	d := &dial{what: what, quantity: &unit.Temperature, step: r.degree(), now: now}
	if r.head.Fahrenheit {
		d.zero = degreeF.In(0)
	}
	return d
}

// between sets the range to the whole steps within two values.
func (d *dial) between(lo, hi float64) {
	d.lo = int(math.Ceil((lo-d.zero)/d.step - 1e-9))
	d.hi = int(math.Floor((hi-d.zero)/d.step + 1e-9))
}

// stepOf finds a step by its name, or by PROCESS/STEP.
func stepOf(p *workbook.Product, name string) (int, error) {
	named := func(n string) int {
		return slices.IndexFunc(p.Steps, func(s model.Step) bool { return sameName(s.Name, n) })
	}
	if i := named(name); i >= 0 {
		return i, nil
	}
	if n := len(p.Process); len(name) > n && sameName(name[:n], p.Process) && name[n] == '/' {
		if i := named(name[n+1:]); i >= 0 {
			return i, nil
		}
	}
	var names []string
	for i := range p.Steps {
		names = append(names, p.Steps[i].Name)
	}
	return 0, fmt.Errorf("--vary: its process, %s, has no step %q; it has %s", p.Process, name, strings.Join(names, ", "))
}

// adjust takes range, resolution and direction from the flags.
func (r *runner) adjust(d *dial, p *workbook.Product, o *sizeOptions) error {
	own := &d.quantity.Units[0] // what a bare number is in
	difference, ownStep := d.quantity, own
	switch {
	case d.quantity == &unit.Length:
		own = d.quantity.Unit("mm")
		if p.Inches {
			own = inch
		}
		ownStep = own
	case d.quantity == &unit.Duration:
		own = d.quantity.Unit("min")
		ownStep = own
	default:
		difference = &unit.Difference
		ownStep = difference.Unit("°C difference")
		if r.head.Fahrenheit {
			own, ownStep = degreeF, difference.Unit("°F difference")
		}
	}
	parse := func(flag, text string, q *unit.Quantity, u *unit.Unit) (float64, error) {
		v, m := q.Parse(text, u, unit.Point)
		if m != nil {
			return 0, fmt.Errorf("--%s %q: %s: %s", flag, text, m.Says, m.Mend)
		}
		return v.Computed, nil
	}
	lo, hi := d.value(d.lo), d.value(d.hi)
	var err error
	if o.step != "" {
		if d.step, err = parse("step", o.step, difference, ownStep); err != nil {
			return err
		}
		if !(d.step > 0) {
			return fmt.Errorf("--step %q: expected more than nothing", o.step)
		}
	}
	if o.from != "" {
		if lo, err = parse("from", o.from, d.quantity, own); err != nil {
			return err
		}
	}
	if o.to != "" {
		if hi, err = parse("to", o.to, d.quantity, own); err != nil {
			return err
		}
	}
	if d.quantity != &unit.Temperature {
		lo = max(lo, d.step)
	}
	if steps := (hi - lo) / d.step; !(steps <= mostSteps) {
		return fmt.Errorf("the range holds more than %d steps: narrow it with --from and --to, or take larger ones with --step", mostSteps)
	}
	d.between(lo, hi)
	if d.hi < d.lo {
		return errors.New("the range holds no whole step: look at --from, --to and --step")
	}
	switch strings.ToLower(o.find) {
	case "":
	case "largest":
		d.most = true
	case "smallest":
		d.most = false
	default:
		return fmt.Errorf("--find %q: expected largest or smallest", o.find)
	}
	return nil
}

// words writes a value in the user's own unit.
func (d *dial) words(r *runner, p *workbook.Product, v float64) string {
	short := func(x float64) string { return strings.Replace(fmt.Sprintf("%.7g", x), "-", "−", 1) }
	switch {
	case d.quantity == &unit.Temperature && r.head.Fahrenheit:
		return short(degreeF.Out(v)) + " °F"
	case d.quantity == &unit.Temperature:
		return short(v) + " °C"
	case d.quantity == &unit.Duration:
		return short(v/60) + " min"
	case p.Inches:
		return short(inch.Out(v)) + " in"
	}
	return short(v*1000) + " mm"
}

// stepWords writes so many steps in the user's own unit.
func (d *dial) stepWords(r *runner, p *workbook.Product, n int) string {
	if d.quantity == &unit.Temperature {
		return strings.Replace(fmt.Sprintf("%.7g ", float64(n)*d.step/r.degree()), "-", "−", 1) + map[bool]string{true: "°F", false: "°C"}[r.head.Fahrenheit]
	}
	return d.words(r, p, float64(n)*d.step)
}

// plain is a value in the unit that results.json and its like write: mm, min or °C.
func (d *dial) plain(v float64) (x float64, symbol string) {
	switch d.quantity {
	case &unit.Length:
		return v * 1000, "mm"
	case &unit.Duration:
		return v / 60, "min"
	}
	return v, "°C"
}
