package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model"
)

// leapPlan is a plan with limits on heating and on cooling (invented), for a tray of 40 mm and a slice of 4 mm. The bare one has only the limits.
func leapPlan(t *testing.T, dir string) (whole, bare string) {
	t.Helper()
	limits := "Limit,Rule,Stage,Applies to,From (°C),To (°C),Time (min),Clock starts,Counting,Code,Clause,Edition\n" +
		"Hot,hold,cook,all,70,,2,,total,invented,1,1\n" +
		"First,cool,cool,all,60,21,120,crossing,,invented,2,1\n" +
		"Then,cool,cool,all,21,5,240,crossing,,invented,3,1\n"
	whole, bare = filepath.Join(dir, "plan"), filepath.Join(dir, "bare")
	writePlan(t, bare, map[string]string{"Limits": limits})
	writePlan(t, whole, map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nTray,Oven,slab,40,Mash,5\nSlow tray,Slow oven,slab,40,Mash,5\nHot tray,Chiller,slab,40,Mash,85\nThin tray,Chiller,slab,25,Mash,85\nHot slice,Ice bath,slab,4,Mash,85\nBlast tray,Blast chiller,slab,40,Mash,85\n",
		"Foods":    "Food,Conductivity (W/m·K),Density (kg/m³),Specific heat (J/kg·K),Flows,Source\nMash,0.5,1050,3600,no,invented\n",
		"Steps": "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\n" +
			"Oven,bake,cook,120,film,130,15\nSlow oven,bake,cook,120,film,80,15\nChiller,chill,cool,480,film,1,10\nIce bath,chill,cool,480,film,1,500\nBlast chiller,chill,cool,480,film,1,60\n",
		"Limits": limits,
	})
	return whole, bare
}

// centreOf is what the exact model says of the centre of a slab every stepS, from one medium (°C) to another by a film (W/m²K).
func centreOf(t *testing.T, thicknessM, startC, mediumC, film, stepS, longS float64) []float64 {
	t.Helper()
	food := &model.Material{Name: "Mash", Source: "invented", Props: func(float64) model.Properties { return model.Properties{KWmK: 0.5, RhoKgM3: 1050, CJkgK: 3600} }, Waterless: true}
	h, err := model.Solve(model.Product{Name: "Tray", Shape: model.Slab, Food: food, StartC: startC, Size: model.Size{ThicknessM: thicknessM}},
		[]model.Step{{Name: "step", Stage: model.Cool, DurationS: longS, Exposure: model.Exposure{Surface: model.Film, FilmW: &film, Medium: model.Course{TimesS: []float64{0}, C: []float64{mediumC}}}}}, model.Options{})
	if err != nil {
		t.Fatal(err)
	}
	var at []float64
	for x := 0.0; x <= longS; x += stepS {
		at = append(at, x)
	}
	c := make([]float64, len(at))
	h.Course(model.Place{}, at, c)
	return c
}

// leapFile writes readings every stepS to the tenth of a degree, or to the degree.
func leapFile(t *testing.T, name string, stepS float64, places int, c []float64) {
	t.Helper()
	var b strings.Builder
	b.WriteString("Elapsed (s),Core (°C)\n")
	for i, x := range c {
		fmt.Fprintf(&b, "%g,%.*f\n", stepS*float64(i), places, x)
	}
	if err := os.WriteFile(name, []byte(b.String()), 0o644); err != nil {
		t.Fatal(err)
	}
}

// firstBelow is the first reading at or below a temperature.
func firstBelow(c []float64, most float64) int {
	for i := range c {
		if c[i] <= most {
			return i
		}
	}
	return len(c)
}

// firstAbove is the first reading above a temperature.
func firstAbove(c []float64, least float64) int {
	for i := range c {
		if c[i] > least {
			return i
		}
	}
	return len(c)
}

