package intake

import (
	"testing"

	"slowpoint/cmd/slowpoint/workbook"
	"slowpoint/model/unit"
)

// TestValue: what goes into the plan is what was typed, and the reader of plans computes with the same number as one that reads theirs.
func TestValue(t *testing.T) {
	steps, products, foods := workbook.SheetNamed("Steps"), workbook.SheetNamed("Products"), workbook.SheetNamed("Foods")
	for _, c := range []struct {
		name    string
		column  *workbook.Column
		e       workbook.Entry
		heading string // unit; "" = none
		d       unit.Decimal
		own     bool
		text    string
		number  bool
		unit    string
	}{
		{"a number", products.Column("Thickness"), workbook.Entry{Kind: workbook.Figure, Text: "45.5"}, "mm", unit.Unsure, false, "45.5", true, "mm"},
		{"a number with the digits of its storage", products.Column("Thickness"), workbook.Entry{Kind: workbook.Figure, Text: "4.5499999999999998"}, "cm", unit.Unsure, false, "4.55", true, "cm"},
		{"a number with an exponent", steps.Column("Wrap resistance"), workbook.Entry{Kind: workbook.Figure, Text: "2.5E-4"}, "m²K/W", unit.Unsure, false, "0.00025", true, "m²K/W"},
		{"a decimal comma", products.Column("Thickness"), workbook.Entry{Kind: workbook.Text, Text: "4,5"}, "cm", unit.Comma, false, "4.5", true, "cm"},
		{"thousands", steps.Column("Duration"), workbook.Entry{Kind: workbook.Text, Text: "1.234,5"}, "min", unit.Comma, false, "1234.5", true, "min"},
		{"its own unit", steps.Column("Temperature"), workbook.Entry{Kind: workbook.Text, Text: "165F"}, "°C", unit.Unsure, false, "165 °F", false, "°C"},
		{"its own unit and a decimal comma", products.Column("Thickness"), workbook.Entry{Kind: workbook.Text, Text: "4,5 cm"}, "", unit.Comma, false, "4.5 cm", false, ""},
		{"its own unit in the mapping", products.Column("Thickness"), workbook.Entry{Kind: workbook.Text, Text: "4,5 cm"}, "", unit.Unsure, true, "4.5", true, "cm"},
		{"a fraction", products.Column("Thickness"), workbook.Entry{Kind: workbook.Text, Text: "1 1/4"}, "in", unit.Unsure, false, "1 1/4 in", false, "in"},
		{"hours and minutes", steps.Column("Duration"), workbook.Entry{Kind: workbook.Text, Text: "1 h 30 min"}, "min", unit.Unsure, false, "1 h 30 min", false, "min"},
		{"hours and minutes with a comma", steps.Column("Duration"), workbook.Entry{Kind: workbook.Text, Text: "1 h 7,5 min"}, "min", unit.Comma, false, "67.5", true, "min"},
		{"a clock in words", steps.Column("Duration"), workbook.Entry{Kind: workbook.Text, Text: "3:30"}, "h:mm", unit.Unsure, false, "3:30", false, "h:mm"},
		{"a clock", steps.Column("Duration"), workbook.Entry{Kind: workbook.Figure, Form: workbook.Clock, Text: "0.0625"}, "", unit.Unsure, false, "90", true, "min"},
		{"a clock under hours", steps.Column("Duration"), workbook.Entry{Kind: workbook.Figure, Form: workbook.Clock, Text: "0.0625"}, "h", unit.Unsure, false, "1.5", true, "h"},
		{"a clock of seconds", steps.Column("Duration"), workbook.Entry{Kind: workbook.Figure, Form: workbook.Clock, Text: "0.00081018518518518516"}, "h", unit.Unsure, false, "70", true, "s"},
		{"a percentage", foods.Column("Water"), workbook.Entry{Kind: workbook.Figure, Form: workbook.Percent, Text: "0.655"}, "%", unit.Unsure, false, "65.5", true, "%"},
		{"a plain number", steps.Column("Emissivity"), workbook.Entry{Kind: workbook.Text, Text: "0,9"}, "", unit.Comma, false, "0.9", true, ""},
		{"words", products.Column("Family"), workbook.Entry{Kind: workbook.Text, Text: "Purées, warm"}, "", unit.Comma, false, "Purées, warm", false, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			var u *unit.Unit
			q := c.column.Quantity
			if q != nil && c.heading != "" {
				u = q.Unit(c.heading)
			}
			g := &workbook.Grid{}
			taken, e := c.column.Take(&c.e, workbook.Under{Grid: g, Unit: u, Decimal: c.d})
			if e != nil {
				t.Fatal(e)
			}
			v := Value{Column: c.column}
			v.set(&c.e, taken, u, c.d, c.own)
			if v.Text != c.text || v.Number != c.number || v.Unit != c.unit {
				t.Fatalf("%q %v %q, want %q %v %q", v.Text, v.Number, v.Unit, c.text, c.number, c.unit)
			}
			if q == nil {
				return
			}
			again, m := q.Parse(v.Text, q.Unit(v.Unit), unit.Point)
			if m != nil || again.Computed != taken.Value.Computed {
				t.Errorf("the plan says %v (%v), theirs %v", again, m, taken.Value)
			}
		})
	}
}

func TestHeadingUnit(t *testing.T) {
	for _, c := range []struct {
		q             *unit.Quantity
		heading, want string
	}{
		{&unit.Temperature, "Oven (°C)", "°C"},
		{&unit.Temperature, "Oven [degF]", "°F"},
		{&unit.Temperature, "Oven, °C", "°C"},
		{&unit.Temperature, "T0 °C", "°C"},
		{&unit.Temperature, "Cook › °C", "°C"},
		{&unit.Temperature, "Cook (°F) › Target", "°F"},
		{&unit.Temperature, "Oven", ""},
		{&unit.Temperature, "Oven C", ""}, // oven C of three
		{&unit.Temperature, "Oven (core)", ""},
		{&unit.Duration, "Cook (min)", "min"},
		{&unit.Duration, "Cook min", ""}, // at least
		{&unit.Duration, "Cook, h", "h"},
		{&unit.Length, "H mm", "mm"},
		{&unit.Length, "Put in", ""},
		{&unit.Percent, "Water %", "%"},
		{&unit.Difference, "z (°C)", ""}, // a temperature, or a difference
	} {
		u, _ := headingUnit(c.q, c.heading)
		got := ""
		if u != nil {
			got = u.Name()
		}
		if got != c.want {
			t.Errorf("%s %q: %q, want %q", c.q.Name, c.heading, got, c.want)
		}
	}
}
