package report

import (
	"bytes"
	"strings"
	"sync"

	"codeberg.org/go-fonts/dejavu/dejavusans"
	"codeberg.org/go-fonts/dejavu/dejavusansbold"
	"github.com/jung-kurt/gofpdf"
)

// usual holds the characters beyond the Latin letters of Europe that the reports themselves use. With those it is in every cut-out
// of the fonts, so that nearly all documents share one.
const usual = "π–—‘’“”„…•√≈≠≤≥−←→↑↓☐☑✓✗\uFFFD"

// always tells of characters that every cut-out holds: Latin up to U+017F and the usual ones.
func always(r rune) bool { return r < 0x180 || strings.ContainsRune(usual, r) }

// blocks are the runs of 128 characters that a document uses beyond those that are always there; each is cut out whole.
type blocks [65536 / 128]bool

// add notes what clean text needs, and tells whether it needs more than the texts before.
func (b *blocks) add(s string) (more bool) {
	for _, r := range s {
		if r < 65536 && !b[r/128] && !always(r) {
			b[r/128], more = true, true
		}
	}
	return more
}

// cutOuts keeps what has been cut out of the fonts, regular and bold; a plan needs one or two of each. Reading and cutting the
// whole font takes longer than all the rest of a report.
var cutOuts struct {
	sync.Mutex
	of [2]map[blocks][]byte
}

// cutOut gives a font file with what a document uses. It is the caller's own, for the PDF library writes into it.
func cutOut(bold bool, used blocks) []byte {
	k, all := btoi(bold), &cutOuts
	all.Lock()
	defer all.Unlock()
	ttf := all.of[k][used]
	if ttf == nil {
		ttf = cut(bold, used)
		if all.of[k] == nil || len(all.of[k]) > 50 { // of plans without end
			all.of[k] = map[blocks][]byte{}
		}
		all.of[k][used] = ttf
	}
	return bytes.Clone(ttf)
}

// cut cuts what is always there and whole blocks out of a font.
func cut(bold bool, used blocks) []byte {
	k := btoi(bold)
	w := &dejavu().width[k]
	var set strings.Builder
	for r := ' '; r < 65536; r++ {
		if w[r] >= 0 && (used[r/128] || always(r)) {
			set.WriteRune(r)
		}
	}
	return gofpdf.UTF8CutFont(bytes.Clone([2][]byte{dejavusans.TTF, dejavusansbold.TTF}[k]), set.String())
}
