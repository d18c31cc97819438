package main

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"slowpoint/cmd/slowpoint/intake"
	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
	"slowpoint/report"
	"slowpoint/rules"
)

// compareSchema names the form of compare.json.
const compareSchema = "slowpoint/compare/1"

// compareTimes is at how many instants of a step the slowest places of two plans are compared; they lie closer at its beginning.
const compareTimes = 200

// Margins that differ by less are one: a tenth of what is printed, K and s.
const tieMarginK, tieMarginS = 0.01, 1.0

func compareCommand(files *shelf) *cobra.Command {
	var out, date string
	cmd := &cobra.Command{
		Use: "compare OLD NEW", Short: "Calculate two plans and tell what changed: inputs, verdicts, margins, and where the new one is slower",
		Long: `Compare pairs the products and limits of two plans by their names. It tells every input that changed with both cells, products and
limits that are new or gone, the verdicts and margins side by side, and for each step whether the new product heats or cools more slowly
at its slowest place: the coldest place in steps that heat and the hottest in cool and freeze, at the same time from the start of the step.

Exit codes: 0 nothing got worse; 1 a verdict, a margin or a course got worse, a limit is gone, or something new is not met; 2 one of the
plans, or part of it, could not be used; 3 the results could not be written, or a fault of the program.`,
		Example: "  slowpoint compare last-year.xlsx plan.xlsx", Args: cobra.ExactArgs(2),
		RunE: func(cmd *cobra.Command, args []string) error {
			c, head, err := comparePlans(cmd.ErrOrStderr(), args[0], args[1], date)
			if err != nil {
				return err
			}
			c.tell(cmd.OutOrStdout())
			if out != "" {
				if err := files.makeFolder(out); err != nil {
					return &failure{exitFault, err}
				}
				path := filepath.Join(out, "compare.json")
				files.expect(path)
				c.Date = head.Date.Format("2006-01-02")
				if err := files.writeWhole(path, c.write); err != nil {
					return &failure{exitFault, err}
				}
				fmt.Fprintf(cmd.OutOrStdout(), "Results in %s\n", out)
			}
			switch {
			case c.partial:
				return &failure{code: exitInput}
			case len(c.Worse) > 0:
				return &failure{code: exitNotMet}
			}
			return nil
		},
	}
	cmd.Flags().StringVar(&out, "out", "", "write compare.json into `FOLDER`")
	cmd.Flags().StringVar(&date, "date", "", "`DATE` in compare.json, as 2026-01-31 (default today)")
	return cmd
}

// The parts of compare.json. A number that does not exist is null.
type (
	comparison struct {
		Schema   string          `json:"schema"`
		Version  string          `json:"version"`
		Date     string          `json:"date"`
		Old      comparedPlan    `json:"old"`
		New      comparedPlan    `json:"new"`
		Inputs   []comparedInput `json:"inputs"`
		Products []*compared     `json:"products"`
		Worse    []string        `json:"worse"` // in sentences
		partial  bool            // part of a plan could not be used
		head     *report.Head    // of the new plan: how temperatures are shown
	}
	comparedPlan struct {
		Name   string `json:"name"`
		SHA256 string `json:"sha256"`
	}
	comparedInput struct {
		Of   string `json:"of"`
		What string `json:"what"`
		Old  string `json:"old"`
		New  string `json:"new"`
		Was  string `json:"old_cell"`
		Is   string `json:"new_cell"`
	}
	compared struct {
		Product string           `json:"product"`
		State   string           `json:"state"` // both, new, gone
		Old     string           `json:"old_verdict"`
		New     string           `json:"new_verdict"`
		Limits  []*comparedLimit `json:"limits"`
		Steps   []*comparedStep  `json:"steps"`
	}
	comparedLimit struct {
		Limit      string   `json:"limit"`
		Level      string   `json:"level"`
		State      string   `json:"state"` // both, new, gone
		Old        string   `json:"old_verdict"`
		New        string   `json:"new_verdict"`
		OldMarginK *float64 `json:"old_margin_K"`
		NewMarginK *float64 `json:"new_margin_K"`
		OldMarginS *float64 `json:"old_margin_s"`
		NewMarginS *float64 `json:"new_margin_s"`
		was, is    string   // verdict and room in words
	}
	comparedStep struct {
		Step    string  `json:"step"`
		Place   string  `json:"place"`  // coldest or hottest
		Verdict string  `json:"slower"` // no, yes, cannot tell
		LagK    float64 `json:"largest_lag_K"`
		BehindK float64 `json:"lag_at_start_K"` // what it was behind as the step began; negative: ahead
		AtS     float64 `json:"at_s"`           // from the start of the step
		ErrorK  float64 `json:"error_K"`
		UpToS   float64 `json:"up_to_s"` // the shorter of the two durations
		Gone    bool    `json:"gone"`    // a step of the old plan alone
	}
)

