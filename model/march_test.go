package model

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"slowpoint/model/cell"
)

// problem is a reference problem that is marched: its inputs stand in testdata/published/solutions, with how it was solved twice.
type problem struct {
	id      string
	product Product
	steps   []Step
	points  map[string]Place
	allowK  float64
	edgeK   float64
}

func filmTo(w, c float64) Exposure {
	return Exposure{Surface: Film, FilmW: &w, Medium: Course{TimesS: []float64{0}, C: []float64{c}}}
}

// iceLaw is a food whose ice forms over a range, as formulas: below its freezing point tf, °C, the share 1 - tf/T of its latent heat, J/kg, has left,
// and its conductivity has gone as far from the unfrozen to the frozen one.
type iceLaw struct{ rho, cu, cf, latent, tf, ku, kf float64 }

// food gives the material of a law, in which highC stands as its hottest temperature, °C.
func (l iceLaw) food(name, source string, highC float64) *Material {
	return &Material{Name: name, Source: source, Composed: true, FreezingC: &l.tf, LowC: -60, HighC: highC, Waterless: true,
		Props: func(c float64) Properties {
			if c >= l.tf {
				return Properties{l.ku, l.rho, l.cu}
			}
			return Properties{l.ku + (l.kf-l.ku)*(1-l.tf/c), l.rho, l.cf - l.latent*l.tf/(c*c)}
		},
		EnthalpyJkg: func(c float64) float64 {
			if c >= l.tf {
				return l.cu * (c - l.tf)
			}
			return l.cf*(c-l.tf) - l.latent*(1-l.tf/c)
		}}
}

// freezingFood is the food of problem H: an enthalpy law that is given as a formula.
func freezingFood() *Material {
	return iceLaw{1050, 3500, 1900, 0.68 * 333500, -1.1, 0.48, 1.55}.food("test food", "input of the problem", 100)
}

// wetRadiating is the surface of problem I with its own law of mass transfer.
func wetRadiating(filmW, mediumC, radiantC, rh, km float64) Exposure {
	const emissivity, aw, latent, sigma = 0.9, 0.98, 2.4e6, 5.670374419e-8
	sat := func(c float64) float64 { return 610.94 * math.Exp(17.625*c/(c+243.04)) }
	vapour, walls := rh*sat(mediumC), radiantC+273.15
	walls *= walls
	e := filmTo(filmW, mediumC)
	e.Surface = &Surface{Name: "test surface", law: func(c, _ float64) (float64, float64) {
		k, p, x := c+273.15, sat(c), c+243.04
		return filmW*(mediumC-c) + emissivity*sigma*(walls*walls-k*k*k*k) - km*latent*(aw*p-vapour),
			-filmW - 4*emissivity*sigma*k*k*k - km*latent*aw*p*17.625*243.04/(x*x)
	}}
	return e
}

