package food

import (
	_ "embed"
	"encoding/csv"
	"fmt"
	"sort"
	"strconv"
	"strings"

	"slowpoint/model"
)

// Food is a built-in food.
type Food struct {
	Name, Group    string
	Composition                // its FreezingC is nil where no published figure was read
	Source         string      // of the composition; never empty
	FreezingSource string      // of the freezing point; empty without one
	Flow           *model.Flow // whether it moves by itself when it is left still: our own judgement
}

//go:embed foods.csv
var foodsCSV string

// Foods are the built-in foods, group by group.
var Foods = readFoods(foodsCSV)

// setForms are the foods that raw ones become when heat has set them.
var setForms = map[string]string{
	"Egg, whole, raw": "Egg, whole, hard-boiled",
	"Egg white, raw":  "Egg, whole, hard-boiled",
	"Egg yolk, raw":   "Egg, whole, hard-boiled",
}

// readFoods reads the embedded table. A fault in it is a bug of ours, so it panics; the tests read it first.
func readFoods(text string) []Food {
	r := csv.NewReader(strings.NewReader(text))
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		panic(err)
	}
	var foods []Food
	for _, row := range rows[1:] {
		number := func(col int) float64 {
			x, err := strconv.ParseFloat(row[col], 64)
			if err != nil {
				panic(fmt.Sprintf("%s: %v", row[0], err))
			}
			return x
		}
		f := Food{Name: row[0], Group: row[1], Source: row[9], FreezingSource: row[10],
			Composition: Composition{WaterPc: number(2), ProteinPc: number(3), FatPc: number(4), CarbohydratePc: number(5), FibrePc: number(6), AshPc: number(7)}}
		if row[8] != "" {
			t := number(8)
			f.FreezingC = &t
		}
		f.PoresJoin = row[12] == "joined"
		f.Flow = model.FlowsNo
		for _, flow := range model.Flows {
			if row[11] == flow.Name {
				f.Flow = flow
			}
		}
		foods = append(foods, f)
	}
	return foods
}

// Airy tells that the food holds much air, and how much is not published with its composition: it needs a measured density, by Weighed.
func (f Food) Airy() bool { return f.PoresJoin }

// Material is the food's thermal behaviour; of an airy food it may not be asked.
func (f Food) Material() model.Material {
	m, err := f.made(f.Source)
	if err != nil {
		panic(err) // our own table; a test composes every row
	}
	return m
}

// Weighing is what a user measured of a built-in food.
type Weighing struct {
	DensityKgM3 *float64 // air included; nil: that of the composition
	FreezingC   *float64 // °C; nil: the built-in figure, if there is one
	Source      string   // who measured
}

// Weighed is the food's thermal behaviour with the density, the freezing point or both that were measured. An error is of type Faults.
func (f Food) Weighed(w Weighing) (model.Material, error) {
	source := f.Source
	if w.DensityKgM3 != nil {
		f.DensityKgM3 = w.DensityKgM3
		source += "; density: " + w.Source
	}
	if w.FreezingC != nil {
		f.FreezingC, f.FreezingSource = w.FreezingC, w.Source
	}
	return f.made(source)
}

func (f Food) made(source string) (model.Material, error) {
	m, err := Compose(f.Name, source, f.Composition)
	if err != nil {
		return m, err
	}
	m.Flow, m.SetForm = f.Flow, setForms[f.Name]
	if f.FreezingC != nil {
		m.Source += "; freezing point: " + f.FreezingSource
	}
	return m, nil
}

// Find finds a built-in food by its name; capitals and extra spaces do not matter.
func Find(name string) (Food, bool) {
	want := plain(name)
	for _, f := range Foods {
		if plain(f.Name) == want {
			return f, true
		}
	}
	return Food{}, false
}

// Named is the behaviour of a built-in food by its name, as Find; false too for one that is airy. The material is the caller's own.
func Named(name string) (*model.Material, bool) {
	f, ok := Find(name)
	if !ok || f.Airy() {
		return nil, false
	}
	m := f.Material()
	return &m, true
}

// plain is a name in small letters with single spaces.
func plain(s string) string { return strings.ToLower(strings.Join(strings.Fields(s), " ")) }

// Nearest lists up to five built-in foods whose names are most like name, the best first; none if nothing is alike.
func Nearest(name string) []string {
	type likeness struct {
		name  string
		score float64
	}
	var found []likeness
	want := words(name)
	for _, f := range Foods {
		have := words(f.Name)
		hits := 0.0
		for i, w := range want {
			best := 0.0
			for _, h := range have {
				best = max(best, alike(w, h))
			}
			if i == 0 {
				best *= 1.5 // the first word is the food, the others tell how it was prepared
			}
			hits += best
		}
		if hits > 0 {
			found = append(found, likeness{f.Name, hits - 0.01*float64(len(have))})
		}
	}
	sort.SliceStable(found, func(i, j int) bool { return found[i].score > found[j].score })
	var out []string
	for _, f := range found {
		if len(out) == 5 || f.score < found[0].score/2 {
			break
		}
		out = append(out, f.name)
	}
	return out
}

// words splits a name at everything that is not a letter or digit, in small letters.
func words(s string) []string {
	return strings.FieldsFunc(strings.ToLower(s), func(r rune) bool { return strings.ContainsRune(" ,.;:/()+-&\t'\"%", r) })
}

// alike is 1 for the same word, less for one that begins with the other or is a few letters off, 0 for different ones.
func alike(a, b string) float64 {
	if a == b {
		return 1
	}
	long, short := max(len([]rune(a)), len([]rune(b))), min(len([]rune(a)), len([]rune(b)))
	if short >= 3 && (strings.HasPrefix(a, b) || strings.HasPrefix(b, a)) {
		return 0.9
	}
	if d := edits(a, b); short >= 3 && 3*d <= long {
		return 0.8 - 0.1*float64(d)
	}
	return 0
}

// edits counts the letters to change, add or drop to turn one word into the other.
func edits(a, b string) int {
	x, y := []rune(a), []rune(b)
	row := make([]int, len(y)+1)
	for j := range row {
		row[j] = j
	}
	for i := range x {
		left := row[0]
		row[0] = i + 1
		for j := range y {
			cost := left
			if x[i] != y[j] {
				cost++
			}
			left = row[j+1]
			row[j+1] = min(cost, row[j+1]+1, row[j]+1)
		}
	}
	return row[len(y)]
}