// TestLeapsAreNotMet: a record with a probe that left the food is cannot tell where its readings of something else would meet a limit; what a
// food does is judged as it was. The courses are the exact model's, with a film that makes them miss the limit (10 W/m²K) or meet it (40 W/m²K).
func TestLeapsAreNotMet(t *testing.T) {
	dir := t.TempDir()
	whole, bare := leapPlan(t, dir)
	const met, cannotTell = "MET ", "CANNOT TELL "
	slow := func(stepS float64) []float64 { return centreOf(t, 0.04, 85, 1, 10, stepS, 28800) }
	away := func(c []float64, at float64, toC, stepS, tauS float64, rows int) []float64 {
		from := firstBelow(c, at)
		for i := from; i < len(c) && (rows == 0 || i < from+rows); i++ {
			c[i] = toC + 0.1*math.Sin(float64(i))
		}
		for i := from; i < len(c) && tauS > 0; i++ {
			c[i] += (c[i-1] - c[i]) * math.Exp(-stepS/tauS)
		}
		return c
	}
	bake := centreOf(t, 0.04, 5, 130, 15, 60, 7200)
	hot := 0
	for bake[hot] < 54 {
		hot++
	}
	fallen := slices.Clone(bake)
	for i := hot; i < len(fallen); i++ {
		fallen[i] = 118 + 0.3*math.Sin(float64(i))
	}
	last := append(slow(60)[:firstBelow(slow(60), 31.6)], 3.0)
	good := centreOf(t, 0.04, 85, 1, 40, 60, 28800)
	rests := func(c []float64, n int, atC float64) []float64 { // n readings at one temperature, and then the course
		out := make([]float64, n, n+len(c))
		for i := range out {
			out[i] = atC + 0.1*math.Sin(float64(i))
		}
		return append(out, c...)
	}
	slowly := centreOf(t, 0.04, 5, 80, 15, 300, 3900) // out at 47.8 °C into 80 °C for four readings, a sensor of 5 min
	slowly = append(slowly[:firstAbove(slowly, 46)], 47.8, 68.1, 75.6, 78.4, 79.4, 56.7, 51.2, 49.9, 50.1, 50.8, 51.5, 52.2)
	straight := centreOf(t, 0.04, 85, 1, 60, 60, 28800)
	straight = straight[:firstBelow(straight, 63)] // to 2.5 °C by 4 °C a minute
	for c := 63.0; c > 2.5; c -= 4 {
		straight = append(straight, c)
	}
	straight = append(straight, rests(nil, 120, 2.5)...)
	put := rests(good, 4, 21.3)
	slice := rests(centreOf(t, 0.004, 85, 1, 500, 60, 28800), 20, 85)
	for _, c := range []struct {
		name    string
		c       []float64
		stepS   float64
		places  int
		product string // "": by its stages
		stage   string
		starts  string
		want    string
		told    string
	}{
		{"pulled in the chiller", away(slow(60), 31.6, 3.0, 60, 0, 0), 60, 1, "Hot tray", "cool", "", cannotTell, "faster than this food can move there"},
		{"pulled, every 10 s, a sensor of 30 s", away(slow(10), 31.6, 3.0, 10, 30, 0), 10, 1, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"pulled, every 10 s, a sensor of 10 s", away(slow(10), 31.6, 3.0, 10, 10, 0), 10, 1, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"pulled, a sleeve of 1 min", away(slow(60), 63.4, 2.0, 60, 60, 0), 60, 1, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"pulled, a sleeve of 2 min", away(slow(60), 63.4, 2.0, 60, 120, 0), 60, 1, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"pulled, every 5 min", away(slow(300), 31.6, 3.0, 300, 0, 0), 300, 1, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"pulled, every 5 min, of 25 mm", away(centreOf(t, 0.025, 85, 1, 6, 300, 28800), 31.6, 3.0, 300, 0, 0), 300, 1, "Thin tray", "cool", "", cannotTell, "faster than this food"},
		{"pulled, to the degree", away(slow(60), 31.6, 3.0, 60, 0, 0), 60, 0, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"at the last reading", last, 60, 1, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"unplugged, at room temperature", away(slow(60), 31.6, 20.5, 60, 0, 0), 60, 1, "Hot tray", "cool", "", cannotTell, "faster than this food"},
		{"put back after 10 min", away(slow(60), 31.6, 3.0, 60, 0, 10), 60, 1, "Hot tray", "cool", "", cannotTell, "up to line"},
		{"fallen out into the oven", fallen, 60, 1, "Tray", "cook", "", cannotTell, "faster than this food can move there"},
		{"in the oven's air by a sensor of 5 min, and back", slowly, 300, 1, "Slow tray", "cook", "", cannotTell, "kept, and doubtful"},
		{"straight down by 4 °C a minute", straight, 60, 1, "Blast tray", "", "", cannotTell, "faster than this food can move there"},
		{"chilled well", good, 60, 1, "Hot tray", "cool", "", met, ""},
		{"chilled well, to the degree", good, 60, 0, "Hot tray", "cool", "", met, ""},
		{"cooked well", bake, 60, 1, "Tray", "cook", "", met, ""},
		{"put in at the start", put, 60, 1, "Hot tray", "cool", "", met, "as when the probe is put into the food"},
		{"put in at the start, said", put, 60, 1, "Hot tray", "cool", "chill 4 min", met, ""},
		{"pulled out after it was cooked", append(slices.Clone(bake), rests(nil, 30, 22)...), 60, 1, "Tray", "cook", "", met, "faster than this food"},
		{"pulled out after it was chilled, said", away(slices.Clone(good), 4, 21.2, 60, 0, 0), 60, 1, "Hot tray", "cool", "chill 0 min; end 170 min", met, ""},
		{"a thin slice", slice, 60, 1, "Hot slice", "", "", met, ""},
	} {
		t.Run(strings.ReplaceAll(c.name, " ", "-"), func(t *testing.T) {
			file := filepath.Join(dir, "core.csv")
			leapFile(t, file, c.stepS, c.places, c.c)
			for _, by := range [][]string{{"--limits", whole, "--product", c.product}, {"--limits", bare, "--stages", c.stage + " 0 min"}} {
				args := append([]string{"judge", file, "--no-pdf", "--date", "2026-01-31", "--accuracy", "0.2", "--out", filepath.Join(dir, "out")}, by...)
				if by[2] == "--stages" && (c.starts != "" || c.stage == "") {
					continue
				}
				if c.starts != "" {
					args = append(args, "--starts", c.starts)
				}
				var out, errs bytes.Buffer
				code := run(args, nil, &out, &errs)
				told := c.told
				if by[2] == "--stages" {
					told = strings.Replace(told, "this food", "the core of a food", 1)
					told = strings.TrimSuffix(told, " there")
				}
				if !strings.HasPrefix(out.String(), c.want) || (code == exitMet) != (c.want == met) || !strings.Contains(errs.String(), told) || told == "" && strings.Contains(errs.String(), " comes ") {
					t.Errorf("%v: exit %d, want %s and %q told\n%s%s", by, code, c.want, told, out.String(), errs.String())
				}
			}
		})
	}
}

