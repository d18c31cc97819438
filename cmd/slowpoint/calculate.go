package main

import (
	"reflect"
	"slices"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/report"
	"slowpoint/rules"
)

// lowConductivity is the factor of the second run where the properties come from composition: published conductivities scatter
// by about 15 %, and values below the calculated ones by 3 to 10 % are common (ASHRAE and other published diffusivities).
const lowConductivity = 0.9

// prediction is a product with its runs.
type prediction struct {
	product *workbook.Product
	history *model.History
	further []rules.Run
	drift   func(model.Drift) ([]rules.Run, error)
}

// predict makes every run of a product that is due.
func (r *runner) predict(p *workbook.Product, o model.Options) (*prediction, error) {
	h, err := model.Solve(p.Product, p.Steps, o)
	if err != nil {
		return nil, err
	}
	runs, err := further(p, h, o)
	return &prediction{p, h, runs, drift(p, h, o)}, err
}

// runOf is a run by its name; "" for the usual one.
func (d *prediction) runOf(name string) *model.History {
	for _, r := range d.further {
		if r.Name == name {
			return r.History
		}
	}
	return d.history
}

// find judges limits, before groups join them.
func (d *prediction) find(limits []rules.Limit) []rules.Finding { return d.findEnough(limits, nil) }

// findEnough does so, and looks at what the plan leaves open only where the findings are not enough without; nil: always.
func (d *prediction) findEnough(limits []rules.Limit, enough func([]rules.Finding) bool) []rules.Finding {
	return rules.Find(limits, rules.Subject{Product: d.product.Name, Family: d.product.Family, History: d.history, Further: d.further, Drift: d.drift, Enough: enough})
}

// judged predicts and judges one product, at the unfavourable ends of what varies.
func (r *runner) judged(p *workbook.Product) (*report.Product, error) {
	return r.judgedBy(p, model.Options{})
}

// judgedBy does so with options of the prediction.
func (r *runner) judgedBy(p *workbook.Product, o model.Options) (*report.Product, error) {
	h, err := model.Solve(p.Product, p.Steps, o)
	if err != nil {
		return nil, err
	}
	out := &report.Product{Product: p.Product, Steps: p.Steps, Family: p.Family, RecipeVersion: p.RecipeVersion, Batch: p.Batch,
		Process: p.Process, Note: p.Note, History: h}
	subject := rules.Subject{Product: p.Name, Family: p.Family, History: h}
	if o.Rough { // further runs and the ends of what varies make no finding better
		if out.Judgement = rules.Judge(r.plan.Limits, r.plan.Groups, subject); out.Judgement.Verdict == rules.NotMet {
			return out, nil
		}
	}
	if out.Further, err = further(p, h, o); err != nil {
		return nil, err
	}
	subject.Further, subject.Drift = out.Further, drift(p, h, o)
	findings := rules.Find(r.plan.Limits, subject)
	if len(p.Spreads) > 0 {
		return out, r.worst(p, out, findings, o)
	}
	out.Judgement = rules.Conclude(findings, r.plan.Groups)
	return out, nil
}

// further makes the runs that are due besides the usual one: with less conductivity where any food comes from composition, and as well
// mixed where the food may mix by itself.
func further(p *workbook.Product, usual *model.History, o model.Options) ([]rules.Run, error) {
	var out []rules.Run
	composed := func(m *model.Material) bool { return m.Composed }
	if slices.ContainsFunc(p.Foods(), composed) {
		low := o
		low.ConductivityFactor = lowConductivity
		h, err := model.Solve(p.Product, p.Steps, low)
		if err != nil {
			return nil, err
		}
		out = append(out, rules.Run{Name: rules.LowConductivity, History: h})
	}
	if model.Mixes(&p.Product) {
		q, steps := model.Mixed(p.Product, p.Steps, usual)
		h, err := model.Solve(q, steps, o)
		if err != nil {
			return nil, err
		}
		out = append(out, rules.Run{Name: rules.WellMixed, History: h})
	}
	return out, nil
}

// drift makes, once they are asked for, the runs of a product whose steps are taken to a side as far as its plan leaves it open, with the further runs
// that are due; none where nothing is left open. Sides to which the plan leaves the same open share them.
func drift(p *workbook.Product, usual *model.History, o model.Options) func(model.Drift) ([]rules.Run, error) {
	type taken struct {
		steps []model.Step
		runs  []rules.Run
		err   error
	}
	var before []taken
	return func(to model.Drift) (runs []rules.Run, err error) {
		steps, open := model.Drifted(&p.Product, p.Steps, usual, to)
		if !open {
			return nil, nil
		}
		if i := slices.IndexFunc(before, func(b taken) bool { return reflect.DeepEqual(b.steps, steps) }); i >= 0 {
			return before[i].runs, before[i].err
		}
		defer func() { before = append(before, taken{steps, runs, err}) }()
		h, err := model.Solve(p.Product, steps, o)
		if err != nil {
			return nil, err
		}
		q := *p
		q.Steps = steps
		more, err := further(&q, h, o)
		return append([]rules.Run{{History: h}}, more...), err
	}
}

// calculate makes everything that a product's documents show.
func (r *runner) calculate(p *workbook.Product) (*report.Product, error) {
	if r.alone != nil {
		return r.alone, nil
	}
	out, err := r.judged(p)
	if err != nil {
		return nil, err
	}
	out.Readings = p.Readings()
	for _, f := range out.Judgement.Findings {
		for _, at := range f.Cells {
			if from := r.plan.Locate(cell.Error{At: at}).From; from != "" {
				if out.From == nil {
					out.From = map[cell.Ref]string{}
				}
				out.From[at] = from
			}
		}
	}
	for i, e := range out.History.Warnings {
		out.History.Warnings[i] = p.AsTyped(r.plan.Locate(e))
	}
	var media []*medium
	out.Deviation, media = r.deviate(p, out)
	r.measure(p, out, media)
	out.Samples = out.History.Sample(r.head.EveryS)
	out.Lever = r.lever(p, out)
	return out, nil
}
