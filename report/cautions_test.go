package report

import (
	"math"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// calm is a product that sets off as few cautions as can be: measured air, typed films, covered, far from every limit, probe named.
func calm(t *testing.T) *Product {
	t.Helper()
	step := func(name string, stage *model.Stage, c, film float64) *model.Step {
		return &model.Step{Name: name, Stage: stage, DurationS: 3600, Exposure: model.Exposure{Surface: model.MovingAir, Cover: model.TightWrap, Measured: true,
			AirMS: ptr(3.), FilmW: &film, Medium: model.Course{TimesS: []float64{0}, C: []float64{c}}}}
	}
	cook, cool := step("Oven", model.Cook, 95, 25), step("Chiller", model.Cool, 3, 21)
	p := &Product{
		Product: model.Product{Name: "Mash", Shape: model.Slab, Size: model.Size{ThicknessM: 0.04}, StartC: 8,
			Food: &model.Material{Name: "mash", Source: "an invented source", FreezingC: ptr(-1.)}},
		Steps:   []model.Step{*cook, *cool},
		Samples: model.Samples{TimesS: []float64{0, 3600, 7200}, Coldest: []float64{8, 70, 5}, Hottest: []float64{8, 88, 20}},
		Judgement: rules.Judgement{Verdict: rules.Met, Findings: []rules.Finding{{Level: "must", Verdict: rules.Met, MarginK: ptr(7.), MarginS: ptr(1900.), Required: ptr(120.), Unit: "min",
			Limit: &rules.Limit{At: cell.Ref{Sheet: "Limits", Row: 2}, Name: "Core", Code: "A code", Clause: "3", Edition: "2020"}}}},
	}
	film := func(w float64) []model.FilmUsed { return []model.FilmUsed{{FilmW: w, TotalW: w, Typed: true}} }
	p.History = &model.History{ErrorK: 0.003, Points: []model.Point{{Name: "centre"}, {Name: "probe", Place: model.Place{UpM: 0.005}}},
		Spans: []model.Span{{Step: cook, EndS: 3600, Films: film(25)}, {Step: cool, StartS: 3600, EndS: 7200, Films: film(21)}}}
	return p
}

func TestCautions(t *testing.T) {
	always := "idealised shape, cooked food shrinks, start assumed uniform"
	for _, c := range []struct {
		name   string
		change func(*Head, *Product)
		want   string // the keys in their order
		words  string // what one of the texts says
	}{
		{"nothing special", func(*Head, *Product) {}, always, "an ideal slab"},
		{"stirred has no shape and no uniform start to assume", func(_ *Head, p *Product) { p.Product.Shape = model.Stirred }, "", ""},
		{"1.9 K of room", func(_ *Head, p *Product) { p.Judgement.Findings[0].MarginK = ptr(1.9) }, "thin margin, " + always, "Core leaves less than 2.0 °C (3.6 °F)"},
		{"2.1 K of room", func(_ *Head, p *Product) { p.Judgement.Findings[0].MarginK = ptr(2.1) }, always, ""},
		{"11 of 120 min of room", func(_ *Head, p *Product) { p.Judgement.Findings[0].MarginS = ptr(660.) }, "thin margin, " + always, ""},
		{"13 of 120 min of room", func(_ *Head, p *Product) { p.Judgement.Findings[0].MarginS = ptr(780.) }, always, ""},
		{"advice may be thin", func(_ *Head, p *Product) {
			p.Judgement.Findings[0].MarginK, p.Judgement.Findings[0].Level = ptr(0.5), "advice"
		}, always, ""},
		{"lacking is no margin", func(_ *Head, p *Product) {
			p.Judgement.Findings[0].MarginK, p.Judgement.Findings[0].Verdict = ptr(-0.5), rules.NotMet
		}, always, ""},
		{"error as large as the margin", func(_ *Head, p *Product) { p.History.ErrorK = 7.5 }, "resolution coarser than margin, " + always, "7.5 °C (13.5 °F)"},
		{"clause missing", func(_ *Head, p *Product) { p.Judgement.Findings[0].Limit.Clause = " " }, "limit without citation, " + always, "entered for: Core"},
		{"clause missing where the limit does not apply", func(_ *Head, p *Product) {
			p.Judgement.Findings[0].Limit.Clause, p.Judgement.Findings[0].Verdict = "", rules.NotApplicable
		}, always, ""},
		{"until not reached", func(_ *Head, p *Product) { p.History.Spans[0].Reached = ptr(false) }, "step did not reach its temperature, " + always, "longest duration: Oven"},
		{"until reached", func(_ *Head, p *Product) { p.History.Spans[1].Reached = ptr(true) }, "step ended by the model, " + always, "temperature: Chiller"},
		{"set-point", func(_ *Head, p *Product) { p.History.Spans[1].Step.Measured = false }, "medium is a set-point, " + always, "temperature: Chiller"},
		{"set-point on a face", func(_ *Head, p *Product) {
			p.History.Spans[1].Step.Faces = []model.FaceExposure{{Face: model.Top, Exposure: model.Exposure{Surface: model.Held, Medium: model.Course{TimesS: []float64{0}, C: []float64{2}}}}}
		}, "medium is a set-point, " + always, ""},
		{"film from a correlation", func(_ *Head, p *Product) { p.History.Spans[0].Films[0].Typed = false }, "film coefficient assumed, " + always, "correlation: Oven"},
		{"a held surface has no film to assume", func(_ *Head, p *Product) { p.History.Spans[0].Films[0] = model.FilmUsed{FilmW: math.Inf(1)} }, always, ""},
		{"water bath without a typed film", func(_ *Head, p *Product) {
			s := p.History.Spans[0].Step
			s.Surface, s.FilmW = model.WaterBath, nil
		}, "water film taken low, " + always, "a few tens"},
		{"water bath with a typed film", func(_ *Head, p *Product) { p.History.Spans[0].Step.Surface = model.WaterBath }, always, ""},
		{"open in air", func(_ *Head, p *Product) { p.History.Spans[1].Step.Cover = nil }, "evaporation left out, " + always, "left out: Chiller"},
		{"rest after a cook", func(_ *Head, p *Product) { p.History.Spans[1].Step.Stage = model.Rest }, "carry-over without evaporation, " + always, "step Chiller"},
		{"rest with a wet surface", func(_ *Head, p *Product) {
			p.History.Spans[1].Step.Stage, p.History.Spans[1].Step.Wet = model.Rest, ptr(true)
		}, always, ""},
		{"surface above 100 °C", func(_ *Head, p *Product) { p.Samples.Hottest[1] = 100.4 }, "moist surface above boiling, " + always, "up to 100.4 °C"},
		{"medium raised", func(_ *Head, p *Product) {
			p.History.Spans[1].MediumFromC, p.History.Spans[1].MediumToC = ptr(-20.), ptr(-1.)
		}, "chill medium raised to the freezing point, " + always, "are bounds"},
		{"below the freezing point", func(_ *Head, p *Product) { p.Samples.Coldest[2] = -1.2 }, "crossing freezing, " + always, "−1.2 °C"},
		{"above the freezing point, below 0 °C", func(_ *Head, p *Product) { p.Samples.Coldest[2] = -0.5 }, always, ""},
		{"freezing that is calculated", func(_ *Head, p *Product) {
			p.Samples.Coldest[2], p.Product.Food.EnthalpyJkg = -18, func(c float64) float64 { return 3000 * c }
		}, "freezing calculated, " + always, "supercooling is left out"},
		{"layers, the first two without a gap", func(_ *Head, p *Product) {
			m := p.Product.Food
			p.Product.Shape, p.Product.Food = model.LayeredSlab, nil
			p.Product.Layers = []model.Layer{{Food: m, ThicknessM: 0.01}, {Food: m, ThicknessM: 0.02, BelowM2KW: 0.004}, {Food: m, ThicknessM: 0.01}}
		}, "idealised shape, layers touch perfectly, cooked food shrinks, start assumed uniform", "fast side: 1 and 2."},
		{"nothing is cooked", func(_ *Head, p *Product) { p.History.Spans[0].Step.Stage = model.HoldHot }, "idealised shape, start assumed uniform", ""},
		{"food without water", func(_ *Head, p *Product) { p.Product.Food.Waterless = true }, "idealised shape, start assumed uniform", ""},
		{"no freezing point known, below 0 °C", func(_ *Head, p *Product) { p.Samples.Coldest[2], p.Product.Food.FreezingC = -0.5, nil }, "crossing freezing, " + always, ""},
		{"composed, with a second run", func(_ *Head, p *Product) {
			p.Product.Food.Composed, p.Further = true, []rules.Run{{Name: rules.LowConductivity, History: p.History}}
		}, "properties from composition, conductivity scatter, " + always, "±15 %"},
		{"composed, with much fat", func(_ *Head, p *Product) {
			p.Product.Food.Composed, p.Product.Food.FatPc = true, 33.31
			p.Product.Food.Props = func(float64) model.Properties { return model.Properties{CJkgK: 2700} }
		}, "properties from composition, fat that melts, " + always, "The food mash holds 33 % of fat, which takes 33 to 60 kJ"},
		{"composed, with much fat that stays melted", func(_ *Head, p *Product) {
			p.Product.Food.Composed, p.Product.Food.FatPc = true, 33.31
			p.Samples.Coldest = []float64{58, 70, 36}
		}, "properties from composition, " + always, ""},
		{"composed, with 9 % of fat", func(_ *Head, p *Product) { p.Product.Food.Composed, p.Product.Food.FatPc = true, 9 }, "properties from composition, " + always, ""},
		{"beyond boiling throughout", func(_ *Head, p *Product) { p.History.Boils = true }, "boiling throughout, " + always, "hotter than boiling water"},
		{"beyond the properties", func(_ *Head, p *Product) { p.History.Beyond = true }, "beyond the properties, " + always, "−40 to 150 °C"},
		{"a warning of something else", func(_ *Head, p *Product) { p.History.Warnings = cell.Errors{{Msg: "is over at once"}} }, always, ""},
		{"thick food", func(_ *Head, p *Product) {
			p.Further = []rules.Run{{Name: rules.WellMixed, History: p.History}}
		}, "thick food may flow, " + always, "as well mixed"},
		{"no probe named", func(_ *Head, p *Product) { p.History.Points = p.History.Points[:1] }, always + ", probe place unknown", ""},
		{"date order by hand", func(h *Head, _ *Product) { h.Items = []Item{{Item: "Date order", Value: "day month year"}} }, always + ", dates set by hand", "day month year"},
		{"carried by a finding", func(_ *Head, p *Product) {
			p.Judgement.Findings[0].Cautions = []string{"slow come-up lethality", "slow come-up lethality", "a new one"}
		}, always + ", slow come-up lethality, a new one", "More than a tenth"},
		{"carried by a film", func(_ *Head, p *Product) { p.History.Spans[0].Films[0].Caution = "published for dry air only" }, always + ", published for dry air only", "Published for dry air only."},
		{"said with the names of the steps already", func(_ *Head, p *Product) {
			p.History.Spans[0].Films[0].Typed, p.History.Spans[0].Films[0].Caution = false, "film coefficient assumed, not measured"
		}, "film coefficient assumed, " + always, "correlation: Oven"},
		{"half of it said already", func(_ *Head, p *Product) {
			p.History.Spans[0].Films[0].Typed, p.History.Spans[0].Films[0].Caution = false, "film coefficient assumed, not measured; emissivity assumed: 0.9"
		}, "film coefficient assumed, " + always + ", emissivity assumed: 0.9", "Emissivity assumed: 0.9."},
	} {
		t.Run(c.name, func(t *testing.T) {
			h, p := &Head{}, calm(t)
			c.change(h, p)
			var keys, texts []string
			for _, got := range Cautions(h, p) {
				keys, texts = append(keys, got.Key), append(texts, got.Text)
			}
			if got := strings.Join(keys, ", "); got != c.want {
				t.Errorf("cautions %q, want %q", got, c.want)
			}
			all := strings.Join(texts, "\n")
			if !strings.Contains(all, c.words) {
				t.Errorf("%q is not said in\n%s", c.words, all)
			}
			if strings.Contains(all, "%!") || strings.Contains(all, "[caution") {
				t.Errorf("a blank of a text was not filled:\n%s", all)
			}
		})
	}
}

func TestSparseRecord(t *testing.T) {
	for _, c := range []struct {
		name string
		gapS float64
		want bool
	}{{"every 5 min", 300, false}, {"a gap of 12 min", 720, true}} {
		t.Run(c.name, func(t *testing.T) {
			p := calm(t)
			spans := p.History.Spans
			rec, err := model.NewRecord(spans, []model.Trace{{Point: model.Point{Name: "centre"}, TimesS: record(c.gapS), C: make([]float64, len(record(c.gapS)))}}, nil)
			if err != nil {
				t.Fatal(err)
			}
			p.History = rec
			found := false
			for _, got := range Cautions(&Head{}, p) {
				found = found || got.Key == "record sparse or with gaps" && strings.Contains(got.Text, "12 min")
			}
			if found != c.want {
				t.Errorf("caution %v, want %v", found, c.want)
			}
		})
	}
}

// record is every five minutes for two hours, but for one gap in the middle, s.
func record(gapS float64) []float64 {
	var t []float64
	for at := 0.0; at <= 3000; at += 300 {
		t = append(t, at)
	}
	for at := 3000 + gapS; at <= 7200; at += 300 {
		t = append(t, at)
	}
	return t
}
