package rules

import (
	"strings"
	"testing"

	"slowpoint/model"
)

// baked is a block baked for so long.
func baked(t *testing.T, dry bool, altitudeM, thicknessM, film, ovenC, durationS float64) *model.History {
	t.Helper()
	h, err := model.Solve(model.Product{Name: "P", Shape: model.Slab, Size: model.Size{ThicknessM: thicknessM}, StartC: 8,
		Food: &model.Material{Name: "block", Source: "invented", Waterless: dry, Flow: model.FlowsNo,
			Props: func(float64) model.Properties { return model.Properties{KWmK: 0.5, RhoKgM3: 1050, CJkgK: 3600} }}},
		[]model.Step{{Name: "oven", Stage: model.Cook, DurationS: durationS, AltitudeM: altitudeM,
			Exposure: model.Exposure{Surface: model.Film, FilmW: &film, Medium: model.Course{TimesS: []float64{0}, C: []float64{ovenC}}}}}, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return h
}

// TestHotterThanBoiling: what a limit on heat counts of food that holds water ends five kelvin above the boiling point of water: a limit that only hotter food
// meets cannot be told, and one that is met all the same has the room that is left. Food without water, and limits on cold, are judged as calculated.
func TestHotterThanBoiling(t *testing.T) {
	const plateauK = 5
	solve := func(dry bool, altitudeM float64) *model.History { return baked(t, dry, altitudeM, 0.02, 60, 190, 3600) }
	all := Applies{All: true}
	sterile := Limit{Name: "L", Kind: Lethality, ReferenceC: c(121.1), ZK: c(10), TimeS: min_(3), Applies: all, Stages: st(model.Cook)}
	warm := Limit{Name: "L", Kind: Hold, FromC: c(75), TimeS: c(0), Counting: Total, Applies: all, Stages: st(model.Cook)}
	cold := Limit{Name: "L", Kind: StayBelow, ToC: c(400), Applies: all, Stages: st(model.Cook)}
	for _, x := range []struct {
		name      string
		limit     Limit
		dry       bool
		altitudeM float64
		verdict   Verdict
		says      string // of the finding and its notes; "" nothing of boiling
	}{
		{"lethality by hotter food", sterile, false, 0, CannotTell, "hotter than 105 °C"},
		{"without water", sterile, true, 0, Met, ""},
		{"met below it too", warm, false, 0, Met, "Temperatures above 105 °C"},
		{"in the mountains", warm, false, 2000, Met, "Temperatures above 98."},
		{"a limit on cold", cold, false, 0, Met, ""},
	} {
		f := Find([]Limit{x.limit}, Subject{Product: "P", History: solve(x.dry, x.altitudeM)})[0]
		told := f.Why + strings.Join(f.Notes, " ")
		if f.Verdict != x.verdict || !strings.Contains(told, x.says) || (x.says == "") == strings.Contains(told, "boils off") {
			t.Errorf("%s: %v, %s", x.name, f.Verdict, told)
		}
	}
	h := solve(false, 0)
	kills := Limit{Name: "L", Kind: Lethality, ReferenceC: c(70), ZK: c(7.5), TimeS: min_(2), Applies: all, Stages: st(model.Cook)}
	if f, g := Find([]Limit{kills}, Subject{Product: "P", History: h})[0], judgeOne(&kills, newCourses(h.WhileItBoils())); *f.Value < 1e6**g.Value || *f.MarginS != *g.MarginS || *f.MarginK != *g.MarginK {
		t.Errorf("lethality %g min with room of %g s and %g K; counted to boiling %g min, %g s, %g K", *f.Value, *f.MarginS, *f.MarginK, *g.Value, *g.MarginS, *g.MarginK)
	}
	most := h.At(model.Place{UpM: 0.01}, 3600)
	f := Find([]Limit{warm}, Subject{Product: "P", History: h})[0]
	if least := model.BoilsAtMostC(0) - 75; most < 150 || *f.MarginK > least+1e-9 || *f.MarginK < least-h.ErrorK-0.01 {
		t.Errorf("room %g K, want %g: the centre is at %g °C", *f.MarginK, least, most)
	}
	if got := model.BoilsAtMostC(0); got < 100+plateauK-0.1 || got > 100+plateauK {
		t.Errorf("%g °C at the sea", got)
	}
}

// TestCountsBelow: where a limit is not judged again by what boiling leaves, judging it again says the same.
func TestCountsBelow(t *testing.T) {
	all, spared := Applies{All: true}, 0
	for i, film := range []float64{20, 60} {
		for _, thicknessM := range []float64{0.01, 0.03, 0.06} {
			for _, oven := range []float64{110, 160, 260} {
				h := baked(t, false, 1500*float64(i), thicknessM, film, oven, 2400)
				boils := h.WhileItBoils()
				if boils == nil {
					continue
				}
				for _, l := range []Limit{
					{Name: "hold", Kind: Hold, FromC: c(75), TimeS: c(120), Counting: Continuous},
					{Name: "hot", Kind: Hold, FromC: c(98), TimeS: c(0), Counting: Total},
					{Name: "table", Kind: HoldTable, Table: celsiusRows(60, 45, 70, 2, 80, 0.1), Counting: Continuous},
					{Name: "above", Kind: StayAbove, FromC: c(5)},
					{Name: "end", Kind: ByTheEnd, FromC: c(60), TimeS: c(2400), Clock: Clock{AtC: c(20)}},
					{Name: "hotter rows", Kind: HoldTable, Table: celsiusRows(90, 60, 130, 0.1), Counting: Continuous},
					{Name: "within", Kind: HeatWithin, FromC: c(108), ToC: c(112), TimeS: min_(30), Clock: Clock{AtC: c(108), Crossing: true}},
					{Name: "lethality", Kind: Lethality, ReferenceC: c(121.1), ZK: c(10), TimeS: min_(3)},
				} {
					l.Applies, l.Stages = all, st(model.Cook)
					f := judgeOne(&l, newCourses(h))
					if f.Verdict != Met || !l.countsBelow(&f, h) {
						continue
					}
					spared++
					if g := judgeOne(&l, newCourses(boils)); !f.Same(&g) {
						t.Errorf("%s, %g °C on %g mm: %v, %g K, counted to boiling %v, %g K", l.Name, oven, 1000*thicknessM, f.Verdict, *f.MarginK, g.Verdict, *g.MarginK)
					}
				}
			}
		}
	}
	if spared < 13 {
		t.Errorf("only %d findings were spared", spared)
	}
	record := &model.History{Recorded: true, Spans: []model.Span{{EndS: 60}}} // beside no step of a plan
	if l := (Limit{Kind: Hold, FromC: c(75)}); !l.countsBelow(&Finding{MarginK: c(60)}, record) {
		t.Error("a record is counted to boiling")
	}
}
