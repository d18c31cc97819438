package report

import (
	"bytes"
	"encoding/json"
	"flag"
	"fmt"
	"io"
	"math"
	"math/rand"
	"os"
	"path/filepath"
	"reflect"
	"runtime"
	"slices"
	"sort"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"slowpoint/model"
)

var rewrite = flag.Bool("rewrite", false, "write the golden files anew")

// golden compares got with a file of testdata; a missing file fails.
func golden(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join("testdata", name)
	if *rewrite {
		if err := os.WriteFile(path, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(string(want), string(got)); d != "" {
		t.Errorf("%s differs (- wanted, + got):\n%s", path, d)
	}
}

// stream is the shape that all writers share.
type stream interface {
	Add(*Product) error
	Close() error
}

// write puts products through a writer.
func write[S stream](t testing.TB, make func(io.Writer, *Head) S, h *Head, ps ...*Product) []byte {
	t.Helper()
	var b bytes.Buffer
	w := make(&b, h)
	for _, p := range ps {
		if err := w.Add(p); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestJSONGolden(t *testing.T) {
	p := trayProduct(t, "Beef stew <\"tray\">")
	got := write(t, NewJSON, trayHead(), p)
	golden(t, "tray.json", withoutCautions(got)) // the cautions are held by a test of their own
}

// withoutCautions drops the lines of the array "cautions".
func withoutCautions(b []byte) []byte {
	var out []string
	in := false
	for _, line := range strings.Split(string(b), "\n") {
		if strings.HasPrefix(line, `    "cautions": [`) {
			in = !strings.HasSuffix(line, "],")
			continue
		}
		if in {
			in = !strings.HasSuffix(line, "],")
			continue
		}
		out = append(out, line)
	}
	return []byte(strings.Join(out, "\n"))
}

// The keys that the contract names, and the numbers in their units.
func TestJSONKeys(t *testing.T) {
	var all map[string]any
	if err := json.Unmarshal(write(t, NewJSON, trayHead(), trayProduct(t, "One"), trayProduct(t, "Two")), &all); err != nil {
		t.Fatal(err)
	}
	products := all["products"].([]any)
	if len(products) != 2 {
		t.Fatalf("%d products, wanted 2", len(products))
	}
	p := products[1].(map[string]any)
	first := func(key string) map[string]any { return p[key].([]any)[0].(map[string]any) }
	for _, c := range []struct {
		name string
		in   map[string]any
		keys string
	}{
		{"document", all, "schema version date plan problems not_calculated products"},
		{"plan", all["plan"].(map[string]any), "name sha256 items"},
		{"problem", all["problems"].([]any)[0].(map[string]any), "at level typed message hint"},
		{"not calculated", all["not_calculated"].([]any)[0].(map[string]any), "product at because"},
		{"product", p, "product process verdict method error_K t_s coldest_C hottest_C mean_C coldest_at_mm hottest_at_mm points steps findings groups cautions"},
		{"point", first("points"), "point at_mm C"},
		{"step", first("steps"), "step stage start_s end_s"},
		{"finding", first("findings"), "limit rule level verdict value required unit margin_K margin_s at_s at_mm clock_start_s clock_end_s code clause edition cells why"},
		{"group", first("groups"), "group join verdict decided_by"},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, key := range strings.Fields(c.keys) {
				if _, ok := c.in[key]; !ok {
					t.Errorf("%q is missing", key)
				}
			}
		})
	}
	if got := p["coldest_at_mm"].([]any)[1]; !reflect.DeepEqual(got, []any{-1.2346, 0., 0.}) { // -0.001234567 m
		t.Errorf("coldest_at_mm[1] = %v", got)
	}
	if got := p["mean_C"].([]any)[5]; got != nil {
		t.Errorf("a mean that does not exist is %v, wanted null", got)
	}
	if got := p["findings"].([]any)[1].(map[string]any)["value"]; got != nil {
		t.Errorf("a value that does not exist is %v, wanted null", got)
	}
	if got := p["points"].([]any)[1].(map[string]any)["at_mm"]; !reflect.DeepEqual(got, []any{-14., 32.5, 0.}) {
		t.Errorf("probe at %v", got)
	}
}

func TestJSONPlanItemsKeepTheirOrder(t *testing.T) {
	h := trayHead()
	h.Items = []Item{{Item: "Site", Value: "a"}, {Item: "Authority", Value: "b"}, {Item: "Edition", Value: "3"}}
	got := string(write(t, NewJSON, h))
	if want := `"items":{"Site":"a","Authority":"b","Edition":"3"}`; !strings.Contains(got, want) {
		t.Errorf("%s not found in\n%s", want, got)
	}
	if !json.Valid([]byte(got)) {
		t.Errorf("a document without products is not JSON:\n%s", got)
	}
}

// A plan that ends late may still add problems; they stand in the document.
func TestHeadMayGrowUntilClose(t *testing.T) {
	h := trayHead()
	h.NotCalculated = nil
	var b bytes.Buffer
	j := NewJSON(&b, h)
	if err := j.Add(trayProduct(t, "One")); err != nil {
		t.Fatal(err)
	}
	h.NotCalculated = append(h.NotCalculated, NotCalculated{Product: "Late"})
	if err := j.Close(); err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(b.String(), `{"product":"Late"`) {
		t.Error("a product that was refused late is not in the document")
	}
}

func TestNumbersOfJSON(t *testing.T) {
	for _, c := range []struct {
		name     string
		x        float64
		decimals int
		want     string
	}{
		{"trailing noughts go", 12.50000001, 5, "12.5"},
		{"whole", 120, 4, "120"},
		{"no minus nought", -0.000001, 5, "0"},
		{"noughts of a whole number stay", 1200, 0, "1200"},
		{"exact time", 4380.123456789, -1, "4380.123456789"},
		{"a fifth decimal", -18.123456, 5, "-18.12346"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := string(appendNumber(nil, c.x, c.decimals)); got != c.want {
				t.Errorf("%v with %d decimals: %s, wanted %s", c.x, c.decimals, got, c.want)
			}
		})
	}
}

func TestSameInputSameBytes(t *testing.T) {
	for _, c := range []struct {
		name string
		make func() []byte
	}{
		{"json", func() []byte { return write(t, NewJSON, trayHead(), trayProduct(t, "One"), trayProduct(t, "Two")) }},
		{"xlsx", func() []byte { return write(t, NewWorkbook, trayHead(), trayProduct(t, "One"), trayProduct(t, "Two")) }},
	} {
		t.Run(c.name, func(t *testing.T) {
			first := c.make()
			for i := 0; i < 5; i++ {
				if !bytes.Equal(first, c.make()) {
					t.Fatalf("run %d differs", i+2)
				}
			}
		})
	}
}

func TestAddNeedsAHistory(t *testing.T) {
	for _, s := range []stream{NewJSON(io.Discard, trayHead()), NewWorkbook(io.Discard, trayHead())} {
		if err := s.Add(&Product{}); err == nil {
			t.Errorf("%T took a product without a history", s)
		}
		if err := s.Close(); err != nil {
			t.Errorf("%T: %v", s, err)
		}
	}
}

// fullDisk fails after so many bytes.
type fullDisk int

func (d *fullDisk) Write(b []byte) (int, error) {
	if *d -= fullDisk(len(b)); *d < 0 {
		return 0, fmt.Errorf("no space left")
	}
	return len(b), nil
}

func TestAFullDiskIsAnError(t *testing.T) {
	for name, make := range map[string]func(io.Writer) stream{
		"json": func(w io.Writer) stream { return NewJSON(w, trayHead()) },
		"xlsx": func(w io.Writer) stream { return NewWorkbook(w, trayHead()) },
	} {
		t.Run(name, func(t *testing.T) {
			disk := fullDisk(1000)
			s := make(&disk)
			if err := s.Add(trayProduct(t, "One")); err != nil {
				t.Fatal(err)
			}
			if err := s.Close(); err == nil || !strings.Contains(err.Error(), "no space left") {
				t.Errorf("error %v, wanted no space left", err)
			}
		})
	}
}

// long gives a product a course of n samples.
func long(t testing.TB, n int) *Product {
	p := trayProduct(t, "Long")
	s := &p.Samples
	s.TimesS, s.Coldest, s.Hottest, s.Mean, s.ColdestAt, s.HottestAt = nil, nil, nil, nil, nil, nil
	for i := 0; i < n; i++ {
		x := float64(i)
		s.TimesS = append(s.TimesS, 9000*x/float64(n-1))
		s.Coldest, s.Hottest, s.Mean = append(s.Coldest, 20+x/7), append(s.Hottest, 21+x/7), append(s.Mean, 20.5+x/7)
		s.ColdestAt, s.HottestAt = append(s.ColdestAt, model.Place{UpM: -0.00123 * x / float64(n)}), append(s.HottestAt, model.Place{UpM: -0.00123 * x / float64(n)})
	}
	s.Points = [][]float64{slices.Clone(s.Coldest), slices.Clone(s.Hottest)}
	return p
}

// 2,000 products of 300 samples pass in the memory of a few: the spools go to a file.
func TestTwoThousandProductsInBoundedMemory(t *testing.T) {
	if testing.Short() {
		t.Skip("writes 2,000 products")
	}
	p := long(t, 300)
	for _, c := range []struct {
		name string
		make func() stream
		most uint64 // bytes held before Close; the courses of all products would be 70 MB
	}{
		{"json", func() stream { return NewJSON(io.Discard, trayHead()) }, 24 << 20},
		{"xlsx", func() stream { return NewWorkbook(io.Discard, trayHead()) }, 24 << 20},
	} {
		t.Run(c.name, func(t *testing.T) {
			before := held()
			s := c.make()
			for i := 0; i < 2000; i++ {
				p.Product.Name = fmt.Sprintf("Product %d", i)
				if err := s.Add(p); err != nil {
					t.Fatal(err)
				}
			}
			after := held()
			if err := s.Close(); err != nil {
				t.Fatal(err)
			}
			grown := max(after, before) - before
			t.Logf("%.1f MB held", float64(grown)/1e6)
			if grown > c.most {
				t.Errorf("%.1f MB held, wanted at most %.1f", float64(grown)/1e6, float64(c.most)/1e6)
			}
		})
	}
}

// held is what the heap holds after a collection.
func held() uint64 {
	runtime.GC()
	var m runtime.MemStats
	runtime.ReadMemStats(&m)
	return m.HeapAlloc
}

// BenchmarkStreams is one product of 500 samples through each writer.
func BenchmarkStreams(b *testing.B) {
	p := long(b, 500)
	makes := map[string]func() stream{
		"json": func() stream { return NewJSON(io.Discard, trayHead()) },
		"xlsx": func() stream { return NewWorkbook(io.Discard, trayHead()) },
	}
	names := []string{}
	for n := range makes {
		names = append(names, n)
	}
	sort.Strings(names)
	for _, name := range names {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			s := makes[name]()
			for b.Loop() {
				if err := s.Add(p); err != nil {
					b.Fatal(err)
				}
			}
			if err := s.Close(); err != nil {
				b.Fatal(err)
			}
		})
	}
}