// asked tells whether a changed input is part of what is asked of a product: of limits, groups and tables what is judged, and what the worst
// case is made of. A limit that is new asks for more, and limits that are gone are told product by product; a new row of a group, a table or the
// spread may ask for less.
func (in *comparedInput) asked() bool {
	of := func(cell string) bool {
		sheet, _, _ := strings.Cut(strings.ReplaceAll(cell, "!", " "), " ")
		return slices.Contains([]string{"Limits", "Groups", "Tables", "Spread"}, sheet)
	}
	if !of(in.Was) && !of(in.Is) || in.What == "new" && strings.HasPrefix(in.Is, "Limits") || in.What == "gone" && strings.HasPrefix(in.Was, "Limits") {
		return false
	}
	return !slices.ContainsFunc([]string{"Hazard", "Status", "Code", "Clause", "Edition", "Issued by", "Note", "Basis"}, func(column string) bool {
		return in.What == column || strings.HasSuffix(in.What, ": "+column)
	})
}

// words says what changed.
func (in *comparedInput) words() string {
	s := in.Of + ": " + in.What
	if in.Old+in.New != "" {
		s += " " + blankWord(in.Old) + " → " + blankWord(in.New)
	}
	return s
}

// judgedPlan is a plan with its products as they were judged, by name.
type judgedPlan struct {
	plan *workbook.Plan
	head *report.Head
	by   map[string]*report.Product
}

func judgePlan(w io.Writer, name, date string) (*judgedPlan, error) {
	plan, err := workbook.Read(name)
	if err != nil {
		return nil, &failure{exitInput, err}
	}
	head, err := headOf(plan, &checkOptions{every: "60s", date: date})
	if err != nil {
		return nil, err
	}
	if len(plan.Products) == 0 {
		tellProblems(w, plan.Problems)
		return nil, &failure{exitInput, fmt.Errorf("%s has no product to calculate", name)}
	}
	if plan.Problems.Faults() > 0 {
		fmt.Fprintf(w, "%s:\n", name)
		tellProblems(w, plan.Problems)
	}
	j := &judgedPlan{plan: plan, head: head, by: map[string]*report.Product{}}
	r := &runner{plan: plan, head: head, options: &checkOptions{noPDF: true}, names: map[string]string{}, progress: progress(w, len(plan.Products))}
	err = r.each(true, func(d *done) error {
		j.by[workbook.Key(d.name)] = d.product
		return nil
	})
	if err != nil {
		return nil, &failure{exitFault, err}
	}
	for _, n := range r.refused {
		fmt.Fprintf(w, "%s: %s is not calculated: %s\n", name, n.Product, firstFault(n.Because))
	}
	head.NotCalculated = append(head.NotCalculated, r.refused...)
	return j, nil
}