func problems() []problem {
	up := func(names ...any) map[string]Place {
		m := map[string]Place{}
		for i := 0; i < len(names); i += 2 {
			m[names[i].(string)] = Place{UpM: names[i+1].(float64)}
		}
		return m
	}
	linear := &Material{Name: "test food", Source: "input of the problem", Table: true, LowC: -50, HighC: 200, Props: func(c float64) Properties {
		return Properties{0.46 + 0.0014*c, 1000, 3700 + 1.5*c}
	}}
	constant := &Material{Name: "test food", Source: "input of the problem", Props: func(float64) Properties { return Properties{0.48, 1060, 3600} }}
	return []problem{
		{"D", Product{Name: "brick", Shape: Brick, Size: Size{ThicknessM: 0.09, WidthM: 0.18, LengthM: 0.3}, Food: linear, StartC: 5},
			[]Step{{Name: "cook", Stage: Cook, DurationS: 3600, Exposure: filmTo(25, 160)}, {Name: "rest", Stage: Rest, DurationS: 900, Exposure: filmTo(8, 22)}, {Name: "chill", Stage: Cool, DurationS: 14400, Exposure: filmTo(30, 2)}},
			map[string]Place{"centre": {}, "face_x": {AlongM: 0.15}, "face_y": {AcrossM: 0.09}, "face_z": {UpM: 0.045}, "corner": {0.045, 0.09, 0.15}, "half": {0.0225, 0.045, 0.075}}, 0.02, 0.03},
		{"H", Product{Name: "slab", Shape: Slab, Size: Size{ThicknessM: 0.05}, Food: freezingFood(), StartC: 20},
			[]Step{{Name: "freeze", Stage: Freeze, DurationS: 10800, Exposure: filmTo(40, -30)}}, up("centre", 0.0, "quarter", 0.0125, "surface", 0.025), 0.02, 0.02},
		{"I", Product{Name: "slab", Shape: Slab, Size: Size{ThicknessM: 0.03}, Food: constant, StartC: 5},
			[]Step{{Name: "humid oven", Stage: Cook, DurationS: 2700, Exposure: wetRadiating(25, 160, 170, 0.03, 1.525513e-07)},
				{Name: "rest", Stage: Rest, DurationS: 600, Exposure: wetRadiating(8, 22, 22, 0.5, 4.88164e-08)},
				{Name: "chill", Stage: Cool, DurationS: 9000, Exposure: wetRadiating(20, 2, 2, 0.85, 1.22041e-07)}}, up("centre", 0.0, "quarter", 0.0075, "surface", 0.015), 0.02, 0.02},
	}
}

// solved holds an independent solution of a problem.
type solved struct {
	Reference struct {
		Columns []string
		Rows    [][]any
	}
}

func solutionOf(t testing.TB, id string) solved {
	raw, err := os.ReadFile(filepath.Join("..", "testdata", "published", "solutions", id+".json"))
	if err != nil {
		t.Fatal(err)
	}
	var s solved
	if err := json.Unmarshal(raw, &s); err != nil {
		t.Fatal(err)
	}
	return s
}

// offK gives the largest difference of a history from a solution, and reports each above what is allowed.
func (p *problem) offK(t testing.TB, h *History, sol solved) float64 {
	s := h.Sample(30)
	worst, compared := 0.0, 0
	for _, row := range sol.Reference.Rows {
		at := row[0].(float64)
		i := slices.IndexFunc(s.TimesS, func(x float64) bool { return math.Abs(x-at) < 1e-6 })
		for c, column := range sol.Reference.Columns {
			name, isC := strings.CutSuffix(column, "_C")
			if !isC {
				continue
			}
			var got float64
			allow := p.allowK
			switch name {
			case "volume_mean":
				got = s.Mean[i]
			case "coldest_T":
				got, allow = s.Coldest[i], p.edgeK
			case "hottest_T":
				got, allow = s.Hottest[i], p.edgeK
			default:
				place, ok := p.points[name]
				if !ok {
					t.Fatalf("no place %s", name)
				}
				got = h.At(place, at)
			}
			off := math.Abs(got - row[c].(float64))
			worst = max(worst, off)
			compared++
			if off > allow {
				t.Errorf("%s at %g s: %s %.4f, want %.4f", p.id, at, name, got, row[c])
			}
		}
	}
	if compared < 60 {
		t.Fatalf("only %d figures compared", compared)
	}
	return worst
}

func TestMarchedReferenceProblems(t *testing.T) {
	for _, p := range problems() {
		t.Run(p.id, func(t *testing.T) {
			h, err := Solve(p.product, p.steps, Options{})
			if err != nil {
				t.Fatal(err)
			}
			worst := p.offK(t, h, solutionOf(t, p.id))
			t.Logf("largest difference %.4f K, stated error %.4f K, %s, %d instants", worst, h.ErrorK, h.Method, len(h.field.(*marched).track.times))
			if worst > 2*h.ErrorK+0.002 {
				t.Errorf("stated error %.4f K, true %.4f K", h.ErrorK, worst)
			}
			if h.ErrorK > p.allowK {
				t.Errorf("stated error %.4f K, promised %.4f K", h.ErrorK, p.allowK)
			}
		})
	}
}

