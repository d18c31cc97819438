package model

import (
	"errors"
	"math"
	"strings"
	"testing"

	"slowpoint/model/cell"
)

func ptr[T any](x T) *T { return &x }

// plain is a product and chain that Check takes as they are; no two numbers are alike.
func plain() (Product, []Step) {
	food := &Material{At: cell.Ref{Sheet: "Foods", Row: 7}, Name: "mash", Source: "test input", Flow: FlowsNo,
		Props: func(float64) Properties { return Properties{KWmK: 0.51, RhoKgM3: 1040, CJkgK: 3600} }}
	at := func(row int) cell.Ref { return cell.Ref{Sheet: "Steps", Row: row} }
	oven := Exposure{At: at(2), Surface: Film, FilmW: ptr(27.0), Medium: Course{TimesS: []float64{0}, C: []float64{148}}}
	air := Exposure{At: at(3), Surface: MovingAir, AirMS: ptr(2.2), Medium: Course{TimesS: []float64{0}, C: []float64{3}}}
	return Product{At: cell.Ref{Sheet: "Products", Row: 2}, Name: "P", Shape: Slab, Size: Size{ThicknessM: 0.043}, Food: food, StartC: 6},
		[]Step{{Name: "bake", Stage: Cook, DurationS: 4100, Exposure: oven}, {Name: "blast", Stage: Cool, DurationS: 5300, Exposure: air}}
}

func TestCheckTakesASoundProduct(t *testing.T) {
	if found := Check(plain()); len(found) > 0 {
		t.Error(found)
	}
}

// layered makes two layers of one food of a slab.
func layered(p *Product) {
	for i, mm := range []float64{12, 31} {
		p.Layers = append(p.Layers, Layer{At: cell.Ref{Sheet: "Layers", Row: 2 + i}, Food: p.Food, ThicknessM: mm / 1000})
	}
	p.Shape, p.Food = LayeredSlab, nil
}

// A thick food is calculated as conducting; who asks for it runs it as well mixed too.
func TestCheckTakesAThickFood(t *testing.T) {
	p, steps := plain()
	p.Food.Flow = FlowsThick
	if found := Check(p, steps); len(found) > 0 {
		t.Error(found)
	}
}