// comparePlans is the command compare up to the results.
func comparePlans(w io.Writer, old, now, date string) (*comparison, *report.Head, error) {
	a, err := judgePlan(w, old, date)
	if err != nil {
		return nil, nil, err
	}
	b, err := judgePlan(w, now, date)
	if err != nil {
		return nil, nil, err
	}
	c := &comparison{head: b.head, Schema: compareSchema, Version: version, Old: comparedPlan{a.plan.Name, a.plan.SHA256}, New: comparedPlan{b.plan.Name, b.plan.SHA256},
		Inputs: []comparedInput{}, Products: []*compared{}, Worse: []string{}}
	for _, j := range []*judgedPlan{a, b} {
		c.partial = c.partial || j.plan.Problems.Faults() > 0 || len(j.head.NotCalculated) > 0 || j.plan.NotImported > 0
	}
	changes, err := intake.Between(old, now)
	if err != nil {
		return nil, nil, &failure{exitInput, err}
	}
	for _, ch := range changes {
		in := comparedInput{ch.Product, ch.What, ch.Before, ch.Now, ch.Was, ch.Cell}
		c.Inputs = append(c.Inputs, in)
		if in.asked() {
			c.worse("what is asked changed, so that verdicts and margins do not compare: %s", in.words())
		}
	}
	for i := range b.plan.Products {
		p := &b.plan.Products[i]
		x, was := b.by[workbook.Key(p.Name)], a.by[workbook.Key(p.Name)]
		switch {
		case x == nil: // told below
		case was == nil && a.refused(p.Name):
			c.Products = append(c.Products, uncompared(p.Name, notCalculated, x.Judgement.Verdict.String()))
			if x.Judgement.Verdict != rules.Met {
				c.worse("%s: %s → %s", p.Name, notCalculated, x.Judgement.Verdict)
			}
		default:
			c.product(was, x)
		}
	}
	for i := range a.plan.Products {
		name := a.plan.Products[i].Name
		x := a.by[workbook.Key(name)]
		switch {
		case x == nil || b.by[workbook.Key(name)] != nil:
		case b.refused(name):
			c.Products = append(c.Products, uncompared(name, x.Judgement.Verdict.String(), notCalculated))
			c.worse("%s: %s → %s", name, x.Judgement.Verdict, notCalculated)
		default:
			gone := uncompared(name, x.Judgement.Verdict.String(), "")
			gone.State = "gone"
			c.Products = append(c.Products, gone)
		}
	}
	return c, b.head, nil
}

func (c *comparison) worse(format string, args ...any) {
	c.Worse = append(c.Worse, fmt.Sprintf(format, args...))
}

// notCalculated stands for the verdict of a product that is in a plan and cannot be calculated.
const notCalculated = "not calculated"

// refused tells whether a product of the plan could not be calculated.
func (j *judgedPlan) refused(name string) bool {
	return slices.ContainsFunc(j.head.NotCalculated, func(n report.NotCalculated) bool { return sameName(n.Product, name) })
}

// uncompared is a product with a verdict on one side only.
func uncompared(name, old, now string) *compared {
	return &compared{Product: name, State: "both", Old: old, New: now, Limits: []*comparedLimit{}, Steps: []*comparedStep{}}
}

// product compares one product with what it was; old is nil for a new one.
func (c *comparison) product(old, now *report.Product) {
	name := now.Product.Name
	out := &compared{Product: name, State: "both", New: now.Judgement.Verdict.String(), Limits: []*comparedLimit{}, Steps: []*comparedStep{}}
	c.Products = append(c.Products, out)
	if old == nil {
		out.State = "new"
		if now.Judgement.Verdict != rules.Met {
			c.worse("%s is new and %s", name, out.New)
		}
		return
	}
	out.Old = old.Judgement.Verdict.String()
	if weigh(now.Judgement.Verdict) < weigh(old.Judgement.Verdict) {
		c.worse("%s: %s → %s", name, out.Old, out.New)
	}
	find := func(p *report.Product, l string) *rules.Finding {
		for i := range p.Judgement.Findings {
			if f := &p.Judgement.Findings[i]; sameName(f.Limit.Name, l) {
				return f
			}
		}
		return nil
	}
	errK := old.History.ErrorK + now.History.ErrorK
	for i := range now.Judgement.Findings {
		g := &now.Judgement.Findings[i]
		l := &comparedLimit{Limit: g.Limit.Name, Level: g.Level, State: "both", New: g.Verdict.String(), NewMarginK: g.MarginK, NewMarginS: g.MarginS}
		out.Limits = append(out.Limits, l)
		f := find(old, g.Limit.Name)
		l.was, l.is = worded(c.head, f), worded(c.head, g)
		if f == nil {
			l.State = "new"
			if missed(g) {
				c.worse("%s: limit %q is new and %s", name, l.Limit, l.New)
			}
			continue
		}
		l.Old, l.OldMarginK, l.OldMarginS = f.Verdict.String(), f.MarginK, f.MarginS
		switch {
		case g.Verdict == rules.NotApplicable && f.Verdict != rules.NotApplicable && f.Level != "advice",
			weigh(g.Verdict) < weigh(f.Verdict) && g.Verdict != rules.NotApplicable:
			c.worse("%s: %q %s → %s", name, l.Limit, l.Old, l.New)
		case g.Verdict == rules.NotApplicable || f.Verdict == rules.NotApplicable:
		case f.MarginK != nil && g.MarginK != nil && *g.MarginK < *f.MarginK-errK-tieMarginK:
			c.worse("%s: %q has %s less room", name, l.Limit, c.head.Difference(*f.MarginK-*g.MarginK))
		case f.MarginS != nil && g.MarginS != nil && *g.MarginS < *f.MarginS-tieMarginS-max(errorS(f, errK), errorS(g, errK)):
			c.worse("%s: %q has %s less room", name, l.Limit, report.Duration(*f.MarginS-*g.MarginS))
		}
	}
	for i := range old.Judgement.Findings {
		if f := &old.Judgement.Findings[i]; find(now, f.Limit.Name) == nil {
			out.Limits = append(out.Limits, &comparedLimit{Limit: f.Limit.Name, Level: f.Level, State: "gone", Old: f.Verdict.String(), OldMarginK: f.MarginK, OldMarginS: f.MarginS, was: worded(c.head, f), is: "gone"})
			if f.Level != "advice" && f.Verdict != rules.NotApplicable {
				c.worse("%s: limit %q is gone", name, f.Limit.Name)
			}
		}
	}
	out.Steps = stepsBeside(old.History, now.History)
	for _, s := range out.Steps {
		if s.Verdict != "no" {
			c.worse("%s: %s", name, s.words(c.head))
		}
	}
}

