package unit

import (
	"math"
	"strings"
	"testing"
)

// TestLookalikes: every letter of another alphabet has its Latin one, and is none itself.
func TestLookalikes(t *testing.T) {
	if n := len([]rune(lookalikes)); n != len(latin) {
		t.Errorf("%d letters for %d", len(latin), n)
	}
	for _, c := range lookalikes {
		if c < 0x80 {
			t.Errorf("%c is Latin", c)
		}
	}
}

func TestParse(t *testing.T) {
	mm, degC, minute := Length.Unit("mm"), Temperature.Unit("°C"), Duration.Unit("min")
	for _, c := range []struct {
		name    string
		q       *Quantity
		text    string
		heading *Unit
		d       Decimal
		want    float64
		says    string // part of the mistake; "" = none
	}{
		{"plain", &Length, "25", mm, Unsure, 0.025, ""},
		{"fraction with unit", &Length, "1 1/4 in", mm, Unsure, 1.25 * 0.0254, ""}, // 1 in = 25.4 mm exactly (international yard, 1959)
		{"vulgar fraction", &Length, "1¼ in", mm, Unsure, 1.25 * 0.0254, ""},
		{"vulgar fraction and mark of inches", &Length, "¾\"", nil, Unsure, 0.75 * 0.0254, ""},
		{"no unit anywhere", &Length, "25", nil, Unsure, 0, "no unit"},
		{"wrong quantity", &Length, "25 kg", mm, Unsure, 0, "unit of length"},
		{"Fahrenheit in the cell wins", &Temperature, "165 °F", degC, Unsure, (165 - 32) / 1.8, ""},
		{"130 °F exactly", &Temperature, "130 F", degC, Unsure, (130 - 32) / 1.8, ""},
		{"kelvin", &Temperature, "350 K", degC, Unsure, 0, "kelvin"},
		{"minus sign of typesetters", &Temperature, "−18 °C", degC, Unsure, -18, ""},
		{"difference of 10 °F", &Difference, "10 °F", Difference.Unit("°C difference"), Unsure, 10 / 1.8, ""},
		{"hours and minutes", &Duration, "1 h 30 min", minute, Unsure, 5400, ""},
		{"hours and bare minutes", &Duration, "1h30", minute, Unsure, 5400, ""},
		{"units must fall", &Duration, "30 min 1 h", minute, Unsure, 0, "not a number"},
		{"seconds", &Duration, "90 s", minute, Unsure, 90, ""},
		{"clock without form", &Duration, "2:05", minute, Unsure, 0, "hours and minutes or minutes and seconds"},
		{"clock h:mm", &Duration, "2:05", Duration.Unit("h:mm"), Unsure, 7500, ""},
		{"clock mm:ss", &Duration, "2:05", Duration.Unit("mm:ss"), Unsure, 125, ""},
		{"three parts", &Duration, "1:02:03", minute, Unsure, 3723, ""},
		{"bare number under h:mm", &Duration, "2", Duration.Unit("h:mm"), Unsure, 0, "form h:mm"},
		{"decimal comma", &Length, "1,5", mm, Unsure, 0.0015, ""},
		{"ambiguous", &Length, "1,234", mm, Unsure, 0, "1234 or as 1.234"},
		{"ambiguous point", &Length, "1.234", mm, Unsure, 0, "1234 or as 1.234"},
		{"comma by the file", &Length, "1,234", mm, Comma, 0.001234, ""},
		{"thousands by the file", &Length, "1,234", mm, Point, 1.234, ""},
		{"against the file", &Length, "1,5", mm, Point, 0, "decimal comma"},
		{"both signs", &Length, "1.234,5", mm, Unsure, 1.2345, ""},
		{"thousands by narrow blank", &Length, "1\u202f234,5", mm, Unsure, 1.2345, ""},
		{"leading zero is no thousand", &Length, "0,234", mm, Unsure, 0.000234, ""},
		{"exponent", &Length, "1e-1", mm, Unsure, 0.0001, ""},
		{"NaN", &Length, "NaN", mm, Unsure, 0, "not a number"},
		{"Inf", &Length, "Inf", mm, Unsure, 0, "not a number"},
		{"overflow", &Length, "1e400", mm, Unsure, 0, "not a number"},
		{"comparison", &Temperature, "≥75", degC, Unsure, 0, "comparison"},
		{"two numbers", &Length, "20 30", mm, Unsure, 0, "single number"},
		{"full-width digit", &Length, "５", mm, Unsure, 0.005, ""},
		{"full-width number and unit", &Length, "１．５　ｃｍ", mm, Unsure, 0.015, ""},
		{"full-width sign before °C as one letter", &Temperature, "－１８ ℃", nil, Unsure, -18, ""},
		{"°F as one letter", &Temperature, "165℉", degC, Unsure, (165 - 32) / 1.8, ""},
		{"full-width slash", &Temperature, "２／４", degC, Unsure, 0, "range or a fraction"},
		{"full-width sign before three digits", &Length, "１，２３４", mm, Unsure, 0, "1234 or as 1.234"},
		{"raised digit is no digit", &Length, "10²", mm, Unsure, 0, "unit of length"},
		{"range", &Length, "20-30", mm, Unsure, 0, "single number"},
		{"a range by a slash, °C", &Temperature, "2/4", degC, Unsure, 0, "range or a fraction"},
		{"a range by a slash, own unit", &Temperature, "2/4 °F", degC, Unsure, 0, "range or a fraction"},
		{"a range by a slash, cm", &Length, "5/7 cm", mm, Unsure, 0, "range or a fraction"},
		{"a half by a slash, mm", &Length, "1/2", mm, Unsure, 0, "range or a fraction"},
		{"a range by a slash, h", &Duration, "5/6 h", minute, Unsure, 0, "range or a fraction"},
		{"a half of a quarter, h", &Duration, "2/4 h", minute, Unsure, 0, "range or a fraction"},
		{"a quarter by a slash, min", &Duration, "1/4", minute, Unsure, 0, "range or a fraction"},
		{"a range by a slash, in", &Length, "2/1 in", mm, Unsure, 0, "range or a fraction"},
		{"a seventh, in", &Length, "5/7 in", mm, Unsure, 0, "range or a fraction"},
		{"a range of a difference", &Difference, "1/2", Difference.Unit("°C difference"), Unsure, 0, "range or a fraction"},
		{"a range by the sign of fractions", &Temperature, "2⁄4", degC, Unsure, 0, "range or a fraction"},
		{"a range by a slash, plain number", &Number, "1/2", &Number.Units[0], Unsure, 0, "range or a fraction"},
		{"a range of a range", &Temperature, "2-3/4", degC, Unsure, 0, "range or a fraction"},
		{"64ths of an inch", &Length, "5/64", Length.Unit("in"), Unsure, 5. / 64 * 0.0254, ""},
		{"a third of a foot", &Length, "1⁄3 ft", mm, Unsure, 0.3048 / 3, ""},
		{"inches by a hyphen", &Length, "1-1/2 in", mm, Unsure, 1.5 * 0.0254, ""},
		{"three quarters of an hour", &Duration, "3/4 h", minute, Unsure, 2700, ""},
		{"half a day", &Duration, "1/2", Duration.Unit("d"), Unsure, 43200, ""},
		{"a whole number and a half", &Duration, "1 1/2", minute, Unsure, 90, ""},
		{"a half by its sign", &Length, "½ cm", mm, Unsure, 0.005, ""},
		{"division by zero", &Length, "1/0 in", mm, Unsure, 0, "not a number"},
		{"feet a second", &Speed, "10 ft/s", Speed.Unit("m/s"), Unsure, 3.048, ""}, // 1 ft = 0.3048 m exactly (international yard, 1959)
		{"unit of a bare number", &Number, "3 kg", &Number.Units[0], Unsure, 0, "plain number"},
		{"Cyrillic C", &Temperature, "75 °С", degC, Unsure, 0, `has the unit "°С" with the Cyrillic letter С – type it in Latin letters: °C`},
		{"Cyrillic m", &Length, "25 мм", mm, Unsure, 0, "Cyrillic letter м"},
		{"Cyrillic C of a difference", &Difference, "10 °С", Difference.Unit("°C difference"), Unsure, 0, "type it in Latin letters: °C difference"},
		{"Greek K", &Film, "25 W/m²Κ", Film.Unit("W/m2K"), Unsure, 0, "Greek letter Κ"},
		{"Cyrillic letters of no unit", &Length, "25 рср", mm, Unsure, 0, "is not a number with a unit of length"},
		{"per cent in the cell", &Percent, "65 %", &Percent.Units[0], Unsure, 65, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			v, m := c.q.Parse(c.text, c.heading, c.d)
			switch {
			case c.says == "" && m != nil:
				t.Fatalf("%q: %v", c.text, m)
			case c.says != "" && m == nil:
				t.Fatalf("%q was read as %g", c.text, v.Computed)
			case c.says != "" && !strings.Contains(m.Error(), c.says):
				t.Fatalf("%q: %v, want %q", c.text, m, c.says)
			case math.Abs(v.Computed-c.want) > 1e-12*math.Abs(c.want):
				t.Fatalf("%q = %.17g, want %.17g", c.text, v.Computed, c.want)
			}
		})
	}
}