// Every refusal: what is changed in a sound product, where the message must stand and what it must say.
func TestCheckRefuses(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(*Product, []Step)
		at     string
		field  string
		says   string
	}{
		{"spheroid without a diameter", func(p *Product, _ []Step) { p.Shape = Spheroid }, "Products row 2", "Diameter", "spheroid needs Diameter"},
		{"no thickness", func(p *Product, _ []Step) { p.Size.ThicknessM = 0 }, "Products row 2", "Thickness", "needs Thickness"},
		{"no food", func(p *Product, _ []Step) { p.Food = nil }, "Products row 2", "Food", "no food"},
		{"liquid", func(p *Product, _ []Step) { p.Food.Flow = FlowsYes }, "Foods row 7", "Flows", "mixes by itself"},
		{"thick liquid as a layer", func(p *Product, _ []Step) {
			p.Food.Flow = FlowsThick
			layered(p)
		}, "Foods row 7", "Flows", "may mix by itself"},
		{"liquid as a layer", func(p *Product, _ []Step) {
			p.Food.Flow = FlowsYes
			layered(p)
		}, "Foods row 7", "Flows", "mixes by itself"},
		{"no layers", func(p *Product, _ []Step) { p.Shape, p.Food = LayeredSlab, nil }, "Products row 2", "Shape", "has no layers"},
		{"a layer without a food", func(p *Product, _ []Step) {
			layered(p)
			p.Layers[1].Food = nil
		}, "Layers row 3", "Food", "no food"},
		{"a layer without a thickness", func(p *Product, _ []Step) {
			layered(p)
			p.Layers[1].ThicknessM = 0
		}, "Layers row 3", "Thickness", "above 0"},
		{"layers that start frozen", func(p *Product, _ []Step) {
			layered(p)
			p.StartC = -18
		}, "Products row 2", "Start temperature", "starts frozen"},
		{"a layer that could freeze", func(p *Product, s []Step) {
			layered(p)
			s[1].Medium.C = []float64{-4}
		}, "Steps row 3", "Temperature", "freezing point is not known"},
		{"frozen start", func(p *Product, _ []Step) { p.StartC = -18 }, "Products row 2", "Start temperature", "starts frozen"},
		{"point outside", func(p *Product, _ []Step) {
			p.Points = []Point{{At: cell.Ref{Sheet: "Points", Row: 4}, Name: "probe", Place: Place{UpM: 0.03}}}
		}, "Points row 4", "Up", "outside the food"},
		{"point outside a spheroid, though within its box", func(p *Product, _ []Step) {
			p.Shape, p.Size.ThicknessM, p.Size.DiameterM = Spheroid, 0.06, 0.04
			p.Points = []Point{{At: cell.Ref{Sheet: "Points", Row: 4}, Name: "probe", Place: Place{UpM: 0.024, AcrossM: 0.013}}}
		}, "Points row 4", "Across", "24 mm up, the spheroid reaches 12.0 mm across"},
		{"spheroid as long as a rope", func(p *Product, _ []Step) {
			p.Shape, p.Size.ThicknessM, p.Size.DiameterM = Spheroid, 0.61, 0.06
		}, "Products row 2", "Thickness", "10.2 times as long as its diameter"},
		{"spheroid as flat as a cake", func(p *Product, _ []Step) {
			p.Shape, p.Size.ThicknessM, p.Size.DiameterM = Spheroid, 0.02, 0.23
		}, "Products row 2", "Diameter", "11.5 times as wide as it is thick"},
		{"a layer in contact below nothing", func(p *Product, _ []Step) {
			layered(p)
			p.Layers[1].BelowM2KW = 0.01
		}, "Layers row 3", "Contact resistance below", "no layer below the last"},
		{"a contact that conducts more than perfectly", func(p *Product, _ []Step) {
			layered(p)
			p.Layers[0].BelowM2KW = -0.01
		}, "Layers row 2", "Contact resistance below", "0, for layers that touch perfectly, or more"},
		{"freezing stage", func(_ *Product, s []Step) { s[1].Stage = Freeze }, "Steps row 3", "Stage", "freezing and melting"},
		{"thawing stage", func(_ *Product, s []Step) { s[0].Stage = Thaw }, "Steps row 2", "Stage", "freezing and melting"},
		{"radiation beside a film that stands for everything", func(_ *Product, s []Step) { s[0].RadiatingC = ptr(170.0) }, "Steps row 2", "Radiating temperature", "still air or moving air"},
		{"emissivity beside a film that stands for everything", func(_ *Product, s []Step) { s[0].Emissivity = ptr(0.9) }, "Steps row 2", "Emissivity", "still air or moving air"},
		{"radiation in water", func(_ *Product, s []Step) {
			s[0].Surface, s[0].FilmW, s[0].Medium.C, s[0].RadiatingC = WaterBath, nil, []float64{81}, ptr(170.0)
		}, "Steps row 2", "Radiating temperature", "not in water bath"},
		{"emissivity of nothing", func(_ *Product, s []Step) { s[1].Emissivity = ptr(0.8) }, "Steps row 3", "Emissivity", "Radiating temperature"},
		{"emissivity above 1", func(_ *Product, s []Step) { s[1].RadiatingC, s[1].Emissivity = ptr(4.0), ptr(1.2) }, "Steps row 3", "Emissivity", "at most 1"},
		{"no emissivity left", func(_ *Product, s []Step) { s[1].RadiatingC, s[1].Emissivity = ptr(4.0), ptr(0.0) }, "Steps row 3", "Emissivity", "more than 0"},
		{"walls below absolute zero", func(_ *Product, s []Step) { s[1].RadiatingC = ptr(-280.0) }, "Steps row 3", "Radiating temperature", "absolute zero"},
		{"walls that could freeze the food", func(_ *Product, s []Step) { s[1].RadiatingC = ptr(-9.0) }, "Steps row 3", "Radiating temperature", "freezing point is not known"},
		{"hot walls without dry or wet", func(p *Product, s []Step) {
			p.StartC, s[0].Stage, s[0].Surface, s[0].FilmW, s[0].Medium.C, s[0].RadiatingC = 21, Reheat, StillAir, nil, []float64{19}, ptr(230.0)
		}, "Steps row 2", "Surface", "dry or wet"},
		{"humidity above all", func(_ *Product, s []Step) { s[1].RH = ptr(104.0) }, "Steps row 3", "Relative humidity", "between 0 and 100"},
		{"humidity in a course", func(_ *Product, s []Step) {
			s[1].Medium = Course{Name: "log", TimesS: []float64{0, 9000}, C: []float64{3, 2}, RH: []float64{80, -3}}
		}, "Steps row 3", "Course", "between 0 and 100"},
		{"wet beside a film that stands for everything", func(_ *Product, s []Step) { s[0].Wet = ptr(true) }, "Steps row 2", "Surface", "evaporation too"},
		{"wet in steam", func(_ *Product, s []Step) {
			s[0].Surface, s[0].FilmW, s[0].Medium.C, s[0].Wet = Steam, nil, []float64{97}, ptr(true)
		}, "Steps row 2", "Surface", "not in steam"},
		{"wet under a wrap", func(_ *Product, s []Step) { s[1].Wet, s[1].Cover = ptr(true), TightWrap }, "Steps row 3", "Surface", "under a tight wrap vapour does not get away"},
		{"wet under a lid", func(_ *Product, s []Step) { s[1].Wet, s[1].Cover, s[1].WrapM2KW = ptr(true), LooseLid, ptr(0.12) }, "Steps row 3", "Surface", "under a loose lid"},
		{"wet beneath a resistance", func(_ *Product, s []Step) { s[1].Wet, s[1].WrapM2KW = ptr(true), ptr(0.02) }, "Steps row 3", "Surface", "whose resistance is given"},
		{"wet in air that would freeze it by evaporation", func(_ *Product, s []Step) { s[1].Wet, s[1].RH = ptr(true), ptr(38.0) }, "Steps row 3", "Surface", "wet-bulb temperature, -1.1 °C"},
		{"steam with air and a film", func(_ *Product, s []Step) {
			s[0].Surface, s[0].Medium.C, s[0].RH = Steam, []float64{97}, ptr(80.0)
		}, "Steps row 2", "Film coefficient", "one of the two"},
		{"steam that holds air, of unknown humidity", func(_ *Product, s []Step) {
			s[0].Surface, s[0].FilmW, s[0].Medium.C = Steam, nil, []float64{93}
		}, "Steps row 2", "Relative humidity", "colder than boiling (100.0 °C"},
		{"water activity above 1", func(p *Product, _ []Step) { p.Food.WaterActivity = ptr(97.0) }, "Foods row 7", "Water activity", "at most 1"},
		{"loose lid", func(_ *Product, s []Step) { s[0].Cover = LooseLid }, "Steps row 2", "Wrap resistance", "0.04 m²K/W"},
		{"no film", func(_ *Product, s []Step) { s[0].FilmW = nil }, "Steps row 2", "Film coefficient", "Film coefficient is missing: film needs it"},
		{"no air speed", func(_ *Product, s []Step) { s[1].AirMS = nil }, "Steps row 3", "Air speed", "Air speed is missing: moving air needs it"},
		{"no medium", func(_ *Product, s []Step) { s[1].Medium = Course{} }, "Steps row 3", "Temperature", "needs a temperature"},
		{"short course", func(_ *Product, s []Step) {
			s[0].Medium = Course{Name: "oven log", TimesS: []float64{0, 3000}, C: []float64{90, 150}}
		}, "Steps row 2", "Course", "before its step"},
		{"hot air without dry or wet", func(_ *Product, s []Step) { s[0].Surface, s[0].AirMS = MovingAir, ptr(1.4) }, "Steps row 2", "Surface", "dry or wet"},
		{"more vapour than air can hold", func(_ *Product, s []Step) {
			s[0].Surface, s[0].FilmW, s[0].AirMS, s[0].Wet, s[0].RH, s[0].Medium.C = MovingAir, nil, ptr(2.0), ptr(true), ptr(50.0), []float64{150}
		}, "Steps row 2", "Relative humidity", "at most 21.3 %"},
		{"steam under pressure", func(_ *Product, s []Step) {
			s[0].Surface, s[0].FilmW, s[0].Medium.C = Steam, nil, []float64{121}
		}, "Steps row 2", "Temperature", "steam under pressure"},
		{"steam on a mountain", func(_ *Product, s []Step) {
			s[0].Surface, s[0].FilmW, s[0].Medium.C, s[0].AltitudeM = Steam, nil, []float64{100}, 2500
		}, "Steps row 2", "Temperature", "boils at 91"},
		{"cold steam", func(_ *Product, s []Step) {
			s[1].Surface, s[1].FilmW, s[1].Medium.C = Steam, nil, []float64{2}
		}, "Steps row 3", "Temperature", "steam heats"},
		{"boiling water that does not boil", func(_ *Product, s []Step) {
			s[1].Surface, s[1].FilmW, s[1].Medium.C = BoilingWater, nil, []float64{2}
		}, "Steps row 3", "Temperature", "boiling water is at 100.0 °C"},
		{"a water bath above boiling", func(_ *Product, s []Step) {
			s[0].Surface, s[0].FilmW, s[0].Medium.C = WaterBath, nil, []float64{104}
		}, "Steps row 2", "Temperature", "boils at 100.0"},
		{"walls hotter than any oven", func(_ *Product, s []Step) { s[1].RadiatingC = ptr(700.0) }, "Steps row 3", "Radiating temperature", "between -80 and 400"},
		{"boiling water on a mountain", func(_ *Product, s []Step) {
			s[0].Surface, s[0].Medium.C, s[0].AltitudeM = BoilingWater, []float64{100}, 1900
		}, "Steps row 2", "Temperature", "boils at 93"},
		{"cold air, freezing point unknown", func(_ *Product, s []Step) { s[1].Medium.C = []float64{-4} }, "Steps row 3", "Temperature", "freezing point is not known"},
		{"cold air in a cook", func(p *Product, s []Step) { p.Food.FreezingC, s[0].Medium.C = ptr(-1.1), []float64{-4} }, "Steps row 2", "Temperature", "could freeze"},
		{"face that the shape has not", func(_ *Product, s []Step) {
			s[0].Faces = []FaceExposure{{Ends, Exposure{At: cell.Ref{Sheet: "Faces", Row: 5}, Surface: Insulated}}}
		}, "Faces row 5", "Face", "no face"},
		{"no duration", func(_ *Product, s []Step) { s[0].DurationS = math.NaN() }, "Steps row 2", "Duration", "above 0"},
	} {
		t.Run(c.name, func(t *testing.T) {
			p, steps := plain()
			c.change(&p, steps)
			found := Check(p, steps)
			for _, e := range found {
				if e.At.String() == c.at && e.Field == c.field && strings.Contains(e.Error(), c.says) {
					if _, err := Solve(p, steps, Options{}); err == nil {
						t.Error("Check refuses it, and Solve calculates it")
					}
					return
				}
			}
			t.Errorf("want %s, %s, …%s…; got %v", c.at, c.field, c.says, found)
		})
	}
}

