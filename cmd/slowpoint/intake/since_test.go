package intake

import (
	"bytes"
	"fmt"
	"runtime"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"slowpoint/cmd/slowpoint/workbook"
)

func TestSince(t *testing.T) {
	old := written(t, lasagne())
	for _, c := range []struct {
		name   string
		change func(*Result)
		want   []string
	}{
		{"nothing", func(*Result) {}, nil},
		{"another unit, the same value", func(r *Result) { r.Made[1].Values[3].Text, r.Made[1].Values[3].Unit = "1.5", "h" }, nil}, // 90 min
		{"a value", func(r *Result) { r.Made[0].Values[3].Text = "50" }, []string{"Lasagne: Thickness 45 mm → 50 mm (Recipes.xlsx › Cook-chill!F17)"}},
		{"a constant", func(r *Result) { r.Made[3].Values[6].Text = "9" },
			[]string{"process Mash: chill: Film coefficient 12.5 W/m²·K → 9 W/m²·K (map.xlsx › Constants!E8)"}},
		{"a cell that is now blank", func(r *Result) { r.Made[1].Values[3].Text = "" }, []string{"process Lasagne: chill: Duration 90 min → blank (Recipes.xlsx › Cook-chill row 17)"}},
		{"a product gone, with its process", func(r *Result) { r.Made = r.Made[:2] }, []string{"Mash: gone (was Recipes.xlsx › Cook-chill row 18)"}},
		{"a product that is not imported now", func(r *Result) {
			r.Made = r.Made[:2]
			r.Not = append(r.Not, NotImported{Record: Place{Sheet: "Cook-chill", Row: 18}, At: Place{Sheet: "Cook-chill", Row: 18, Col: 6}, Product: "mash"})
		}, []string{"Mash: not imported now (Recipes.xlsx › Cook-chill!F18)"}},
		{"a name written otherwise, with its process", func(r *Result) {
			for _, i := range []int{2, 3} {
				r.Made[i].Values = append([]Value(nil), r.Made[i].Values...)
				r.Made[i].Values[0].Text = "MASH"
			}
			r.Made[2].Values[1].Text = "MASH"
		}, []string{"MASH: the name is written otherwise Mash → MASH (Recipes.xlsx › Cook-chill!A18)"}},
		{"another meaning of a word", func(r *Result) {
			r.Made[0].Values[4].Text, r.Made[0].Values[4].Const, r.Made[0].Values[4].At = "Rice, white, cooked", "Words!E3", Place{Sheet: "Cook-chill", Row: 17, Col: 2}
		}, []string{"Lasagne: Food Potato, mashed, with whole milk → Rice, white, cooked (Recipes.xlsx › Cook-chill!B17, by map.xlsx › Words!E3)"}},
		{"a product new, with its process", func(r *Result) {
			r.Made = append(r.Made, r.Made[2:4]...)
			for _, i := range []int{4, 5} {
				r.Made[i].Values = append([]Value(nil), r.Made[i].Values...)
				r.Made[i].Record.Row = 21
				r.Made[i].Values[0].Text = "Gratin"
			}
			r.Made[4].Values[1].Text = "Gratin"
		}, []string{"Gratin: new (Recipes.xlsx › Cook-chill row 21)"}},
		{"a step new in a process that stays", func(r *Result) {
			m := r.Made[3]
			m.Values = append([]Value(nil), m.Values...)
			m.Values[1].Text = "store"
			r.Made = append(r.Made, m)
		}, []string{"process Mash: step store new (Recipes.xlsx › Cook-chill row 18)"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := lasagne()
			c.change(r)
			changes, err := Since(old, r)
			if err != nil {
				t.Fatal(err)
			}
			var got []string
			for _, c := range changes {
				got = append(got, c.String())
			}
			if d := cmp.Diff(c.want, got); d != "" {
				t.Error(d)
			}
			r.Changes = changes
			if n := len(sheets(t, written(t, r))["Changes"]); n != 0 && n != len(c.want)+2 || n == 0 && len(c.want) > 0 { // a line of help, the headings
				t.Errorf("the sheet Changes has %d rows for %d changes", n, len(c.want))
			}
		})
	}
}

// TestSinceOrder has the steps of a process in another order than before, which is another process.
func TestSinceOrder(t *testing.T) {
	r := lasagne()
	store := r.Made[3]
	store.Values = append([]Value(nil), store.Values...)
	store.Values[1].Text = "store"
	r.Made = append(r.Made, store)
	old := written(t, r)
	r.Made[3], r.Made[4] = r.Made[4], r.Made[3]
	changes, err := Since(old, r)
	if err != nil {
		t.Fatal(err)
	}
	if len(changes) != 1 || changes[0].What != "order of steps" || changes[0].Before != "chill; store" || changes[0].Now != "store; chill" {
		t.Error(changes)
	}
}

// TestLargeList writes 10,000 products with four steps each and 40 columns.
func TestLargeList(t *testing.T) {
	if testing.Short() {
		t.Skip("a large list")
	}
	r := lasagne()
	product, step := r.Made[0], r.Made[1]
	r.Made = nil
	for i := range 10_000 {
		p := product
		p.Record.Row = i + 3
		p.Values = append([]Value(nil), p.Values...)
		p.Values[0].Text = fmt.Sprintf("Product %d", i)
		r.Made = append(r.Made, p)
		for k := range 4 {
			s := step
			s.Part, s.Record = fmt.Sprintf("part %d", k), p.Record
			s.Values = append([]Value(nil), s.Values...)
			s.Values[0].Text, s.Values[1].Text = p.Values[0].Text, s.Part
			for _, c := range workbook.SheetNamed("Steps").Columns[5:] {
				if c.Heading == "Temperature" || c.Heading == "Film coefficient" || c.Heading == "Surroundings" {
					continue // there already
				}
				v := Value{Column: c, Text: "words", At: Place{Sheet: "Cook-chill", Row: p.Record.Row, Col: 12}}
				if c.Quantity != nil {
					v.Text, v.Number, v.Unit = fmt.Sprint(i%97), true, c.Unit
				}
				s.Values = append(s.Values, v)
			}
			r.Made = append(r.Made, s)
		}
	}
	runtime.GC()
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	start := time.Now()
	var b bytes.Buffer
	if err := Write(&b, r); err != nil {
		t.Fatal(err)
	}
	took := time.Since(start)
	runtime.ReadMemStats(&after)
	t.Logf("%d bytes in %v, %d MB asked for in all, heap %d MB", b.Len(), took, (after.TotalAlloc-before.TotalAlloc)>>20, after.HeapSys>>20)
	if took > 20*time.Second { // the whole import may take so long
		t.Errorf("writing took %v", took)
	}
}