// errorS is about what an error in temperature makes of a margin in time, s: as much of it as it makes of the margin in temperature.
func errorS(f *rules.Finding, errK float64) float64 {
	if f.MarginK == nil || *f.MarginK == 0 {
		return 0
	}
	return math.Abs(*f.MarginS / *f.MarginK) * errK
}

// stepsBeside compares the slowest places of two histories in the steps that have the same name and stage in both, in their order: the
// coldest place in steps that heat, the hottest in those that cool, at the same time from the start of the step.
func stepsBeside(a, b *model.History) []*comparedStep {
	out := []*comparedStep{}
	for i := range b.Spans {
		now := &b.Spans[i]
		heats := now.Step.Stage.Heats
		if !heats && now.Step.Stage != model.Cool && now.Step.Stage != model.Freeze {
			continue
		}
		s := besideNothing(now.Step)
		out = append(out, s)
		was := counterpart(a, now.Step)
		if was == nil {
			continue
		}
		s.UpToS, s.ErrorK = min(was.EndS-was.StartS, now.EndS-now.StartS), a.ErrorK+b.ErrorK
		from := min(max(a.ErrorFromS, b.ErrorFromS), s.UpToS)
		ta, tb := make([]float64, compareTimes), make([]float64, compareTimes)
		for k := range ta {
			share := float64(k) / (compareTimes - 1)
			t := from + (s.UpToS-from)*share*share
			ta[k], tb[k] = was.StartS+t, now.StartS+t
		}
		x, y := a.SampleAt(ta), b.SampleAt(tb)
		for k := range ta {
			lag := y.Hottest[k] - x.Hottest[k]
			if heats {
				lag = x.Coldest[k] - y.Coldest[k]
			}
			if k == 0 {
				s.BehindK = lag
			}
			if lag > s.LagK {
				s.LagK, s.AtS = lag, ta[k]-was.StartS
			}
		}
		switch {
		case s.LagK > s.ErrorK+tieMarginK:
			s.Verdict = "yes"
		case s.LagK <= tieMarginK:
			s.Verdict = "no"
		}
	}
	for i := range a.Spans {
		if st := a.Spans[i].Step; (st.Stage.Heats || st.Stage == model.Cool || st.Stage == model.Freeze) && counterpart(b, st) == nil {
			gone := besideNothing(st)
			gone.Gone = true
			out = append(out, gone)
		}
	}
	return out
}