// A cool chain after a cold one is not asked for dry or wet: 3 °C air after 2 °C air, and 21 °C air after an oven.
func TestCheckAsksDryOrWetOnlyForHeating(t *testing.T) {
	p, steps := plain()
	steps = append(steps, Step{Name: "store", Stage: Store, DurationS: 9000, Exposure: steps[1].Exposure})
	steps[2].Medium = Course{C: []float64{4}}
	if found := Check(p, steps); len(found) > 0 {
		t.Error(found)
	}
	steps[2].Medium = Course{C: []float64{22}}
	if found := Check(p, steps); found.Faults() != 1 {
		t.Errorf("air of 22 °C after air of 3 °C: %v", found)
	}
}

// A stage that is to heat the food or to keep it hot is asked in any air: evaporation cools the food beneath air that is colder than it, too.
func TestCheckAsksDryOrWetOfHotStages(t *testing.T) {
	for _, stage := range []*Stage{Cook, Rest, Cool, HoldHot, HoldCold, Store, Reheat} {
		p, steps := plain()
		p.StartC, steps = 62, steps[1:]
		steps[0].Stage, steps[0].Medium = stage, Course{C: []float64{20}}
		want := 0
		if stage.Heats {
			want = 1
		}
		if found := Check(p, steps); found.Faults() != want {
			t.Errorf("%s: %v, want %d", stage.Name, found, want)
		}
	}
}