func TestSpellings(t *testing.T) {
	for _, c := range []struct {
		q      *Quantity
		names  []string
		prints string
	}{
		{&Film, []string{"W/m2K", "W/(m2 K)", "W/m²·K", "W/(m²·K)", "W/m^2 K", "W m⁻² K⁻¹"}, "W/m²·K"},
		{&Length, []string{"mm", "ｍｍ", "㎜"}, "mm"},
		{&Area, []string{"㎡", "ｍ２"}, "m²"},
		{&Temperature, []string{"℉", "°Ｆ"}, "°F"},
		{&Percent, []string{"％"}, "%"},
		{&Temperature, []string{"degC", "°C", "℃", "º C", "c"}, "°C"},
		{&Resistance, []string{"m²K/W", "m2 K/W", "m²·K/W"}, "m²K/W"},
		{&Conductivity, []string{"W/mK", "W/(m·K)", "W/m·K"}, "W/m·K"},
		{&Duration, []string{"min", "min.", "Minutes"}, "min"},
	} {
		for _, n := range c.names {
			if u := c.q.Unit(n); u == nil || u.Name() != c.prints {
				t.Errorf("%s: %q is %v, want %s", c.q.Name, n, u, c.prints)
			}
		}
	}
}

// Every unit goes there and back, and no spelling belongs to two units of one quantity.
func TestUnits(t *testing.T) {
	for _, q := range []Quantity{Temperature, Difference, Length, Duration, Volume, Area, Film, Speed, Conductivity, Density, SpecificHeat, Resistance, Percent, Number} {
		owner := map[string]string{}
		for _, u := range q.Units {
			if got := u.Out(u.In(12.3)); math.Abs(got-12.3) > 1e-12 {
				t.Errorf("%s %s: 12.3 comes back as %.17g", q.Name, u.Name(), got)
			}
			for _, n := range u.Names {
				if o, ok := owner[plainSpelling(n)]; ok && o != u.Name() {
					t.Errorf("%s: %q is both %s and %s", q.Name, n, o, u.Name())
				}
				owner[plainSpelling(n)] = u.Name()
			}
		}
	}
}