// besideNothing is a step with nothing to compare it with.
func besideNothing(st *model.Step) *comparedStep {
	s := &comparedStep{Step: st.Name, Place: "hottest", Verdict: "cannot tell"}
	if st.Stage.Heats {
		s.Place = "coldest"
	}
	return s
}

// counterpart finds the step of a history with the name and stage of another; nil if there is none.
func counterpart(h *model.History, st *model.Step) *model.Span {
	for k := range h.Spans {
		if x := &h.Spans[k]; sameName(x.Step.Name, st.Name) && x.Step.Stage == st.Stage {
			return x
		}
	}
	return nil
}

// words says how a step compares.
func (s *comparedStep) words(h *report.Head) string {
	way := "cool"
	if s.Place == "coldest" {
		way = "heat"
	}
	switch {
	case s.Gone:
		return fmt.Sprintf("%s is gone", s.Step)
	case s.UpToS == 0:
		return fmt.Sprintf("%s has no counterpart of its name and stage", s.Step)
	case s.Verdict == "no":
		return fmt.Sprintf("%s: the %s place is nowhere slower to %s over %s (stated errors %.3f K)", s.Step, s.Place, way, report.Duration(s.UpToS), s.ErrorK)
	case s.Verdict == "yes":
		return fmt.Sprintf("%s: the %s place is slower to %s, by up to %s after %s (%s)", s.Step, s.Place, way, h.Difference(s.LagK), report.Duration(s.AtS), s.began(h))
	}
	return fmt.Sprintf("%s: whether the %s place is slower to %s cannot be told: %.3f K of %.3f K stated errors", s.Step, s.Place, way, s.LagK, s.ErrorK)
}

// began says how far behind the place was as the step began: what is behind may be so for what it brings along.
func (s *comparedStep) began(h *report.Head) string {
	switch {
	case s.BehindK > tieMarginK:
		return h.Difference(s.BehindK) + " behind as the step began"
	case s.BehindK < -tieMarginK:
		return h.Difference(-s.BehindK) + " ahead as the step began"
	}
	return "level as the step began"
}

// tell prints a comparison.
func (c *comparison) tell(w io.Writer) {
	fmt.Fprintf(w, "%s → %s: %s\n", c.Old.Name, c.New.Name, count(len(c.Inputs), "changed input"))
	for _, i := range c.Inputs {
		fmt.Fprintf(w, "  %s (%s → %s)\n", i.words(), dash(i.Was), dash(i.Is))
	}
	for _, p := range c.Products {
		fmt.Fprintf(w, "\n%s: ", p.Product)
		switch p.State {
		case "new":
			fmt.Fprintf(w, "new, %s\n", p.New)
		case "gone":
			fmt.Fprintf(w, "gone, was %s\n", p.Old)
		default:
			fmt.Fprintf(w, "%s → %s\n", p.Old, p.New)
		}
		for _, l := range p.Limits {
			fmt.Fprintf(w, "  %q (%s): %s → %s\n", l.Limit, l.Level, l.was, l.is)
		}
		for _, s := range p.Steps {
			fmt.Fprintf(w, "  %s\n", s.words(c.head))
		}
	}
	fmt.Fprintln(w)
	switch {
	case len(c.Worse) == 0 && c.partial:
		fmt.Fprintln(w, "Nothing got worse in what could be compared; part of a plan could not be used.")
	case len(c.Worse) == 0:
		fmt.Fprintln(w, "Nothing got worse.")
	default:
		fmt.Fprintf(w, "Worse: %s\n", count(len(c.Worse), "point"))
		for _, s := range c.Worse {
			fmt.Fprintf(w, "  %s\n", s)
		}
	}
	fmt.Fprintln(w, "Calculated from the inputs, not measured; your food authority decides.")
}

func blankWord(s string) string {
	if s == "" {
		return "blank"
	}
	return s
}

func dash(s string) string {
	if s == "" {
		return "–"
	}
	return s
}

// worded is a verdict with its room in words.
func worded(h *report.Head, f *rules.Finding) string {
	if f == nil {
		return "–"
	}
	if room := h.Margin(f); room != "" {
		return f.Verdict.String() + ", " + room
	}
	return f.Verdict.String()
}

// write writes compare.json.
func (c *comparison) write(w io.Writer) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	return e.Encode(c)
}
