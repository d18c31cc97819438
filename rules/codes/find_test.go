package codes

import (
	"reflect"
	"slices"
	"strings"
	"testing"
)

func ids(rows []Row) []string {
	var out []string
	for _, r := range rows {
		out = append(out, r.ID)
	}
	return out
}

func TestFind(t *testing.T) {
	for _, c := range []struct {
		name, where, stage string
		has, hasNot        string
		few                int // at most this many; 0: no matter
	}{
		{"by jurisdiction in any case", "scotland", "", "UK-SCO-S4-2", "UK-ENG-2013-S4-2", 2},
		{"by issuer", "fsanz", "cool", "AU-3.2.2-7(3)-a", "AU-3.2.2-hold-cold", 0},
		{"by stage", "", "hold cold", "US-FC22-501.16-A2", "US-FC22-501.16-A1", 0},
		{"chill is cool", "", "Chill", "DK-cool", "DK-cook", 0},
		{"listed under one stage, judged in another", "Quick-frozen", "store", "UK-NI-QF-18", "DK-cool", 0},
		{"nothing asked: everything", "", "", "JP-MHLW-eat", "", 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := ids(Find(c.where, c.stage))
			if !slices.Contains(got, c.has) || c.hasNot != "" && slices.Contains(got, c.hasNot) {
				t.Errorf("%v: want %s, not %s", got, c.has, c.hasNot)
			}
			if c.few > 0 && len(got) > c.few {
				t.Errorf("%d rows, want at most %d: %v", len(got), c.few, got)
			}
		})
	}
	if got := Find("Atlantis", ""); len(got) != 0 {
		t.Errorf("Atlantis has %d limits", len(got))
	}
}

func TestByID(t *testing.T) {
	for _, c := range []struct {
		name string
		ids  []string
		want []string
	}{
		{"a row, in any case", []string{"uk-p70"}, []string{"UK-P70"}},
		{"a clause brings its parts", []string{"US-FC22-401.11-C"}, []string{"US-FC22-401.11-C+surface", "US-FC22-401.11-C+colour"}},
		{"one part", []string{"US-FC22-401.11-C+colour"}, []string{"US-FC22-401.11-C+colour"}},
		{"a published row of a table brings its limit", []string{"US-FSIS-A21-T2-6.5-140F"}, []string{"US-FSIS-A21-T2-6.5"}},
		{"a group brings all of it", []string{"FDA 3-501.14(A) cooling"}, []string{"US-FC22-501.14-A1", "US-FC22-501.14-A2"}},
		{"twice is once, in the order asked", []string{"UK-P70", "DK-cool", "UK-P70"}, []string{"UK-P70", "DK-cool"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got, err := ByID(c.ids...)
			if err != nil || !slices.Equal(ids(got), c.want) {
				t.Errorf("%v, %v; want %v", ids(got), err, c.want)
			}
		})
	}
}

func TestByIDUnknown(t *testing.T) {
	rows, err := ByID("UK-P70", "UK-P71", "HK-CFS-cool")
	if err == nil || rows != nil {
		t.Fatalf("%v, %v: want an error and no rows", ids(rows), err)
	}
	for _, want := range []string{`"UK-P71"`, "UK-P70", `"HK-CFS-cool"`, "HK-CFS-cool-1"} {
		if !strings.Contains(err.Error(), want) {
			t.Errorf("the message lacks %s: %v", want, err)
		}
	}
}

func TestEveryPublishedIDIsFound(t *testing.T) {
	all := All()
	for _, s := range published(t, "starters.csv") {
		rows := matching(all, s["id"])
		if !slices.ContainsFunc(rows, func(r Row) bool { return slices.Contains(r.Covers, s["id"]) }) {
			t.Errorf("%s does not find the limit that stands for it: %v", s["id"], ids(rows))
		}
	}
}

func TestWithGroup(t *testing.T) {
	for _, c := range []struct {
		name, id string
		want     []string
	}{
		{"a total and its first stage", "US-FC22-501.14-A2", []string{"US-FC22-501.14-A1", "US-FC22-501.14-A2"}},
		{"no group: alone", "DK-cool", []string{"DK-cool"}},
		{"a nested group brings the outermost", "US-CA-3CCR910.15-b2B",
			[]string{"US-CA-3CCR910.15-b1+time", "US-CA-3CCR910.15-b1+recipe", "US-CA-3CCR910.15-b2B"}},
		{"any of a lethality and its table", "UK-ACMSF-burger-75", []string{"UK-ACMSF-burger-70", "UK-ACMSF-burger-equivalents"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got, err := WithGroup(c.id)
			if err != nil || !slices.Equal(ids(got), c.want) {
				t.Errorf("%v, %v; want %v", ids(got), err, c.want)
			}
		})
	}
	if _, err := WithGroup("nothing"); err == nil {
		t.Error("an unknown id gives no error")
	}
}

// TestGroups: 3-401.11(B)(1) allows a bag in place of humidity, within the conditions of that oven; two alternatives
// never span limits of different stages, where one stage could excuse the other.
func TestGroups(t *testing.T) {
	rows, err := ByID("US-FC22-401.11-B1-hh+bag")
	if err != nil {
		t.Fatal(err)
	}
	want := []GroupRow{{"FDA 3-401.11(B)(1) high-humidity oven", "all of", ""},
		{"FDA 3-401.11(B)(1) high-humidity oven: moisture", "any of", "FDA 3-401.11(B)(1) high-humidity oven"}}
	if !reflect.DeepEqual(rows[0].Groups, want) || rows[0].Cells["Group"] != want[1].Group {
		t.Errorf("groups %v, want %v", rows[0].Groups, want)
	}
	inner := make(map[string]string) // any-of group -> stage of its limits
	for _, r := range All() {
		for _, g := range r.Groups {
			stage, seen := inner[g.Group]
			if g.Join != "any of" || r.Cells["Stage"] == "" || strings.HasPrefix(g.Group, "FDA 3-502.12") {
				continue
			}
			if seen && stage != r.Cells["Stage"] {
				t.Errorf("%s: alternatives in %q and in %q", g.Group, stage, r.Cells["Stage"])
			}
			inner[g.Group] = r.Cells["Stage"]
		}
	}
}

func TestAllIsTheCallersOwn(t *testing.T) {
	a := All()
	a[0].Cells["Note"] = "changed"
	a[0].ID = "changed"
	b := All()
	if b[0].ID == "changed" || b[0].Cells["Note"] == "changed" {
		t.Error("a change of one caller reaches the next")
	}
	if !reflect.DeepEqual(b, All()) {
		t.Error("two calls differ")
	}
}
