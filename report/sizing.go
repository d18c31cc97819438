package report

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strings"
	"text/tabwriter"

	"slowpoint/rules"
)

// SizeSchema names the form of size.json.
const SizeSchema = "slowpoint/size/1"

// SizePoint is a value that was judged.
type SizePoint struct {
	Value    float64 // in the unit of its Sizing
	Words    string  // in the user's own unit
	Findings []rules.Finding
	Meets    bool
	Refused  string // why it cannot be calculated; "" if it can
}

// Sizing is a search for the values of one number of a product that meet its limits.
type Sizing struct {
	Product, Process, What string // What: "thickness", "duration of simmer"
	Unit                   string // of the values: mm, min or °C
	Most                   bool   // the largest value that meets was asked for, not the smallest
	Basis                  string // what was judged, in a sentence
	Step, Spacing, Stride  string // the resolution, and how far apart the values of the first look lie where a limit comes near and elsewhere, in the user's own unit
	Now                    *SizePoint
	Curve                  []*SizePoint    // rising
	Meets                  [][2]*SizePoint // the runs of neighbouring values that meet: first and last
	Answer                 *SizePoint      // nil: no value meets
	Next                   *SizePoint      // the neighbour beyond the answer, which does not meet; nil: the answer lies at the end of the range
	Fixed                  []string        // missed limits that do not depend on the value, left out in the search; none if all were judged
}

// Conclude finds the answer from the curve.
func (s *Sizing) Conclude() {
	for i := 0; i < len(s.Curve); i++ {
		if !s.Curve[i].Meets {
			continue
		}
		from := i
		for i+1 < len(s.Curve) && s.Curve[i+1].Meets {
			i++
		}
		s.Meets = append(s.Meets, [2]*SizePoint{s.Curve[from], s.Curve[i]})
		if s.Most || s.Answer == nil {
			end, beyond := from, from-1
			if s.Most {
				end, beyond = i, i+1
			}
			s.Answer, s.Next = s.Curve[end], nil
			if beyond >= 0 && beyond < len(s.Curve) {
				s.Next = s.Curve[beyond]
			}
		}
	}
}

// Found tells whether a value meets every limit.
func (s *Sizing) Found() bool { return s.Answer != nil && len(s.Fixed) == 0 }

// decides is the finding that settles the verdict at a value: the worst must finding, and of those that are met the tightest; nil if none.
func (p *SizePoint) decides() *rules.Finding {
	var worst *rules.Finding
	for i := range p.Findings {
		f := &p.Findings[i]
		if f.Level != "must" || f.Verdict == rules.NotApplicable {
			continue
		}
		if worst == nil || weight(f.Verdict) < weight(worst.Verdict) || f.Verdict == worst.Verdict && tightness(f) < tightness(worst) {
			worst = f
		}
	}
	return worst
}

// verdict is that of a value, in a word.
func (p *SizePoint) verdict() string {
	switch f := p.decides(); {
	case p.Refused != "":
		return say("size refused")
	case f == nil:
		return rules.CannotTell.String()
	default:
		return f.Verdict.String()
	}
}

// room is what the deciding limit leaves, or lacks.
func (p *SizePoint) room(h *Head) string {
	f := p.decides()
	if f == nil || p.Refused != "" {
		return ""
	}
	r := Row{Verdict: f.Verdict, MarginK: lackingOnly(f, f.MarginK), MarginS: lackingOnly(f, f.MarginS)}
	return r.Room(h)
}

// missing names the must limits that a value does not meet, the first three.
func (p *SizePoint) missing() string {
	var names []string
	for i := range p.Findings {
		if f := &p.Findings[i]; f.Level == "must" && f.Verdict != rules.Met && f.Verdict != rules.NotApplicable {
			names = append(names, fmt.Sprintf("%q %s", f.Limit.Name, f.Verdict))
		}
	}
	if n := len(names); n > 3 {
		names = append(names[:3], say("size more", n-3))
	}
	return strings.Join(names, ", ")
}

// sizedLimit is what the search says of one limit that must be met.
type sizedLimit struct {
	Limit  string `json:"limit"`
	Effect string `json:"effect"` // depends, met throughout, met nowhere, none
	words  string
}

