package report

import (
	"encoding/json"
	"fmt"
	"strings"
	"testing"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// imported is a head and a product whose thickness comes from a spreadsheet, and whose other row was edited since.
func imported(h *Head, p *Product) (*Head, *Product) {
	h.Sources = []Source{{"Recipes.xlsx", strings.Repeat("1f", 32)}, {"Recipes-map.xlsx", strings.Repeat("2e", 32)}}
	h.NotImported = 12
	h.Problems = append(h.Problems, cell.Error{At: cell.Ref{Sheet: "Products", Row: p.Product.At.Row, Col: 6}, From: "Recipes.xlsx › Cook-chill!F17", Level: cell.Warning, Typed: "55 mm", Msg: "is unusual here"})
	for i := range p.Readings {
		r := &p.Readings[i]
		switch r.Column {
		case "Thickness":
			r.From = "Recipes.xlsx › Cook-chill!F17"
		case "Temperature is":
			r.From = "edited after import; was Recipes.xlsx › Cook-chill!M17"
		}
	}
	return h, p
}

// TestImportedPlan: every document leads to the cells of the spreadsheets, and names the files with their digests.
func TestImportedPlan(t *testing.T) {
	h, p := imported(trayHead(), trayProduct(t, "Stew"))
	t.Run("text", func(t *testing.T) {
		text := string(write(t, NewText, h, p))
		for _, want := range []string{"\nMade by the import from: Recipes.xlsx, SHA-256 1f1f", "\nMade by the import from: Recipes-map.xlsx, SHA-256 2e2e",
			"- warning, Products!F6 (Recipes.xlsx › Cook-chill!F17): \"55 mm\" is unusual here\n",
			"- Products!F6 (Recipes.xlsx › Cook-chill!F17), Thickness: typed \"60 mm\"",
			"- Steps!I3 (edited after import; was Recipes.xlsx › Cook-chill!M17), Temperature is: left blank"} {
			if !strings.Contains(text, want) {
				t.Errorf("%q is missing in\n%s", want, text)
			}
		}
	})
	t.Run("json", func(t *testing.T) {
		var all struct {
			Plan     struct{ Sources []map[string]string }
			Problems []map[string]string
			Products []struct{ Input []map[string]string }
		}
		if err := json.Unmarshal(write(t, NewJSON, h, p), &all); err != nil {
			t.Fatal(err)
		}
		if got := fmt.Sprint(all.Plan.Sources[0]["file"], " ", all.Plan.Sources[1]["sha256"][:4], " ", len(all.Plan.Sources)); got != "Recipes.xlsx 2e2e 2" {
			t.Errorf("sources %s", got)
		}
		last := all.Problems[len(all.Problems)-1]
		if last["from"] != "Recipes.xlsx › Cook-chill!F17" || last["at"] != "Products!F6" {
			t.Errorf("problem %v", last)
		}
		if _, has := all.Problems[0]["from"]; has {
			t.Errorf("a problem from nowhere has a from: %v", all.Problems[0])
		}
		if in := all.Products[0].Input[1]; in["from"] != "edited after import; was Recipes.xlsx › Cook-chill!M17" || in["at"] != "Steps!I3" {
			t.Errorf("input %v", in)
		}
	})
	t.Run("workbook", func(t *testing.T) {
		f := opened(t, write(t, NewWorkbook, h, p))
		if got := byHeading(t, f, "Input", 2); got["From"] != "Recipes.xlsx › Cook-chill!F17" || got["Cell"] != "Products!F6" {
			t.Errorf("input %v", got)
		}
		rows, err := f.GetRows("Overview")
		if err != nil {
			t.Fatal(err)
		}
		for _, want := range []string{"Made by the import from Recipes.xlsx 1f1f", "Products!F6 (Recipes.xlsx › Cook-chill!F17)"} {
			if !strings.Contains(fmt.Sprint(rows), want) {
				t.Errorf("Overview: %q is missing in %v", want, rows)
			}
		}
	})
}

func TestImportedPlanPDF(t *testing.T) {
	h, p := imported(roastHead(), roast(t, model.Slab, rules.Met))
	text := pdfText(t, productPDF(t, h, p))
	for _, want := range []string{"Imported from Recipes.xlsx (SHA-256 1f1f", "Recipes-map.xlsx (SHA-256 2e2e", "F Thickness (F17): 55 mm → 0.055 m", "I Temperature is (M17): (blank)", "import; was Recipes.xlsx › Cook-chill"} {
		if !strings.Contains(text, want) {
			t.Errorf("product: %q is missing in\n%s", want, text)
		}
	}
	first, _, _ := strings.Cut(pdfText(t, summaryPDF(t, h, manyRows(400))), "page 1 of")
	if want := "12 rows of the spreadsheets were not imported and are not judged here"; !strings.Contains(first, want) {
		t.Errorf("first page of the overview: %q is missing in\n%s", want, first)
	}
	for i := range 30 {
		h.Sources = append(h.Sources, Source{fmt.Sprintf("Card %d.xlsx", i+1), strings.Repeat("3d", 32)})
	}
	if text = pdfText(t, productPDF(t, h, p)); !strings.Contains(text, "and 22 more: all are in summary.pdf") || strings.Contains(text, "Card 9.xlsx") { // 2 + 30 − 10
		t.Errorf("too many or too few files in\n%s", text)
	}
	if text = pdfText(t, summaryPDF(t, h, manyRows(1))); !strings.Contains(text, "Card 30.xlsx (SHA-256 3d3d") {
		t.Errorf("the last file is missing in\n%s", text)
	}
}

// TestNothingImported: without sources no document has a word of them.
func TestNothingImported(t *testing.T) {
	h, p := trayHead(), trayProduct(t, "Stew")
	for name, b := range map[string][]byte{"text": write(t, NewText, h, p), "json": write(t, NewJSON, h, p)} {
		for _, word := range []string{"import", `"from"`, "sources"} {
			if strings.Contains(string(b), word) {
				t.Errorf("%s says %s", name, word)
			}
		}
	}
	if got := byHeading(t, opened(t, write(t, NewWorkbook, h, p)), "Input", 1); got["From"] != "" {
		t.Error("results.xlsx has a column From")
	}
}

// TestSharedSource: the sheet beside a row of the input echo is that of most of its cells; others are told in full.
func TestSharedSource(t *testing.T) {
	at := func(col int, from string) cell.Reading {
		return cell.Reading{At: cell.Ref{Sheet: "Products", Row: 2, Col: col}, From: from, Column: "X", Typed: "1", Used: "1"}
	}
	rs := []cell.Reading{at(1, "map.xlsx › Constants!E4"), at(2, "A.xlsx › S!B2"), at(3, "A.xlsx › S!C2"), at(4, "A.xlsx › S2!B1"), at(5, ""), at(6, "A.xlsx")}
	if got := sharedSource(rs); got != "A.xlsx › S" {
		t.Errorf("shared %q", got)
	}
	if got, want := echoed(rs), "A X (map.xlsx › Constants!E4): 1 · B X (B2): 1 · C X (C2): 1 · D X (A.xlsx › S2!B1): 1 · E X: 1 · F X (A.xlsx): 1"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
	if got := sharedSource([]cell.Reading{at(1, "")}); got != "" {
		t.Errorf("shared %q by cells from nowhere", got)
	}
}