// Air that turns out warmer than the food, which its media alone do not show, is asked about while it is solved: the last medium of the
// chill was warm, and the food is cold all the same.
func TestSolveAsksDryOrWet(t *testing.T) {
	p, steps := plain()
	p.StartC, steps = 80, steps[1:]
	steps[0].DurationS = 40000
	steps[0].Medium = Course{Name: "air", TimesS: []float64{0, 3000, 40000}, C: []float64{70, 3, 3}}
	warm := Step{Name: "warm", Stage: Rest, DurationS: 5000, Exposure: Exposure{At: cell.Ref{Sheet: "Steps", Row: 9}, Surface: StillAir, Medium: Course{C: []float64{72}}}}
	steps = append(steps, warm)
	if found := Check(p, steps); len(found) > 0 {
		t.Fatalf("the case is to be one that Check lets pass: %v", found)
	}
	var es cell.Errors
	if _, err := Solve(p, steps, Options{}); !errors.As(err, &es) || es[0].At.Row != 9 || es[0].Field != "Surface" {
		t.Errorf("%v", err)
	}
	steps[1].Wet = ptr(false)
	if _, err := Solve(p, steps, Options{}); err != nil {
		t.Error(err)
	}
}

// A chill medium below the freezing point is raised to it, said to be a bound, and every temperature is then at or above the one of the
// true medium without freezing.
func TestChillMediumIsRaised(t *testing.T) {
	p, steps := plain()
	p.Food.FreezingC = ptr(-1.3)
	steps[1].Medium = Course{Name: "air", TimesS: []float64{0, 2000, 6000}, C: []float64{9, -11, -12}}
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(h.Bound, "-12.0 °C was raised to the freezing point, -1.3 °C") || h.BoundFromS != 4100 {
		t.Errorf("bound %q from %g s", h.Bound, h.BoundFromS)
	}
	if got := h.MediumC(4100 + 6000); got != -12 {
		t.Errorf("the medium as typed reads %g °C", got)
	}
	p.Food.FreezingC = ptr(-20.0)
	low, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	a, b := h.Sample(300), low.Sample(300)
	both := h.ErrorK + low.ErrorK
	for i := range a.TimesS {
		if a.Coldest[i] < b.Coldest[i]-both || a.Hottest[i] < b.Hottest[i]-both {
			t.Fatalf("at %g s the bound is below: %g, %g", a.TimesS[i], a.Coldest[i], b.Coldest[i])
		}
	}
	if a.Coldest[len(a.Coldest)-1] < -1.3 {
		t.Error("below the freezing point")
	}
}

