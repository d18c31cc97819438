package workbook

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
)

// TestForeignCSV: files of somebody's own are divided by what their data rows show, whatever writing they were saved in.
func TestForeignCSV(t *testing.T) {
	utf16 := func(e unicode.Endianness) func(string) string {
		return func(s string) string {
			out, err := unicode.UTF16(e, unicode.UseBOM).NewEncoder().String(s)
			if err != nil {
				t.Fatal(err)
			}
			return out
		}
	}
	latin := func(s string) string {
		out, err := charmap.Windows1252.NewEncoder().String(s)
		if err != nil {
			t.Fatal(err)
		}
		return out
	}
	for _, c := range []struct {
		name, text string
		save       func(string) string
		want       string // cells of the second filled row
		noted      string
	}{
		{"commas", "Dish,Height,Start\nPurée,4.5,70\nHash,4,71\n", nil, "Purée|4.5|70", ""},
		{"semicolons with decimal commas", "Dish;Height;Start\nPurée;4,5;70,5\nHash;4,1;71,5\n", nil, "Purée|4,5|70,5", ""},
		{"semicolons, one column of decimal commas", "Dish;Height\nPurée;4,5\nHash;4,1\n", nil, "Purée|4,5", ""},
		{"semicolons under a heading with commas", "\"Dish, as served\";\"Height, cm\"\nPurée;4\nHash;5\n", nil, "Purée|4", ""},
		{"tabs", "Dish\tHeight, cm\nPurée\t4,5\nHash\t4,1\n", nil, "Purée|4,5", ""},
		{"commas with a remark that holds semicolons", "Dish,Height,Remark\nPurée,4,hot; soft\nHash,5,\nPie,6,\nLoaf,7,\n", nil, "Purée|4|hot; soft", ""},
		{"a title above, short rows", "Kitchen of the bridge\nDish;Height;Start;Note\nPurée;4,5;70\nHash;4;71;late\n", nil, "Dish|Height|Start|Note", ""},
		{"mark of UTF-8", "\ufeffDish,Height\nPurée,4\n", nil, "Purée|4", ""},
		{"UTF-16, low byte first", "Dish;Height\nPurée;4,5\n", utf16(unicode.LittleEndian), "Purée|4,5", "UTF-16"},
		{"UTF-16, high byte first", "Dish;Height\nPurée;4,5\n", utf16(unicode.BigEndian), "Purée|4,5", "UTF-16"},
		{"Windows-1252", "Dish;Temp °C\nPurée – mild;4,5\n", latin, "Purée – mild|4,5", "Windows-1252"},
	} {
		t.Run(c.name, func(t *testing.T) {
			text := c.text
			if c.save != nil {
				text = c.save(text)
			}
			name := filepath.Join(t.TempDir(), "Theirs.csv")
			if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
				t.Fatal(err)
			}
			s, err := ReadSpreadsheet(name)
			if err != nil {
				t.Fatal(err)
			}
			g := s.Sheets[0]
			if g.Refused != "" || len(g.Rows) < 2 {
				t.Fatalf("%s: %d rows", g.Refused, len(g.Rows))
			}
			var got []string
			for _, e := range g.Rows[1].Cells {
				got = append(got, e.Text)
			}
			if strings.Join(got, "|") != c.want {
				t.Errorf("%q, want %q", got, c.want)
			}
			if !strings.Contains(g.Noted, c.noted) || c.noted == "" && g.Noted != "" {
				t.Errorf("noted %q, want %q", g.Noted, c.noted)
			}
		})
	}
}

// TestOtherBook: links to other workbooks carry a number in brackets; columns of a table of this one do not.
func TestOtherBook(t *testing.T) {
	for formula, want := range map[string]bool{"[1]Cellar!B2": true, "SUM('[12]Cold store'!A1:A9)": true, "Table1[Height]": false, "Table1[[#This Row],[Year]]+1": false,
		"A1+2": false, "[": false, "[3": false, "": false} {
		if got := otherBook(formula); got != want {
			t.Errorf("%q: %v", formula, got)
		}
	}
}

// TestSwallowedRow: in a sheet of somebody's own a remark of several lines may hold a comma, but not half a row.
func TestSwallowedRow(t *testing.T) {
	const head = "Dish,Depth cm,Temp °C,Remark\n"
	for text, want := range map[string]string{
		"Soup,4,75,\"cut,\nand chilled\"\n":     "",
		"Soup,4,\"75\nBeans,5,80\",\"hot\"\n":   "from line 2 to line 3 and holds a comma",
		"Soup,4,\"75\nhot\",\"cut\nchilled\"\n": "",
	} {
		if g := foreignGrid([]byte(head + text)); !strings.Contains(g.Refused, want) || (g.Refused == "") != (want == "") {
			t.Errorf("%q: %q, want %q", text, g.Refused, want)
		}
	}
}
