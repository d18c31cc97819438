package workbook

import (
	"fmt"
	"hash/fnv"
	"io"
	"strconv"
	"strings"
)

// Filled is a filled cell of a made row, as it goes into its checksum.
type Filled struct {
	Heading string // of the row of headings, with its unit or without
	Text    string // as stored; of a number its digits, with a decimal point
	Number  bool   // stored as a number and not as text
}

// Checksum is that of a made row, by which the reader of the plan tells whether it was edited since: FNV-1a of 32 bits, as eight
// hexadecimal digits, over `heading=text` of its filled cells in the order of their columns, with the control character 1F between
// them. Headings go without their units; cells headed with # do not count; a number is written in the fewest digits that give it back.
func Checksum(cells []Filled) string {
	sum := fnv.New32a()
	n := 0
	for _, c := range cells {
		name, _ := SplitHeading(tidy(c.Heading))
		text := asStored(c.Text, c.Number)
		if strings.HasPrefix(name, "#") || text == "" {
			continue
		}
		if n++; n > 1 {
			io.WriteString(sum, "\x1f")
		}
		io.WriteString(sum, name)
		io.WriteString(sum, "=")
		io.WriteString(sum, text)
	}
	return fmt.Sprintf("%08x", sum.Sum32())
}

// asStored is the text of a cell for a checksum: two spellings of one number, such as 0.1 and 0.10000000000000001, are equal.
func asStored(text string, number bool) string {
	if number {
		if x, err := strconv.ParseFloat(text, 64); err == nil {
			return strconv.FormatFloat(x, 'g', -1, 64)
		}
	}
	return tidy(text)
}
