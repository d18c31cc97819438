// Package report turns judged histories into documents: PDF, text, workbook and JSON.
// It gets no clock and no file names from the machine: version, date and digest are passed in.
package report

import (
	"strings"
	"time"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// Head is what all documents of a run share.
type Head struct {
	Version       string
	Date          time.Time
	Plan          string // file or folder name
	SHA256        string
	Items         []Item   // the sheet Plan
	Sources       []Source // spreadsheets that the import made the plan of; none for a plan that was typed
	NotImported   int      // rows of theirs that the import could not take
	Paper         string   // A4 or Letter
	Fahrenheit    bool     // °F first
	EveryS        float64  // interval of the courses, s
	Problems      cell.Errors
	NotCalculated []NotCalculated
	LeftOut       []string      // products of the plan that this run was told to leave out
	Known         []KnownAnswer // solved by this very program, in groups of one source
	Products      int           // how many are calculated
	Judged        bool          // a record is judged, and nothing calculated
	MostPoints    int           // the largest number of points of a product, the centre counted: columns of the sheet Courses
}

// LeftOutWords says which products of the plan the run left out, as many names as fit a line or two; "" if there are none.
func (h *Head) LeftOutWords() string {
	const most = 8
	n := len(h.LeftOut)
	if n == 0 {
		return ""
	}
	names := strings.Join(h.LeftOut[:min(n, most)], ", ")
	if n > most {
		names += say("left out more", n-most)
	}
	if n == 1 {
		return say("left out one", names)
	}
	return say("left out", n, names)
}

// overviewTitle is the title of the overview: of the plan, or of that part of it which the run was about.
func (h *Head) overviewTitle() string {
	if len(h.LeftOut) > 0 {
		return say("summary title part")
	}
	return say("summary title")
}

// Item is a row of the sheet Plan.
type Item struct {
	At          cell.Ref
	Item, Value string
}

// Source is a spreadsheet that the import made the plan of.
type Source struct{ File, SHA256 string }

// NotCalculated is a product that could not be calculated.
type NotCalculated struct {
	At      cell.Ref
	Product string
	Because cell.Errors
}

// KnownAnswer is a case with a known answer, as solved on this machine.
type KnownAnswer struct {
	Name, Source  string
	Expected, Got float64
	Allowance     float64
	Unit          string
	OK            bool
	Shape         *model.Shape // what was solved; nil where the case is about properties alone
	Steps         []model.Step // its surroundings
}

// Amount writes a number of the case with its unit; a pure number has none.
func (k *KnownAnswer) Amount(number string) string {
	if k.Unit == "-" {
		return number
	}
	return number + " " + k.Unit
}

// Product is one product with everything that its documents show.
type Product struct {
	Product                                     model.Product
	Steps                                       []model.Step
	Family, RecipeVersion, Batch, Process, Note string
	Readings                                    []cell.Reading
	History                                     *model.History
	Further                                     []rules.Run   // further runs; none if none was due
	Samples                                     model.Samples // every EveryS and at each change of step
	Judgement                                   rules.Judgement
	Worst                                       []WorstCase         // how each finding's limit fares between the ends of what varies; none if nothing varies
	atWorst                                     []worstRun          // the runs of Worst
	From                                        map[cell.Ref]string // where the cells of the findings come from, as that of Readings; nil if nothing is known
	Measured                                    []Measured          // records of the product; none: nothing was measured
	Deviation                                   *Deviation          // the prediction with surroundings as they were recorded; nil: none were
	gaps                                        [][2]float64        // of a record, s from the start of the chain: nothing is drawn there
	predicted                                   *model.Trace        // of a record: the prediction at its place, for the chart
	moved                                       string              // how the slowest place moves, once it was asked for
	Lever                                       string              // the biggest lever in one sentence, for the page of the operator; "" if none was looked for
}

// run gives a run by its name, "" for the usual one; nil if there is none of that name.
func (p *Product) run(name string) *model.History {
	if name == "" {
		return p.History
	}
	for _, r := range p.Further {
		if r.Name == name {
			return r.History
		}
	}
	for i := range p.atWorst {
		if p.atWorst[i].name == name {
			return p.atWorst[i].history
		}
	}
	return nil
}

// runOf gives the run that a finding belongs to.
func (p *Product) runOf(f *rules.Finding) *model.History {
	if h := p.run(f.Run); h != nil {
		return h
	}
	return p.History
}

// nameOf gives the name of a run; "" for the usual one.
func (p *Product) nameOf(h *model.History) string {
	for _, r := range p.Further {
		if r.History == h {
			return r.Name
		}
	}
	for i := range p.atWorst {
		if p.atWorst[i].history == h {
			return p.atWorst[i].name
		}
	}
	return ""
}

// runWords names a run in words. The usual one has no name ("") unless there is a choice to be told (always).
func (p *Product) runWords(name string, always bool) string {
	switch {
	case name == "" && p.run(rules.WellMixed) != nil:
		return say("run conducting")
	case name == "" && !always:
		return ""
	case name == "":
		return say("run usual")
	}
	if _, ok := worstOf(name); ok {
		return say("run worst")
	}
	return say("run " + name)
}