// TestFoodAt: only a place within the food is held to what a food can do, and by the plan where it describes the food.
func TestFoodAt(t *testing.T) {
	whole := func() *workbook.Product {
		_, p := slabRunner(model.Cool, 0.04, 60, 2, 25, 3600)
		return p
	}
	stirred := whole()
	stirred.Shape, stirred.Size = model.Stirred, model.Size{VolumeM3: 0.01, AreaM2: 0.3}
	open := whole()
	open.Steps[0].Medium = model.Course{}
	for _, c := range []struct {
		name            string
		of              workbook.Measured
		at              model.Place
		p               *workbook.Product
		within          bool
		settles, ranges bool
	}{
		{"the slowest point", workbook.AtSlowest, model.Place{}, whole(), true, true, true},
		{"a point", workbook.AtPoint, model.Place{UpM: 0.01}, whole(), true, true, true},
		{"the surface", workbook.AtSurface, model.Place{}, whole(), false, false, false},
		{"the medium", workbook.OfMedium, model.Place{}, whole(), false, false, false},
		{"another place", workbook.AtOther, model.Place{}, whole(), false, false, false},
		{"stirred", workbook.AtSlowest, model.Place{}, stirred, true, false, false},
		{"nothing known", workbook.AtSlowest, model.Place{}, &workbook.Product{}, true, false, false},
		{"a step that lacks its medium", workbook.AtSlowest, model.Place{}, open, true, true, false},
	} {
		f := foodAt(&workbook.Record{Of: c.of, Place: model.Point{Place: c.at}, Products: []*workbook.Product{c.p}})
		if (f != nil) != c.within || f != nil && ((f.SettleS > 0) != c.settles || (f.ShareS > 0) != c.ranges || (f.HighC == 60) != c.ranges) {
			t.Errorf("%s: %+v", c.name, f)
		}
	}
}

