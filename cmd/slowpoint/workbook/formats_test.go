package workbook

import "testing"

// TestShownAsStored: which numbers a number format shows otherwise than they are stored (ECMA-376 part 1, 18.8.31; what programs do where
// it is silent is common practice, no source).
func TestShownAsStored(t *testing.T) {
	const h = 1. / 24
	for _, c := range []struct {
		code string
		x    float64
		form Form
		want Display
	}{
		{"General", 4.25, Bare, AsStored}, {"0", 4.4, Bare, AsStored}, {"0.00", -18, Bare, AsStored}, {"#,##0.00", 4321, Bare, AsStored},
		{`#\ ##0.0`, 4321, Bare, AsStored}, {`# ##0`, 4321, Bare, AsStored}, {"@", 4, Bare, AsStored}, {"000", 7, Bare, AsStored},
		{"[Red]0.0", 4, Bare, AsStored}, {"# ?/?", 1.25, Bare, AsStored}, {"# ?/4", 1.25, Bare, AsStored}, {"0.00E+00", 2e-4, Bare, AsStored},
		{`0.0" °C"`, 5, Worded, AsStored}, {`0" kg/m3"`, 5, Worded, AsStored}, {`General" min"`, 5, Worded, AsStored}, {"0%", 0.6, Percent, AsStored},
		{`[$-407]0.0`, 5, Bare, AsStored}, {`"about "0`, 5, Bare, AsStored}, {`"2 × "0`, 5, Bare, AsStored}, {`0\.`, 5, Bare, AsStored},
		// a section for each sign
		{"0.0;-0.0", -18, Bare, AsStored}, {"0.0;(0.0)", -18, Bare, AsStored}, {"0.0;[Red]0.0", -18, Bare, AsStored}, {"0.0;0.0", -18, Bare, Otherwise},
		{"0.0;0.0", 18, Bare, AsStored}, {"0.0;-0.0;;@", 18, Bare, AsStored}, {"0.0;-0.0;;@", 0, Bare, Nothing}, {"0.0;@", -18, Bare, AsStored},
		{`_(* #,##0.00_);_(* \(#,##0.00\);_(* "-"??_);_(@_)`, 75, Bare, AsStored}, {`_(* #,##0.00_);_(* \(#,##0.00\);_(* "-"??_);_(@_)`, -75, Bare, AsStored},
		{`_(* #,##0.00_);_(* \(#,##0.00\);_(* "-"??_);_(@_)`, 0, Bare, AsStored}, {`0;-0;"-"`, 0, Bare, AsStored}, {`0;-0;"none"`, 0, Bare, InWords},
		{`0;"too cold"`, -18, Bare, InWords},
		// nothing, words, another number
		{";;;", 4, Bare, Nothing}, {";;;", -4, Bare, Nothing}, {`""`, 4, Bare, Nothing}, {"#", 0, Bare, Nothing}, {"#.#", 0.04, Bare, Nothing}, {"#.#", 0.06, Bare, AsStored},
		{`"2"`, 4, Bare, InWords}, {`"-"`, 4, Bare, InWords}, {`\2`, 4, Bare, InWords}, {"0,", 4000, Bare, Thousands}, {"#,##0,", 4000, Bare, Thousands}, {"0.0,", 4000, Bare, Thousands},
		{`0,," M"`, 4e6, Worded, Thousands}, {"0,.0", 4000, Bare, Thousands}, {`"1"0`, 5, Bare, Otherwise}, {`0"0"`, 5, Bare, Otherwise}, {`0".5"`, 5, Bare, Otherwise},
		{`0"."0`, 55, Bare, Otherwise}, {"-0", 5, Bare, Otherwise}, {`"-"0`, 5, Bare, Otherwise}, {"0%%", 0.6, Percent, Otherwise}, {"[$1 -409]0", 5, Bare, AsStored}, {"[$1-409]0", 5, Bare, Otherwise},
		// conditions
		{`[>100]0;"2"`, 5, Bare, InWords}, {`[>100]0;"2"`, 105, Bare, AsStored}, {"[<10]0.0;0", 12, Bare, AsStored}, {"[<10]0.0;0", -12, Bare, AsStored},
		{"[>=1000]0,;0", 4000, Bare, Thousands}, {"[>=1000]0,;0", 400, Bare, AsStored}, {`[=1]"one";[=2]"two";0`, 2, Bare, InWords}, {`[=1]"one";[=2]"two";0`, 3, Bare, AsStored},
		{"[<0][Red]-0.0;0.0", -5, Bare, AsStored}, {"[Red][<0]-0.0;0.0", -5, Bare, AsStored}, {"[<0]0.0;0.0", -5, Bare, Otherwise}, {"[>100]0;0;0", -5, Bare, Otherwise},
		{"[<=4]0,;0", 4, Bare, Thousands}, {"[<>4]0,;0", 4, Bare, AsStored}, {`0.0;"−"0.0`, -18, Bare, AsStored}, {"#%", 0.06, Percent, AsStored}, {"#'##0", 4000, Bare, AsStored},
		{`"ca."0`, 150, Bare, AsStored}, {`"Nr."0`, 15, Bare, AsStored}, {`"."0`, 15, Bare, Otherwise}, {`"1."0`, 15, Bare, Otherwise}, {"", 15, Bare, AsStored},
		{"[>100]0", 5, Bare, Otherwise}, {"[<1]h:mm;0.0", 5, Bare, AsStored}, {"[<1]h:mm;0.0", 5 * h, Clock, AsStored},
		// times
		{"h:mm", 2 * h, Clock, AsStored}, {"h:mm", 26 * h, Clock, OverDays}, {"hh:mm:ss", 24 * h, Clock, OverDays}, {"h:mm", 24*h - 1e-9, Clock, OverDays}, {"h:mm", 23.9 * h, Clock, AsStored},
		{"[h]:mm", 26 * h, Clock, AsStored}, {"[mm]:ss", 26 * h, Clock, AsStored}, {"mm:ss", 0.9 * h, Clock, AsStored}, {"mm:ss.0", 1.5 * h, Clock, OverHours},
		{"ss.0", 0.5 * h, Clock, OverMinutes}, {"[$-F400]h:mm:ss", 26 * h, Clock, OverDays}, {"h:mm AM/PM", 14 * h, Clock, TimeOfDay}, {"h:mm AM/PM", 2 * h, Clock, TimeOfDay},
		{"[mm]", 26 * h, Clock, AsStored}, {"[h]", 26 * h, Clock, AsStored}, {"[s]", 0.1 * h, Clock, AsStored}, {`[m]" min"`, 26 * h, Clock, AsStored},
		{"h:mm 上午/下午", 14 * h, Clock, TimeOfDay}, {`[$-F400]h:mm:ss\ AM/PM`, 14 * h, Clock, TimeOfDay},
		{"h:mm a/p", 2 * h, Clock, TimeOfDay}, {`h" h "mm" min"`, 2 * h, Clock, AsStored}, {`h" ap "mm`, 2 * h, Clock, AsStored}, {"yyyy-mm-dd", 46023, Date, AsStored},
	} {
		b := &book{}
		f := b.numberFormat(c.code)
		if form, shows := f.of(c.x); form != c.form || shows != c.want {
			t.Errorf("%s of %g: form %d, %d; want %d, %d", c.code, c.x, form, shows, c.form, c.want)
		}
		if f.plain() && c.want != AsStored {
			t.Errorf("%s is taken as plain", c.code)
		}
	}
}
