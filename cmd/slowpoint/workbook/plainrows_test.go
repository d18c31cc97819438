package workbook

import (
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// waysOf reads a sheet with its rows kept, all through encoding/xml, and taken one by one, plain ones from the buffer, and tells both.
func waysOf(s string) (kept, taken string) {
	read := func(take bool) string {
		b := &book{strings: []string{"Time", "Core (°C)"}, forms: []Form{Bare, Date}, formats: make([]numberFormat, 2)}
		g, left := &Grid{Name: "Probe", HiddenCols: map[int]bool{}}, 50
		var rows []Row
		if take {
			g.take = func(r *Row) error {
				rows = append(rows, Row{r.N, r.Hidden, slices.Clone(r.Cells)})
				return nil
			}
		}
		in := xmlOf(s)
		err := b.sheet(in, g, &left)
		if err != nil {
			left, in.m.spare = 0, 0
		}
		return fmt.Sprintf("%+v\n%v\n%d cells left, %d to spare\n%v", append(rows, g.Rows...), err, left, in.m.spare, g.Merged)
	}
	return read(false), read(true)
}

// TestPlainRows: rows that are read from the buffer are those that encoding/xml reads, and every other row is left to it.
func TestPlainRows(t *testing.T) {
	for _, c := range []struct {
		row   string
		plain bool
	}{
		{`<row r="7" spans="1:2" x14ac:dyDescent="0.25"><c r="A7" s="1"><v>46064.5</v></c><c r="B7"><v>63.5</v></c></row>`, true},
		{`<row r="7" hidden="1"><c r="A7" t="s"><v>1</v></c><c r="C7" s="1"/></row>`, true},
		{`<row r="7" ht="0.5" customHeight="1" ><c r="A7" t="str" ><v> a_x000D_b </v></c><c r="B7" t="b"><v>1</v></c></row>`, true},
		{`<row r="7"><c r="A7" t="inlineStr"><is><t>OK_x0041_</t></is></c><c r="B7" t="e"><v>#N/A</v></c></row>`, true},
		{`<row r="7"><c r="A7"><f>[1]Sheet1!A1</f><v>5</v></c><c r="B7"><f>A7*1.8</f></c><c r="C7" t="str"><f>B7</f><v></v></c></row>`, true},
		{`<row r="7"><c r="A7"></c></row>`, true},
		{`<row r="7"></row>`, true},
		{`<row r="7"/>`, true},
		{`<row r="7"><c r="A6"><v>5</v></c></row>`, true}, // wrong, and told as such
		{`<row r="7"><c r="A7" t="s"><v>2</v></c></row>`, true},
		{`<row r="7"><c s="1" t="n"><v>1e3</v></c></row>`, true},
		{`<row r="7"><c r="A7"><v>6&#51;.5</v></c></row>`, false},
		{`<row r="7"><c r="A7" t="str"><v>63.5 °C</v></c></row>`, false},
		{`<row r="7"><c r="A7" t="str"><v>a]]>b</v></c></row>`, false},
		{`<row r="7"><c r="A7"><v>6<!-- -->3</v></c></row>`, false},
		{`<row r="7"><!-- <row r="1"> --><c r="A7"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7"><v><![CDATA[63]]></v></c></row>`, false},
		{`<row r="7"><c r="A7"><v>63</v><v>64</v></c></row>`, false},
		{`<row r="7"><c r="A7"><v>63</v></c><d r="B7"/></row>`, false},
		{`<row r="7"><c r="A7" t="inlineStr"><is><r><t>a</t></r></is></c></row>`, false},
		{`<row r="7"><c r="A7"><f t="shared" si="0"/><v>63</v></c></row>`, false},
		{"<row r=\"7\">\n<c r=\"A7\"><v>63</v></c></row>", false},
		{"<row r=\"7\"><c r=\"A7\"><v>6\t3</v></c></row>", false},
		{`<row r="7" r="8"><c r="A7"><v>63</v></c></row>`, false},
		{`<row r="7" hidden="" hidden="1"><c r="A7"><v>63</v></c></row>`, false},
		{`<row r='7'><c r="A7"><v>63</v></c></row>`, false},
		{`<row r = "7"><c r="A7"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7"s="1"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7" s><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7" 1="1"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7" a:1="1"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7" :s="1"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7" a:b:s="1"><v>63</v></c></row>`, false},
		{`<row r="7"><c a:r="A7" xmlns:a="b"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7" s="<"><v>63</v></c></row>`, false},
		{`<row r="7" ht="1/>"><c r="A7"><v>63</v></c></row>`, false},
		{`<row r="7"><c r="A7"><v>63</c></v></row>`, false},
		{`<row r="7"><c r="A7"><v>63</v></row>`, false},
		{`<row r="7"><c r="A7"><v>63</v></c></row >`, false},
		{`<row r="7"><c r="A7"` + strings.Repeat(` a="1"`, mostAttributes) + `><v>63</v></c></row>`, false},
		{`<row r="7"><row r="8"><c r="A8"><v>63</v></c></row></row>`, false},
	} {
		end := rowEnd([]byte(c.row))
		_, _, plain := plainRow(c.row[:max(end, len("<row"))], nil)
		if plain = plain && end == len(c.row); plain != c.plain {
			t.Errorf("%s: plain %t", c.row, plain)
		}
		sheet := `<worksheet><sheetData><row r="2"><c r="A2"><v>1</v></c></row>` + c.row + `<row r="9"><c r="A9"><v>2</v></c></row></sheetData><mergeCells><mergeCell ref="A1:A2"/></mergeCells></worksheet>`
		kept, taken := waysOf(sheet)
		if d := cmp.Diff(kept, taken); d != "" {
			t.Errorf("%s (-kept +taken)\n%s", c.row, d)
		}
	}
}

// TestPlainRowsDrawn reads sheets made of drawn pieces of rows, sound and broken ones, both ways.
func TestPlainRowsDrawn(t *testing.T) {
	pieces := []string{`<row r="1">`, `<row r="2" hidden="1">`, `<row>`, `<row `, `<row r="3"/>`, `</row>`, `</row>`, `</row>`, `<c r="A1">`, `<c r="A2" s="1">`, `<c t="s">`, `<c/>`,
		`</c>`, `</c>`, `<v>`, `</v>`, `1`, `0.5`, `<v>1</v>`, `<v>1</v></c>`, `<f>A1</f>`, `<is><t>x</t></is>`, `&amp;`, `°`, ` `, "\n", `"`, `>`, `<`, `<!-- x -->`, `<c r="B2"><v>7</v></c>`,
		`<row r="4"><c r="A4"><v>4</v></c></row>`, `<row><c><v>5</v></c></row>`, strings.Repeat("<row>"+strings.Repeat(" ", 100)+"</row>", 700)}
	rapid.Check(t, func(t *rapid.T) {
		s := `<worksheet><sheetData>` + strings.Join(rapid.SliceOfN(rapid.SampledFrom(pieces), 0, 30).Draw(t, "pieces"), "")
		if rapid.Bool().Draw(t, "ends") {
			s += `</sheetData></worksheet>`
		}
		kept, taken := waysOf(s)
		if d := cmp.Diff(kept, taken); d != "" {
			t.Fatalf("(-kept +taken)\n%s", d)
		}
	})
}

// FuzzPlainRows holds both ways to the same on any sheet.
func FuzzPlainRows(f *testing.F) {
	f.Add(`<worksheet><sheetData><row r="1"><c r="A1" t="s"><v>0</v></c><c r="B1" t="inlineStr"><is><t>x</t></is></c></row><row r="2"/></sheetData></worksheet>`)
	f.Add(`<worksheet><sheetData><row hidden="1"><c><f>1</f></c></row><row r="3" ht="0"><c r="A3" s="1"><v>46064.5</v></c></row></sheetData></worksheet>`)
	f.Fuzz(func(t *testing.T, s string) {
		if kept, taken := waysOf(s); kept != taken {
			t.Errorf("(-kept +taken)\n%s", cmp.Diff(kept, taken))
		}
	})
}

// TestLongRow: a row that is longer than the buffer, and those behind it, are read all the same.
func TestLongRow(t *testing.T) {
	sheet := `<worksheet><sheetData><row r="1"><c r="A1" t="str"><v>` + strings.Repeat("x", mostText) + `</v></c><c r="B1" t="str"><v>` + strings.Repeat("y ", mostText/2) +
		`</v></c><c r="C1" t="str"><v>` + strings.Repeat("z", mostText) + `</v></c></row><row r="2"><c r="A2"><v>5</v></c></row></sheetData></worksheet>`
	kept, taken := waysOf(sheet)
	if kept != taken || !strings.Contains(taken, "Text:5") || len(sheet) < feedBytes {
		t.Errorf("%d bytes; (-kept +taken)\n%s", len(sheet), cmp.Diff(kept, taken))
	}
}

// TestTakeStops: what take returns ends the reading, also in the middle of plain rows.
func TestTakeStops(t *testing.T) {
	stop, n := errors.New("enough"), 0
	g, left := &Grid{HiddenCols: map[int]bool{}}, 100
	g.take = func(*Row) error {
		if n++; n == 2 {
			return stop
		}
		return nil
	}
	err := (&book{}).sheet(xmlOf(`<worksheet><sheetData>`+strings.Repeat(`<row><c><v>5</v></c></row>`, 5)+strings.Repeat(`<row ><c ><v>5</v></c></row>`, 5)), g, &left)
	if err != stop || n != 2 {
		t.Error(err, n)
	}
}