// A step that ends when the slowest place reaches a temperature ends at that instant, in heating by the coldest place and in
// cooling by the hottest; one that does not reach it lasts its duration and says so.
func TestUntil(t *testing.T) {
	p, steps := plain()
	steps[0].UntilC, steps[1].UntilC, steps[1].DurationS = ptr(63.0), ptr(21.0), 30000
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	s := h.Sample(60)
	at := func(t float64) int {
		for i := range s.TimesS {
			if s.TimesS[i] == t {
				return i
			}
		}
		return -1
	}
	cook, chill := at(h.Spans[0].EndS), at(h.Spans[1].EndS)
	if got := s.Coldest[cook]; math.Abs(got-63) > 1e-4 || !*h.Spans[0].Reached {
		t.Errorf("cook ends at %g °C", got)
	}
	if got := s.Hottest[chill]; math.Abs(got-21) > 1e-4 || !*h.Spans[1].Reached {
		t.Errorf("chill ends at %g °C", got)
	}
	for i, c := range s.Coldest[:cook] {
		if c > 63 {
			t.Errorf("already %g °C at %g s", c, s.TimesS[i])
		}
	}
	steps[0].UntilC = ptr(140.0)
	if h, err = Solve(p, steps, Options{}); err != nil {
		t.Fatal(err)
	}
	if *h.Spans[0].Reached || h.Spans[0].EndS != 4100 {
		t.Errorf("a goal out of reach: ended at %g s", h.Spans[0].EndS)
	}
}

