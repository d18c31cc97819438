package codes

import (
	"slices"
	"strings"
)

// nearest lists the three ids closest to one that is unknown: first those that contain it or that it contains,
// then by the number of characters to change.
func nearest(all []Row, id string) []string {
	id = strings.ToLower(strings.TrimSpace(id))
	var names []string
	for _, r := range all {
		for _, n := range append([]string{r.ID, r.Clause()}, r.Covers...) {
			if !slices.Contains(names, n) {
				names = append(names, n)
			}
		}
	}
	far := make(map[string]int, len(names))
	for _, n := range names {
		low := strings.ToLower(n)
		far[n] = edits([]rune(id), []rune(low))
		if id != "" && (strings.Contains(low, id) || strings.Contains(id, low)) {
			far[n] -= 1000
		}
	}
	slices.SortStableFunc(names, func(a, b string) int { return far[a] - far[b] })
	return names[:min(3, len(names))]
}

// edits counts the insertions, deletions and replacements that turn a into b (V. I. Levenshtein, 1966).
func edits(a, b []rune) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i, ra := range a {
		diagonal := row[0]
		row[0] = i + 1
		for j, rb := range b {
			change := diagonal
			if ra != rb {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