// A state that was put aside comes back as it was, also where the surface has led the march to another linear problem since.
func TestMarchRestoresItsState(t *testing.T) {
	food := &Material{Name: "test food", Source: "input of the test", Table: true, LowC: -30, HighC: 260, Waterless: true, Props: func(c float64) Properties {
		return Properties{0.44 + 0.0011*c, 1030, 3400 + 1.2*c}
	}}
	walls := 340.0
	oven := Exposure{Surface: StillAir, Medium: Course{TimesS: []float64{0}, C: []float64{240}}, RadiatingC: &walls, Wet: ptr(false)}
	for _, shape := range []*Shape{Slab, Brick, Spheroid, LayeredSlab, Bar} {
		t.Run(shape.Name, func(t *testing.T) {
			p := Product{Name: "P", Shape: shape, Food: food, StartC: 6, Size: Size{ThicknessM: 0.061, WidthM: 0.083, LengthM: 0.12, DiameterM: 0.072}}
			switch shape {
			case Bar: // with ice
				p.Food, p.StartC = icyFood(), -4
			case LayeredSlab:
				p.Food, p.Layers = nil, []Layer{{Food: food, ThicknessM: 0.02, BelowM2KW: 0.004}, {Food: food, ThicknessM: 0.041}}
			}
			steps := []Step{{Name: "roast", Stage: Cook, DurationS: 5000, Exposure: oven}}
			s := &solver{product: &p, steps: steps, options: Options{ConductivityFactor: 1}, tmp: scratches.Get().(*scratch)}
			defer scratches.Put(s.tmp)
			s.layOut()
			e, _ := s.firstEffort()
			f := s.newMarched(e)
			k := s.skinOf(&steps[0].Exposure, nil, &steps[0])
			f.state.surround(func(*Face) *skin { return k })
			f.state.begin(0)
			f.state.keep(f.track, 0)
			tau := 0.0
			step := func(to float64) {
				for d := 1.0; tau < to; d *= 2 {
					for f.state.try(tau, d) > 0.1 {
						d /= 4
					}
					tau += d
					f.state.accept(f.track, tau)
				}
			}
			step(60)
			f.state.save(tau)
			want, at := make([]float64, f.track.n), tau
			f.track.all(f.track.find(tau), want)
			step(1200) // the walls heat the surface more and more steeply
			f.state.restore()
			again := &track{n: f.track.n, ice: f.track.ice}
			f.state.keep(again, at)
			f.state.keep(again, at+1)
			got := make([]float64, f.track.n)
			again.all(again.find(at), got)
			for i := range got {
				if math.Abs(got[i]-want[i]) > 1e-6 {
					t.Fatalf("node %d comes back at %.6f °C, was %.6f °C", i, got[i], want[i])
				}
			}
		})
	}
}

// A step that cannot be solved however short it is is refused, and never taken as it came out.
func TestMarchThatCannotGoOnIsRefused(t *testing.T) {
	e := filmTo(25, 120)
	e.At = cell.Ref{Sheet: "Steps", Row: 3}
	e.Surface = &Surface{Name: "test surface", law: func(c, _ float64) (float64, float64) {
		if c > 50 {
			return math.NaN(), math.NaN()
		}
		return 25 * (120 - c), -25
	}}
	for _, f := range []*Material{freezingFood(), {Name: "test food", Source: "input of the test", Props: func(float64) Properties { return Properties{0.48, 1060, 3600} }}} {
		p := Product{Name: "P", Shape: Slab, Food: f, StartC: -15, Size: Size{ThicknessM: 0.03}}
		if f.FreezingC == nil {
			p.StartC = 7
		}
		_, err := Solve(p, []Step{{Name: "roast", Stage: Cook, DurationS: 3000, Exposure: e}}, Options{})
		if err == nil || !strings.Contains(err.Error(), "changes so fast") || !strings.Contains(err.Error(), "Steps") {
			t.Errorf("start %g °C: %v", p.StartC, err)
		}
	}
}