// Properties from composition are taken at the mean of the coldest and hottest food of the step, what is above 100 °C counting as 100.
func TestPropertiesAtTheMeanOfTheFood(t *testing.T) {
	p, steps := plain()
	p.Food.Composed, p.Food.Waterless = true, true
	p.Food.Props = func(c float64) Properties {
		return Properties{KWmK: 0.46 + 0.0012*c, RhoKgM3: 1050 - 0.3*c, CJkgK: 3500 + 2*c}
	}
	steps[0].FilmW = ptr(170.0) // drives the surface above 100 °C
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	s := h.Sample(30)
	for i := range h.Spans {
		sp := &h.Spans[i]
		low, high := math.Inf(1), math.Inf(-1)
		for k, t := range s.TimesS {
			if t >= sp.StartS && t <= sp.EndS {
				low, high = math.Min(low, s.Coldest[k]), math.Max(high, s.Hottest[k])
			}
		}
		if i == 0 && high < 110 {
			t.Errorf("the surface reaches only %g °C: the case does not test the ceiling", high)
		}
		want := (math.Min(low, 100) + math.Min(high, 100)) / 2
		if math.Abs(sp.PropsAtC-want) > 0.6 {
			t.Errorf("step %d: properties at %.2f °C, mean of the food %.2f °C", i+1, sp.PropsAtC, want)
		}
		if sp.Props != p.Food.Props(sp.PropsAtC) {
			t.Errorf("step %d: properties %v are not those of %g °C", i+1, sp.Props, sp.PropsAtC)
		}
	}
	slow, err := Solve(p, steps, Options{ConductivityFactor: 0.9})
	if err != nil {
		t.Fatal(err)
	}
	if got := slow.Spans[1].Props.KWmK / p.Food.Props(slow.Spans[1].PropsAtC).KWmK; math.Abs(got-0.9) > 1e-12 {
		t.Errorf("conductivity factor %g", got)
	}
}

// Where a step ends early, its properties are those of the food until then.
func TestPropertiesOfAStepThatEndsEarly(t *testing.T) {
	p, steps := plain()
	p.Food.Composed = true
	p.Food.Props = func(c float64) Properties { return Properties{KWmK: 0.46 + 0.0012*c, RhoKgM3: 1050, CJkgK: 3500 + 2*c} }
	steps[0].DurationS, steps[0].UntilC = 9000, ptr(41.0)
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	s := h.Sample(10)
	low, high := math.Inf(1), math.Inf(-1)
	for k, t := range s.TimesS {
		if t <= h.Spans[0].EndS {
			low, high = math.Min(low, s.Coldest[k]), math.Max(high, s.Hottest[k])
		}
	}
	if want := (low + math.Min(high, 100)) / 2; math.Abs(h.Spans[0].PropsAtC-want) > 0.6 {
		t.Errorf("properties at %.2f °C, mean of the food until %g s: %.2f °C", h.Spans[0].PropsAtC, h.Spans[0].EndS, want)
	}
}

// Leaving points out of a logged course moves no temperature by more than it says.
func TestThinnedCourse(t *testing.T) {
	m := Course{Name: "log"}
	for i := 0; i <= 900; i++ {
		x := float64(i) * 7
		c := 3 + 11*math.Exp(-x/800)
		if x > 3500 && x < 4100 {
			c += (x - 3500) / 40 // a door
		}
		m.TimesS, m.C = append(m.TimesS, x), append(m.C, c)
	}
	thin := thinned(m, 6000)
	if len(thin.C) > len(m.C)/3 {
		t.Errorf("%d of %d points are left", len(thin.C), len(m.C))
	}
	for i, x := range m.TimesS {
		if x <= 6000 {
			if d := math.Abs(lineAt(thin.TimesS, thin.C, x) - m.C[i]); d > thinK*1.0001 {
				t.Errorf("at %g s off by %g K", x, d)
			}
		}
	}
}

