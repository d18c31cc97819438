package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"slowpoint/testdata/measured"
)

// TestPublishedCoursesChecked: published courses of joints whose sizes are printed, each written as a sparse record by hand beside a plan of the joint, go through check to the end; the record
// stands beside the prediction, point by point. The joints were 70 °C at the core and colder outside when the clocks of the
// publications started, and are predicted from 70 °C throughout and, in water, with the least film: none was warmer than predicted, but for the error of the instrument.
func TestPublishedCoursesChecked(t *testing.T) {
	const beef, ham = `"Beef, brisket, flat half, lean, braised"`, `"Ham, sliced, regular (11% fat)"`
	dir := t.TempDir()
	put := func(name string, lines ...string) {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(strings.Join(lines, "\n")+"\n"), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	points := map[string][]string{}
	for _, row := range measured.Courses(t) {
		points[row["course"]] = strings.Fields(row["points"])
	}
	products := []string{"Product,Process,Shape,Thickness (mm),Width (mm),Length (mm),Diameter (mm),Food,Start temperature (°C)"}
	steps := []string{"Process,Step,Stage,Duration (h),Surroundings,Temperature (°C),Temperature is,Air speed (m/s),Radiating temperature (°C)"}
	records := []string{"Record,Product,File,Time column,Temperature column,What it measured,Starts at,Accuracy (°C difference)"}
	cases := []struct{ id, shape, food, steps string }{
		{"C01", "cylinder,,,,110", beef, "chill,cool,24,moving air,0,measured,1.2,0"},
		{"C03", "brick,50,134,134,", beef, "chill,cool,24,water bath,0,measured,,"},
		{"C04", "brick,50,134,134,", beef, "chill,cool,24,moving air,0,measured,1.2,0"},
		{"C05", "short cylinder,,,271,110", beef, "chill,cool,24,water bath,0,measured,,"},
		{"C10a", "cylinder,,,,191", ham, "chill,cool,24,moving air,11,measured,0.2,11"}, // 17 to 6 °C, the course not printed: the middle
		{"C14a", "cylinder,,,,114", ham, "chill,cool,24,moving air,16,measured,0.2,16"}, // 20 to 12 °C: the middle; speed not printed
		{"C17", "spheroid,330,,,144.2", beef, "chill,cool,24,moving air,1,measured,2,1"},
		{"C18", "spheroid,330,,,144.2", beef, "chill,cool,24,water bath,1,measured,,"},
		{"C19", "brick,120,120,400,", ham, "spray,cool,0.5,stirred water,18,measured,,\n%s,chill,cool,24,moving air,0,measured,3,0"},
	}
	for _, c := range cases {
		_, start, _ := strings.Cut(points[c.id][0], ":")
		products = append(products, fmt.Sprintf("%s,%s,%s,%s,%s", c.id, c.id, c.shape, c.food, start))
		line := c.id + "," + c.steps
		if strings.Contains(line, "%s") {
			line = fmt.Sprintf(line, c.id)
		}
		steps = append(steps, line)
		file := []string{"Elapsed (h),Core (°C)"}
		for _, p := range points[c.id] {
			h, x, _ := strings.Cut(p, ":")
			file = append(file, h+","+x)
		}
		put(c.id+".csv", file...)
		first, _, _ := strings.Cut(c.steps, ",")
		records = append(records, fmt.Sprintf("R%s,%s,records/%s.csv,Elapsed,Core,slowest point,%s,1", c.id, c.id, c.id, first))
	}
	if err := os.Mkdir(filepath.Join(dir, "records"), 0o755); err != nil {
		t.Fatal(err)
	}
	for _, c := range cases {
		if err := os.Rename(filepath.Join(dir, c.id+".csv"), filepath.Join(dir, "records", c.id+".csv")); err != nil {
			t.Fatal(err)
		}
	}
	put("Products.csv", products...)
	put("Steps.csv", steps...)
	put("Records.csv", records...)
	put("Limits.csv", "Limit,Rule,Stage,Applies to,From (°C),To (°C),Time (h),Clock starts,Counting,Level,Code,Clause,Edition", // invented by the test
		"60 to 10,cool,,all,60,10,4,crossing,,must,invented,1,1", "ever 50,hold,,all,,50,0,,total,must,invented,2,1", "ever 1,hold,,all,,1,0,,total,must,invented,3,1")
	out := filepath.Join(t.TempDir(), "out")
	var said, wrong bytes.Buffer
	if code := run([]string{"check", "--out", out, "--date", "2026-01-31", dir}, nil, &said, &wrong); code > 1 {
		t.Fatalf("exit code %d: %s", code, wrong.String())
	}
	data, err := os.ReadFile(filepath.Join(out, "results.json"))
	if err != nil {
		t.Fatal(err)
	}
	var results struct {
		Products []struct {
			Product string
			Records []struct {
				Readings int
				Findings []struct{ Limit, Verdict string }
				Against  *struct {
					Readings int
					Bias     float64 `json:"bias_K"`
					RMS      float64 `json:"rms_K"`
					Warmer   float64 `json:"warmer_otherwise_K"`
				} `json:"against_prediction"`
			}
		}
	}
	if err := json.Unmarshal(data, &results); err != nil {
		t.Fatal(err)
	}
	if len(results.Products) != len(cases) {
		t.Fatalf("%d products of %d: %s", len(results.Products), len(cases), wrong.String())
	}
	for _, p := range results.Products {
		if len(p.Records) != 1 || p.Records[0].Against == nil || len(p.Records[0].Findings) != 3 {
			t.Errorf("%s: %+v", p.Product, p.Records)
			continue
		}
		r := p.Records[0]
		t.Logf("%s: %d readings, bias %.1f K, rms %.1f K, warmer by %.1f K, %v", p.Product, r.Readings, r.Against.Bias, r.Against.RMS, r.Against.Warmer, r.Findings)
		if n := len(points[p.Product]); r.Readings != n || r.Against.Readings != n || math.Abs(r.Against.Bias) > r.Against.RMS || r.Against.RMS == 0 || r.Against.Warmer > 1 {
			t.Errorf("%s: %d readings of %d, %+v", p.Product, r.Readings, n, *r.Against)
		}
		for _, f := range r.Findings {
			want := map[string]string{"ever 50": "met", "ever 1": "cannot tell", "60 to 10": "cannot tell"}[f.Limit] // over an hour between readings nobody saw it
			if f.Verdict != want {
				t.Errorf("%s, %s: %s, want %s", p.Product, f.Limit, f.Verdict, want)
			}
		}
	}
}