// limits says of each must limit whether the value bears on it and where it is met.
func (s *Sizing) limits() []sizedLimit {
	var order []*rules.Limit
	said := map[*rules.Limit][]*SizePoint{}
	find := func(p *SizePoint, l *rules.Limit) *rules.Finding {
		for i := range p.Findings {
			if p.Findings[i].Limit == l {
				return &p.Findings[i]
			}
		}
		return nil
	}
	for _, p := range s.Curve {
		for i := range p.Findings {
			f := &p.Findings[i]
			if f.Level != "must" || f.Verdict == rules.NotApplicable || p.Refused != "" {
				continue
			}
			if said[f.Limit] == nil {
				order = append(order, f.Limit)
			}
			said[f.Limit] = append(said[f.Limit], p)
		}
	}
	var out []sizedLimit
	for _, l := range order {
		ps := said[l]
		first := find(ps[0], l)
		same, met := true, 0
		for _, p := range ps {
			f := find(p, l)
			same = same && first.Same(f)
			if f.Verdict == rules.Met {
				met++
			}
		}
		one := sizedLimit{Limit: l.Name}
		switch {
		case same:
			one.Effect, one.words = "none", say("size no effect", l.Name, s.What, first.Verdict)
		case met == len(ps):
			one.Effect, one.words = "met throughout", say("size throughout", l.Name)
		case met == 0:
			one.Effect, one.words = "met nowhere", say("size nowhere", l.Name)
		default:
			one.Effect, one.words = "depends", say("size depends", l.Name)
		}
		out = append(out, one)
	}
	return out
}

// end is what is asked for: the largest size, the shortest duration, the coldest temperature and so on.
func (s *Sizing) end() string {
	of := func(what string) bool { return strings.HasPrefix(s.What, what) || strings.Contains(s.What, " "+what) }
	keys := [2]string{"size smallest", "size largest"}
	switch {
	case of("temperature"), of("until"):
		keys = [2]string{"size coldest", "size warmest"}
	case of("duration"):
		keys = [2]string{"size shortest", "size longest"}
	}
	if s.Most {
		return say(keys[1])
	}
	return say(keys[0])
}

// headline is the answer in a sentence.
func (s *Sizing) headline() string {
	kind, every := s.end(), say("size every")
	if len(s.Fixed) > 0 {
		every = say("size every other")
	}
	if s.Answer == nil {
		return say("size none", s.What, s.Curve[0].Words, s.Curve[len(s.Curve)-1].Words)
	}
	return say("size answer", kind, s.What, every, s.Answer.Words, s.Now.Words, s.Now.verdict())
}

// sentences are what must be read with the answer.
func (s *Sizing) sentences(h *Head) []string {
	out := []string{s.Basis}
	if len(s.Fixed) > 0 {
		out = append(out, say("size fixed", strings.Join(s.Fixed, "\", \""), s.What))
	}
	if a := s.Answer; a != nil {
		switch {
		case s.Next == nil && len(s.Meets) == 1 && len(s.Curve) > 1 && s.Meets[0] == [2]*SizePoint{s.Curve[0], s.Curve[len(s.Curve)-1]}:
			out = append(out, say("size both ends", s.Curve[0].Words, s.Curve[len(s.Curve)-1].Words))
		case s.Next == nil:
			out = append(out, say("size at end", a.Words))
		case s.Next.Refused != "":
			out = append(out, say("size next refused", s.Next.Words, s.Next.Refused))
		default:
			out = append(out, say("size next", s.Next.Words, s.Next.missing()))
		}
		if f := a.decides(); f != nil {
			if room := a.room(h); room != "" {
				out = append(out, say("size binds", a.Words, f.Limit.Name, room))
			}
		}
		var runs []string
		for _, m := range s.Meets {
			if m[0] == m[1] {
				runs = append(runs, m[0].Words)
			} else {
				runs = append(runs, say("size run", m[0].Words, m[1].Words))
			}
		}
		out = append(out, say("size meets", strings.Join(runs, "; ")))
		if len(runs) > 1 {
			out = append(out, say("size several"))
		}
	}
	out = append(out, say("size looked", s.Curve[0].Words, s.Curve[len(s.Curve)-1].Words, s.Stride, s.Spacing, s.Step))
	for _, l := range s.limits() {
		if l.Effect != "depends" {
			out = append(out, l.words)
		}
	}
	return out
}