// Insulated all round, nothing changes; stirred food follows the exponential of a well-mixed body.
func TestInsulatedAndStirred(t *testing.T) {
	p, steps := plain()
	steps[1].Exposure = Exposure{At: steps[1].At, Surface: Insulated}
	h, err := Solve(p, steps, Options{})
	if err != nil {
		t.Fatal(err)
	}
	s := h.Sample(100)
	var before float64
	for i, x := range s.TimesS {
		if x == 4100 {
			before = s.Mean[i]
		}
	}
	last := len(s.Mean) - 1
	if math.Abs(s.Mean[last]-before) > 1e-9 || s.Hottest[last]-s.Coldest[last] > 1 {
		t.Errorf("mean %g then %g °C, spread %g K", before, s.Mean[last], s.Hottest[last]-s.Coldest[last])
	}

	p, steps = plain()
	p.Shape, p.Size = Stirred, Size{VolumeM3: 0.021, AreaM2: 0.37}
	steps[1].Surface, steps[1].FilmW, steps[1].WrapM2KW = Film, ptr(33.0), ptr(0.013)
	if h, err = Solve(p, steps, Options{}); err != nil {
		t.Fatal(err)
	}
	heat := 0.021 * 1040 * 3600.0
	cook := 148 + (6-148)*math.Exp(-27*0.37/heat*4100)
	want := 3 + (cook-3)*math.Exp(-1/(1/33.0+0.013)*0.37/heat*2500)
	if got := h.At(Place{}, 4100+2500); math.Abs(got-want) > 1e-9 {
		t.Errorf("%g °C, exact %g", got, want)
	}
}

// A solid food taken as stirred is warned of and calculated; what flows is not, nor is a solid food as a slab.
func TestCheckWarnsOfAStirredSolid(t *testing.T) {
	for _, v := range []struct {
		name  string
		shape *Shape
		flow  *Flow
		built bool
		says  string
	}{
		{"a solid food of the plan", Stirred, FlowsNo, false, "mash is solid or set (by the answer no in the column Flows)"},
		{"a built-in solid food", Stirred, FlowsNo, true, "mash is solid or set (as a built-in food)"},
		{"thick", Stirred, FlowsThick, false, ""},
		{"a liquid", Stirred, FlowsYes, false, ""},
		{"a solid slab", Slab, FlowsNo, false, ""},
	} {
		t.Run(v.name, func(t *testing.T) {
			p, steps := plain()
			p.Shape, p.Size, p.Food.Flow = v.shape, Size{ThicknessM: 0.043, VolumeM3: 0.015, AreaM2: 0.32}, v.flow
			if v.built {
				p.Food.At = cell.Ref{}
			}
			found := Check(p, steps)
			if v.says == "" {
				if len(found) > 0 {
					t.Error(found)
				}
				return
			}
			if len(found) != 1 || found[0].Level != cell.Warning || found[0].At != p.At || found[0].Field != "Shape" || !strings.Contains(found[0].Msg, v.says) {
				t.Errorf("%v", found)
			}
			steps[0].Medium.C[0] = 97
			if _, err := Solve(p, steps, Options{}); err != nil {
				t.Error(err)
			}
		})
	}
}

// A step that ends at a temperature where the food is already does nothing, and that is said.
func TestStepThatIsOverAtOnceIsTold(t *testing.T) {
	for _, composed := range []bool{false, true} {
		p, steps := plain()
		p.Food.Composed = composed
		steps[0].UntilC = ptr(p.StartC - 2)
		h, err := Solve(p, steps, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if len(h.Warnings) != 1 || h.Warnings[0].At != steps[0].At || h.Warnings[0].Field != "Until slowest point reaches" || !strings.Contains(h.Warnings[0].Msg, "coldest place") {
			t.Errorf("%v", h.Warnings)
		}
		steps[0].UntilC = ptr(p.StartC + 2)
		if h, err = Solve(p, steps, Options{}); err != nil || len(h.Warnings) > 0 {
			t.Errorf("%v %v", h.Warnings, err)
		}
	}
}

// Fat holds nothing that freezes: it may be as cold as it likes.
func TestWaterlessFoodDoesNotFreeze(t *testing.T) {
	p, steps := plain()
	p.Food.Waterless, p.StartC = true, -15
	steps[1].Medium.C, steps[1].Stage = []float64{-22}, Freeze
	if h, err := Solve(p, steps, Options{}); err != nil || h.Bound != "" {
		t.Errorf("%v", err)
	}
	p.Food.Waterless = false
	if _, err := Solve(p, steps, Options{}); err == nil {
		t.Error("a food with water and no freezing point is frozen")
	}
}