// A value that JSON cannot hold is an error of the document, not a gap in it and not a crash.
func TestJSONFault(t *testing.T) {
	var b bytes.Buffer
	j := NewJSON(&b, &Head{})
	j.value("x", json.RawMessage("NaN"))
	if err := j.Close(); err == nil {
		t.Error("a value that is no JSON went unseen")
	}
}

// A number is written as the standard library rounds it, without trailing noughts: also at a half, where a product of floats
// would round the other way, beyond the whole digits of a float, and below the last decimal.
func TestAppendNumber(t *testing.T) {
	for _, c := range []struct {
		x        float64
		decimals int
		want     string
	}{
		{0, 5, "0"}, {math.Copysign(0, -1), 5, "0"}, {-0.000004, 5, "0"}, {0.000006, 5, "0.00001"}, {-12.5, 5, "-12.5"}, {100, 4, "100"}, {9.99999999, 5, "10"},
		{1.005, 2, "1"}, {0.125, 2, "0.12"}, {0.375, 2, "0.38"}, {2.5, 0, "2"}, {1234567890123.25, 1, "1234567890123.2"}, {0.1, -1, "0.1"}, {1e-7, -1, "0.0000001"},
	} {
		if got := string(appendNumber(nil, c.x, c.decimals)); got != c.want {
			t.Errorf("%v with %d decimals: %s, want %s", c.x, c.decimals, got, c.want)
		}
	}
	draw := rand.New(rand.NewSource(20260131))
	for range 200_000 {
		x, decimals := (draw.Float64()-0.5)*math.Pow10(draw.Intn(14)-4), 1+draw.Intn(6)
		if draw.Intn(3) == 0 { // a half of the last decimal, as exactly as a float holds it
			x = (math.Round(x) + 0.5) / math.Pow10(decimals)
		}
		want := strings.TrimRight(strings.TrimRight(strconv.FormatFloat(x, 'f', decimals, 64), "0"), ".")
		if want == "-0" {
			want = "0"
		}
		if got := string(appendNumber(nil, x, decimals)); got != want {
			t.Fatalf("%v with %d decimals: %s, want %s", x, decimals, got, want)
		}
	}
}