// WriteSizing writes a search as text; with the curve if wanted.
func WriteSizing(w io.Writer, h *Head, s *Sizing, curve bool) error {
	fmt.Fprintf(w, "%s: %s\n", oneLine(s.Product), oneLine(s.headline()))
	for _, t := range s.sentences(h) {
		fmt.Fprintf(w, "  %s\n", oneLine(t))
	}
	if !curve {
		return nil
	}
	fmt.Fprintln(w)
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintf(t, "  %s\t%s\t%s\t%s\n", s.What, say("col verdict"), say("col deciding"), say("col margin"))
	for _, p := range s.Curve {
		name, room := "", p.room(h)
		if f := p.decides(); f != nil {
			name = f.Limit.Name
		}
		if p.Refused != "" {
			room = p.Refused
		}
		fmt.Fprintf(t, "  %s\t%s\t%s\t%s\n", p.Words, p.verdict(), oneLine(name), oneLine(room))
	}
	return t.Flush()
}

// The parts of size.json. Values are in the unit that stands beside them; a number that does not exist is null.
type (
	sizeJSON struct {
		Schema   string        `json:"schema"`
		Version  string        `json:"version"`
		Date     string        `json:"date"`
		Plan     string        `json:"plan"`
		SHA256   string        `json:"sha256"`
		Searches []sizingJSON  `json:"searches"`
		Problems []problemJSON `json:"problems"`
	}
	sizingJSON struct {
		Product string          `json:"product"`
		Process string          `json:"process"`
		What    string          `json:"what"`
		Unit    string          `json:"unit"`
		Find    string          `json:"find"`
		Basis   string          `json:"basis"`
		Now     json.RawMessage `json:"now"`
		Answer  json.RawMessage `json:"answer"`
		Next    json.RawMessage `json:"next"`
		Meets   [][2]float64    `json:"meets"`
		Fixed   []string        `json:"left_out"`
		Words   []string        `json:"words"`
		Limits  []sizedLimit    `json:"limits"`
		Curve   []sizePointJSON `json:"curve"`
	}
	sizePointJSON struct {
		Value    json.RawMessage `json:"value"`
		Verdict  string          `json:"verdict"`
		Deciding string          `json:"deciding"`
		Refused  string          `json:"refused"`
		Findings []sizeFinding   `json:"findings"`
	}
	sizeFinding struct {
		Limit   string          `json:"limit"`
		Level   string          `json:"level"`
		Verdict string          `json:"verdict"`
		Value   json.RawMessage `json:"value"`
		Unit    string          `json:"unit"`
		MarginK json.RawMessage `json:"margin_K"`
		MarginS json.RawMessage `json:"margin_s"`
	}
)

// WriteSizeJSON writes size.json.
func WriteSizeJSON(w io.Writer, h *Head, list []*Sizing) error {
	all := sizeJSON{Schema: SizeSchema, Version: h.Version, Date: isoDate(h), Plan: h.Plan, SHA256: h.SHA256, Searches: []sizingJSON{}, Problems: problemsOf(h.Problems)}
	number := func(p *SizePoint) json.RawMessage {
		if p == nil {
			return nil
		}
		return tidyNumber(p.Value)
	}
	for _, s := range list {
		one := sizingJSON{Product: s.Product, Process: s.Process, What: s.What, Unit: s.Unit, Find: map[bool]string{true: "largest", false: "smallest"}[s.Most], Basis: s.Basis,
			Now: number(s.Now), Answer: number(s.Answer), Next: number(s.Next), Meets: [][2]float64{}, Fixed: append([]string{}, s.Fixed...),
			Words: append([]string{s.headline()}, s.sentences(h)...), Limits: append([]sizedLimit{}, s.limits()...)}
		for _, m := range s.Meets {
			one.Meets = append(one.Meets, [2]float64{micro(m[0].Value), micro(m[1].Value)})
		}
		for _, p := range s.Curve {
			pt := sizePointJSON{Value: number(p), Verdict: p.verdict(), Refused: p.Refused, Findings: []sizeFinding{}}
			if f := p.decides(); f != nil {
				pt.Deciding = f.Limit.Name
			}
			for i := range p.Findings {
				f := &p.Findings[i]
				pt.Findings = append(pt.Findings, sizeFinding{f.Limit.Name, f.Level, f.Verdict.String(), tenFigures(f.Value), f.Unit, fixedNumber(f.MarginK, 4), fixedNumber(f.MarginS, 4)})
			}
			one.Curve = append(one.Curve, pt)
		}
		all.Searches = append(all.Searches, one)
	}
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	return e.Encode(all)
}

// micro drops the last binary digits of a value that is a whole number of steps.
func micro(v float64) float64 { return math.Round(v*1e6) / 1e6 }

func tidyNumber(v float64) json.RawMessage {
	v = micro(v)
	return exactNumber(&v)
}