func TestEvidence(t *testing.T) {
	for text, want := range map[string]Decimal{"1,5": Comma, "0.5": Point, "1,234": Unsure, "1.234": Unsure, "1.234,5": Comma, "1,234.5": Point, "12": Unsure, "1.234.567": Comma, "1 1/2": Unsure, "abc": Unsure} {
		if got := Evidence(text); got != want {
			t.Errorf("%q: %v, want %v", text, got, want)
		}
	}
}

func FuzzCell(f *testing.F) {
	for _, s := range []string{"1 1/4 in", "1¼", "2:05", "1 h 30 min", "1,234", "165 °F", "NaN", "1e999", "", "½½", "-", "1/0", "５", "－１．５　℃", "２／４", "2/4", "5/7 cm", "5⁄6 h", "1-3/4 in", "2 1/2 °C", "/", "1/2/3", "1.2.3,4"} {
		f.Add(s, 0)
	}
	qs := []Quantity{Temperature, Difference, Length, Duration, Film, Percent, Number}
	f.Fuzz(func(t *testing.T, s string, d int) {
		for i := range qs {
			q := &qs[i]
			v, m := q.Parse(s, &q.Units[len(q.Units)-1], Decimal(uint(d)%3))
			if m == nil && (math.IsNaN(v.Computed) || math.IsInf(v.Computed, 0)) {
				t.Fatalf("%s %q gives %g", q.Name, s, v.Computed)
			}
			if m == nil && strings.ContainsAny(s, "/⁄") && q == &Temperature && !strings.Contains(tidy(s), " ") {
				t.Fatalf("%s %q is taken, as %g", q.Name, s, v.Computed)
			}
			if m != nil && (m.Says == "" || m.Mend == "") {
				t.Fatalf("%s %q: empty mistake", q.Name, s)
			}
		}
		Evidence(s)
	})
}

// TestAmbiguous: one sign before three digits is in doubt, and nothing else is.
func TestAmbiguous(t *testing.T) {
	for text, want := range map[string]bool{"1,500": true, "1.050 kg/m³": true, "-12,345": true, "0,500": false, "1,50": false, "1500": false,
		"1,234.5": false, "1 1/4": false, "words": false, "": false} {
		if got := Ambiguous(text); got != want {
			t.Errorf("%q: %v", text, got)
		}
	}
}

// TestLasting: times as a person says them, each at the edge of its form.
func TestLasting(t *testing.T) {
	for s, want := range map[float64]string{0: "0 s", 2.54: "2.5 s", 9.99: "10 s", 59.4: "59 s", 59.6: "1 min", 90: "1 min 30 s", 3599.6: "1 h", 3660: "1 h 01 min", 5400: "1 h 30 min", 360000: "100 h"} {
		if got := Lasting(s, nil); got != want {
			t.Errorf("%g s: %q, want %q", s, got, want)
		}
	}
	if got := Lasting(61.2, func(v float64, _ int) float64 { return math.Ceil(v) }); got != "1 min 02 s" {
		t.Errorf("61.2 s rounded up: %q", got)
	}
}
