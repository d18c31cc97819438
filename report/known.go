package report

import (
	"math"
	"slices"
	"sort"

	"slowpoint/model"
)

// knownRows is how many cases with a known answer stand in a product's own report.
const knownRows = 8

// knownAnswers says in a product's report how this program solved problems with a known answer, and shows those that come nearest
// to the product. The whole table stands in the overview of the plan.
func (x *sheet) knownAnswers() {
	d, h := x.doc, x.head
	d.heading(say("known title"), 1, 25)
	if len(h.Known) == 0 {
		d.text(say("known none"))
		return
	}
	near := closest(h.Known, &x.p.Product, x.p.Steps)
	d.text(h.knownSentence() + x.nearSentence(near))
	d.knownTable(near)
}

// knownSentence counts the cases and tells the largest deviation in shares of its allowance, rounded up.
func (h *Head) knownSentence() string {
	good, worst, share := 0, "", 0.0
	for i := range h.Known {
		k := &h.Known[i]
		good += btoi(k.OK)
		if s := math.Abs(k.Got-k.Expected) / k.Allowance; s > share || worst == "" {
			worst, share = k.Name, s
		}
	}
	if good < len(h.Known) {
		return say("known outside", h.Version, counted(len(h.Known), "known problems"), len(h.Known)-good)
	}
	return say("known all", h.Version, counted(len(h.Known), "known problems"), plain(100*share, 0, up), worst)
}

// nearSentence says which cases are shown and where the others stand.
func (x *sheet) nearSentence(near []KnownAnswer) string {
	shape := x.p.Product.Shape
	switch {
	case shape == nil || solvedAs(shape) == nil || !slices.ContainsFunc(near, func(k KnownAnswer) bool { return k.Shape == solvedAs(shape) }):
		return say("known no shape") + say("known rest")
	case solvedAs(shape) != shape:
		return say("known near kin", counted(len(near), "known cases"), solvedAs(shape).Name) + say("known rest")
	}
	return say("known near", counted(len(near), "known cases"), shape.Name) + say("known rest")
}

// solvedAs is the shape among the cases whose ways a shape shares: a bar is a brick of endless length. nil: none is needed.
func solvedAs(s *model.Shape) *model.Shape {
	switch {
	case s.Mixed():
		return nil
	case s != nil && s.Like != nil:
		return s.Like
	}
	return s
}

// closest are the cases of a product's shape whose surroundings come nearest to its own, at most knownRows, and every case
// that is outside its allowance, in the order of the list.
func closest(ks []KnownAnswer, p *model.Product, steps []model.Step) []KnownAnswer {
	own := surroundings(steps)
	fit := map[int]int{}
	var mine []int
	for i := range ks {
		if ks[i].Shape == nil || ks[i].Shape != solvedAs(p.Shape) {
			continue
		}
		mine = append(mine, i)
		for what := range surroundings(ks[i].Steps) {
			if own[what] {
				fit[i]++
			} else {
				fit[i]--
			}
		}
	}
	sort.SliceStable(mine, func(a, b int) bool { return fit[mine[a]] > fit[mine[b]] })
	mine = mine[:min(len(mine), knownRows)]
	var out []KnownAnswer
	for i := range ks {
		if !ks[i].OK || slices.Contains(mine, i) {
			out = append(out, ks[i])
		}
	}
	return out
}

// surroundings are the traits of a chain that ask for different parts of the solution.
func surroundings(steps []model.Step) map[string]bool {
	has := map[string]bool{}
	for i := range steps {
		s := &steps[i]
		all := []*model.Exposure{&s.Exposure}
		for k := range s.Faces {
			all = append(all, &s.Faces[k].Exposure)
			has["faces"] = true
		}
		for _, e := range all {
			switch {
			case e.Surface.Fixed():
				has["held"] = true
			case !e.Surface.Insulates():
				has["film"] = true
			}
			if len(e.Medium.C) > 1 {
				has["course"] = true
			}
		}
	}
	if len(steps) > 1 {
		has["chain"] = true
	}
	return has
}

// knownTable lists cases with a known answer, each source once as a title over its cases.
func (d *doc) knownTable(ks []KnownAnswer) {
	var rows [][]string
	for i, k := range ks {
		ok := say("known bad")
		if k.OK {
			ok = say("known good")
		}
		if i == 0 || k.Source != ks[i-1].Source {
			rows = append(rows, []string{say("known source", k.Source)})
		}
		rows = append(rows, []string{k.Name, k.Amount(significant(k.Expected)), k.Amount(significant(k.Got)), "± " + k.Amount(significant(k.Allowance)), ok})
	}
	if len(rows) == 0 {
		return
	}
	d.grouped([]col{{title: say("col case"), wide: 78}, {title: say("col expected"), wide: 28}, {title: say("col got"), wide: 28},
		{title: say("col allowance"), wide: 28}, {title: say("col within"), wide: 18}}, rows, small, func(i int) bool { return i+1 < len(rows) && len(rows[i+1]) == 1 })
}