// TestDoubtfulLeftOut: readings of something else are neither held against the prediction nor fitted: both say of a probe that fell out what they say of one that did not,
// but for the readings that are left out, and tell how many. The courses are the exact model's, with the film of the plan.
func TestDoubtfulLeftOut(t *testing.T) {
	dir := t.TempDir()
	whole, _ := leapPlan(t, dir)
	plan := map[string]string{
		"Products": "Product,Process,Shape,Thickness (mm),Food,Start temperature (°C)\nHot tray,Chiller,slab,40,Mash,85\n",
		"Steps":    "Process,Step,Stage,Duration (min),Surroundings,Temperature (°C),Film coefficient (W/m²·K)\nChiller,chill,cool,480,film,1,10\n",
		"Limits":   "Limit,Rule,Stage,Applies to,From (°C),To (°C),Time (min),Clock starts,Code,Clause,Edition\nFirst,cool,cool,all,60,21,120,crossing,invented,2,1\n",
		"Records":  "Record,Product,File,Time column,Temperature column,What it measured,Starts at,Accuracy (°C difference)\nR,Hot tray,core.csv,Elapsed,Core,slowest point,chill,0.2\n",
	}
	good := centreOf(t, 0.04, 85, 1, 10, 60, 28800)
	out := slices.Clone(good)
	for i := 100; i < 130; i++ {
		out[i] = 3 + 0.1*math.Sin(float64(i))
	}
	for _, c := range []struct {
		name    string
		c       []float64
		leftOut int
	}{{"stayed in", good, 0}, {"fell out", out, 30}} {
		t.Run(strings.ReplaceAll(c.name, " ", "-"), func(t *testing.T) {
			writePlan(t, whole, plan)
			leapFile(t, filepath.Join(whole, "core.csv"), 60, 1, c.c)
			var said, errs bytes.Buffer
			to := filepath.Join(dir, "fit")
			if code := run([]string{"check", whole, "--fit", "film", "--no-pdf", "--date", "2026-01-31", "--out", to}, nil, &said, &errs); code > 1 {
				t.Fatalf("exit %d: %s", code, errs.String())
			}
			data, err := os.ReadFile(filepath.Join(to, "results.json"))
			if err != nil {
				t.Fatal(err)
			}
			var got struct {
				Products []struct {
					Records []struct {
						Against struct {
							Readings int
							LeftOut  int     `json:"doubtful_left_out"`
							RMS      float64 `json:"rms_K"`
							Fitted   []struct{ Value float64 }
						} `json:"against_prediction"`
					}
				}
			}
			if err := json.Unmarshal(data, &got); err != nil || len(got.Products) != 1 || len(got.Products[0].Records) != 1 {
				t.Fatal(err, string(data))
			}
			a := got.Products[0].Records[0].Against
			if a.LeftOut != c.leftOut || a.Readings != len(c.c)-c.leftOut || a.RMS > 0.05 || len(a.Fitted) != 1 || math.Abs(a.Fitted[0].Value-10) > 0.1 {
				t.Errorf("%+v, want %d left out and a film of 10\n%s", a, c.leftOut, errs.String())
			}
		})
	}
}

// TestUnnoticed: the report of a record says where a probe that left the food slowly would not be told from the food: where the plan does not describe
// it, or where it can be as fast as a probe; not of a surface, which may do what it likes, nor of food that is slower.
func TestUnnoticed(t *testing.T) {
	dir := t.TempDir()
	whole, bare := leapPlan(t, dir)
	writePlan(t, whole, map[string]string{"Records": "Record,Product,File,Time column,Temperature column,What it measured,Starts at,Accuracy (°C difference)\n" +
		"tray,Hot tray,core.csv,Elapsed,Core,slowest point,chill,0.2\nslice,Hot slice,core.csv,Elapsed,Core,slowest point,chill,0.2\ntop,Hot tray,core.csv,Elapsed,Core,surface,chill,0.2\n"})
	c := centreOf(t, 0.04, 85, 1, 10, 60, 28800)
	leapFile(t, filepath.Join(whole, "core.csv"), 60, 1, c)
	leapFile(t, filepath.Join(bare, "core.csv"), 60, 1, c)
	to := filepath.Join(dir, "out")
	got := map[string]string{}
	take := func(args ...string) {
		var said, errs bytes.Buffer
		if code := run(append(args, "--no-pdf", "--date", "2026-01-31", "--out", to), nil, &said, &errs); code > 1 {
			t.Fatalf("exit %d: %s", code, errs.String())
		}
		data, err := os.ReadFile(filepath.Join(to, "results.json"))
		if err != nil {
			t.Fatal(err)
		}
		var all struct {
			Products []struct {
				Records []struct{ Record, Unnoticed string }
			}
		}
		if err := json.Unmarshal(data, &all); err != nil {
			t.Fatal(err)
		}
		for _, p := range all.Products {
			for _, r := range p.Records {
				got[r.Record] = r.Unnoticed
			}
		}
	}
	take("check", whole)
	take("judge", filepath.Join(bare, "core.csv"), "--limits", bare, "--stages", "cool 0 min")
	for name, want := range map[string]string{"tray": "", "slice": "as fast as a probe", "top": "", "core": "does not follow from the plan"} {
		if x, ok := got[name]; !ok || want == "" && x != "" || !strings.Contains(x, want) {
			t.Errorf("%s: %q, want %q; all: %v", name, x, want, got)
		}
	}
}
