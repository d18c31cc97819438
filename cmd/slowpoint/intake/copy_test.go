package intake

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
)

// TestCopied has rows of the mapping with decimal commas, in a plan whose made rows have points; one of them cannot be read.
func TestCopied(t *testing.T) {
	folder := t.TempDir()
	for name, text := range map[string]string{
		"Plan":    "Item;Value\nDecimal sign;comma\nSite;Harbour Lane\n",
		"Courses": "Course;Time (h:mm);Temperature (°C)\nramp;0:00;2,5\nramp;1:30;1,234\nramp;2:00;cold\n",
	} {
		if err := os.WriteFile(filepath.Join(folder, name+".csv"), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	tables, err := workbook.ReadTables(folder, "mapping", workbook.Sheets)
	if err != nil {
		t.Fatal(err)
	}
	r := lasagne()
	r.Copied = map[string][]*workbook.Line{"Plan": tables.Lines("Plan"), "Courses": tables.Lines("Courses")}
	got := sheets(t, written(t, r))
	for sheet, want := range map[string][]string{
		"Plan":         {"Decimal sign|point|map.xlsx › Plan row 2 · ", "Site|Harbour Lane|map.xlsx › Plan row 3 · "},
		"Courses":      {"Course|Time (min)|Temperature (°C)|#From", "ramp|0 h 00 min|2.5|map.xlsx › Courses row 2 · ", "ramp|1 h 30 min|1.234|map.xlsx › Courses row 3 · "},
		"Not imported": {"map.xlsx|Courses|C4|ramp|Temperature|cold|"},
	} {
		all := strings.Join(got[sheet], "\n")
		for _, w := range want {
			if !strings.Contains(all, w) {
				t.Errorf("%s lacks %q:\n%s", sheet, w, all)
			}
		}
	}
	if strings.Contains(strings.Join(got["Courses"], "\n"), "cold") {
		t.Error("a row that cannot be read was copied")
	}
}
