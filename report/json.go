package report

import (
	"bufio"
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/rules"
)

// Schema names the form of results.json.
const Schema = "slowpoint/results/1"

// JSON writes results.json, one product after the other; none is kept in memory.
// Problems and NotCalculated of the head may grow until Close.
type JSON struct {
	w        io.Writer
	h        *Head
	products spool
	buf      *bufio.Writer // in front of the spool
	n        int
	line     []byte // scratch
	fault    error  // the first values that could not be written
}

// NewJSON makes a writer of results.json; nothing reaches w before Close.
func NewJSON(w io.Writer, h *Head) *JSON {
	j := &JSON{w: w, h: h}
	j.buf = bufio.NewWriterSize(&j.products, 1<<16)
	return j
}

// The parts of results.json. A number that does not exist is null.
type (
	planJSON struct {
		Name    string          `json:"name"`
		SHA256  string          `json:"sha256"`
		Items   json.RawMessage `json:"items"`
		Sources []sourceJSON    `json:"sources,omitempty"`
	}
	sourceJSON struct {
		File   string `json:"file"`
		SHA256 string `json:"sha256"`
	}
	problemJSON struct {
		At      string `json:"at"`
		From    string `json:"from,omitempty"`
		Level   string `json:"level"`
		Typed   string `json:"typed"`
		Message string `json:"message"`
		Hint    string `json:"hint"`
	}
	notCalculatedJSON struct {
		Product string        `json:"product"`
		At      string        `json:"at"`
		Because []problemJSON `json:"because"`
	}
	knownJSON struct {
		Case      string          `json:"case"`
		Source    string          `json:"source"`
		Expected  json.RawMessage `json:"expected"`
		Got       json.RawMessage `json:"got"`
		Allowance json.RawMessage `json:"allowance"`
		Unit      string          `json:"unit"`
		OK        bool            `json:"ok"`
	}
	filmJSON struct {
		Face    string          `json:"face"`
		Film    json.RawMessage `json:"film_W_m2K"` // null: the surface itself is held, or no heat passes
		Total   json.RawMessage `json:"total_W_m2K"`
		Typed   bool            `json:"typed"`
		Source  string          `json:"source"`
		Caution string          `json:"caution"`
	}
	stepJSON struct {
		Step         string          `json:"step"`
		Stage        string          `json:"stage"`
		Start        json.RawMessage `json:"start_s"`
		End          json.RawMessage `json:"end_s"`
		Surroundings string          `json:"surroundings"`
		Measured     bool            `json:"medium_measured"`
		Until        json.RawMessage `json:"until_C"`
		Reached      *bool           `json:"until_reached"`
		PropsAt      json.RawMessage `json:"properties_at_C"`
		K            json.RawMessage `json:"conductivity_W_mK"`
		Rho          json.RawMessage `json:"density_kg_m3"`
		C            json.RawMessage `json:"specific_heat_J_kgK"`
		RaisedFrom   json.RawMessage `json:"medium_raised_from_C"`
		RaisedTo     json.RawMessage `json:"medium_raised_to_C"`
		Films        []filmJSON      `json:"films"`
	}
	findingJSON struct {
		Limit           string          `json:"limit"`
		Rule            string          `json:"rule"`
		Level           string          `json:"level"`
		Verdict         string          `json:"verdict"`
		Value           json.RawMessage `json:"value"`
		Required        json.RawMessage `json:"required"`
		Unit            string          `json:"unit"`
		MarginK         json.RawMessage `json:"margin_K"`
		MarginS         json.RawMessage `json:"margin_s"`
		AtS             json.RawMessage `json:"at_s"`
		AtMM            json.RawMessage `json:"at_mm"`
		Place           string          `json:"place"`
		ClockStart      json.RawMessage `json:"clock_start_s"`
		ClockEnd        json.RawMessage `json:"clock_end_s"`
		Code            string          `json:"code"`
		Clause          string          `json:"clause"`
		Edition         string          `json:"edition"`
		Cells           []string        `json:"cells"`
		Why             string          `json:"why"`
		Notes           []string        `json:"notes"`
		LowConductivity bool            `json:"low_conductivity"`
		WellMixed       bool            `json:"well_mixed"`
	}
	worstJSON struct {
		Limit   string          `json:"limit"`
		Ends    []string        `json:"ends"`
		Verdict string          `json:"typed_verdict"`
		Value   json.RawMessage `json:"typed_value"`
		MarginK json.RawMessage `json:"typed_margin_K"`
		MarginS json.RawMessage `json:"typed_margin_s"`
		Share   *shareJSON      `json:"drawn,omitempty"`
		Drivers []driverJSON    `json:"drivers"`
	}
	shareJSON struct {
		Pieces int             `json:"pieces"`
		Met    int             `json:"met"`
		Low    json.RawMessage `json:"share_low"`
		High   json.RawMessage `json:"share_high"`
		Seed   uint64          `json:"seed"`
	}
	driverJSON struct {
		Quantity string    `json:"quantity"`
		At       string    `json:"at"`
		Basis    string    `json:"basis"`
		Ends     []endJSON `json:"ends"`
	}
	endJSON struct {
		End     string          `json:"end"`
		Verdict string          `json:"verdict"`
		MarginK json.RawMessage `json:"margin_change_K"`
		MarginS json.RawMessage `json:"margin_change_s"`
	}
	recordJSON struct {
		Record     string          `json:"record"`
		At         string          `json:"at"`
		What       string          `json:"what_it_measured"`
		File       string          `json:"file"`
		SHA256     string          `json:"sha256"`
		Sheet      string          `json:"sheet"`
		Column     string          `json:"column"`
		Unit       string          `json:"unit"`
		Begins     string          `json:"begins"`
		Verdict    string          `json:"verdict"`
		Readings   int             `json:"readings"`
		Step       json.RawMessage `json:"usual_step_s"`
		Resolution json.RawMessage `json:"resolution_K"`
		Accuracy   json.RawMessage `json:"accuracy_K"`
		Correction json.RawMessage `json:"correction_K"`
		Missing    int             `json:"missing"`
		Doubtful   int             `json:"doubtful"`
		Unseen     string          `json:"unnoticed,omitempty"`
		Gaps       json.RawMessage `json:"gaps_s"`
		Before     int             `json:"left_out_before"`
		After      int             `json:"left_out_after"`
		Findings   []findingJSON   `json:"findings"`
		Against    *againstJSON    `json:"against_prediction,omitempty"`
		Problems   []problemJSON   `json:"problems"`
	}
	deviationJSON struct {
		Records  []recordJSON    `json:"records"`
		Verdict  string          `json:"verdict"`
		Why      string          `json:"why"`
		Within   json.RawMessage `json:"simplified_within_K"`
		Findings []findingJSON   `json:"findings"`
		Groups   []groupJSON     `json:"groups"`
	}
	againstJSON struct {
		Air      bool            `json:"surroundings_recorded"`
		Place    string          `json:"place"`
		AtMM     json.RawMessage `json:"at_mm"`
		Readings int             `json:"readings"`
		LeftOut  int             `json:"doubtful_left_out,omitempty"`
		Bias     json.RawMessage `json:"bias_K"`
		RMS      json.RawMessage `json:"rms_K"`
		Colder   json.RawMessage `json:"colder_while_heated_K"`
		ColderS  json.RawMessage `json:"colder_at_s"`
		Warmer   json.RawMessage `json:"warmer_otherwise_K"`
		WarmerS  json.RawMessage `json:"warmer_at_s"`
		Slowest  json.RawMessage `json:"slowest_place_beyond_K"`
		SlowestS json.RawMessage `json:"slowest_place_at_s"`
		Fitted   []fittedJSON    `json:"fitted,omitempty"`
	}
	fittedJSON struct {
		What  string          `json:"what"`
		Value json.RawMessage `json:"value"`
		Low   json.RawMessage `json:"low"`
		High  json.RawMessage `json:"high"`
		Typed json.RawMessage `json:"typed"`
		Unit  string          `json:"unit"`
		Told  bool            `json:"told_by_the_record"`
	}
	groupJSON struct {
		Group     string `json:"group"`
		Join      string `json:"join"`
		Verdict   string `json:"verdict"`
		DecidedBy string `json:"decided_by"`
	}
	cautionJSON struct {
		Key  string `json:"key"`
		Text string `json:"text"`
	}
	readingJSON struct {
		At     string `json:"at"`
		From   string `json:"from,omitempty"`
		Column string `json:"column"`
		Typed  string `json:"typed"`
		Used   string `json:"used"`
		Why    string `json:"why"`
	}
)

// Add writes one product; it may be forgotten afterwards.
func (j *JSON) Add(p *Product) error {
	if p == nil || p.History == nil {
		return errors.New("results.json: a product without a history")
	}
	if j.n > 0 {
		j.put(",\n")
	}
	j.n++
	w := p.History
	j.put("  {\n")
	j.text("product", p.Product.Name)
	j.text("process", p.Process)
	j.text("family", p.Family)
	j.text("recipe_version", p.RecipeVersion)
	j.text("batch", p.Batch)
	j.text("note", p.Note)
	j.text("verdict", overall(p.Judgement.Verdict).String())
	j.text("why", p.Judgement.Why)
	j.text("method", w.Method)
	j.value("recorded", w.Recorded)
	j.value("error_K", tenFigures(&w.ErrorK))
	j.text("bound", w.Bound)
	if w.Bound != "" {
		j.value("bound_from_s", exactNumber(&w.BoundFromS))
	}
	j.samples(p)
	list(j, "steps", stepsOf(w.Spans), false)
	list(j, "findings", findingsOf(p.Judgement.Findings), false)
	if len(p.Worst) > 0 {
		list(j, "worst_cases", worstOfAll(p), false)
	}
	list(j, "groups", groupsOf(p.Judgement.Groups), false)
	if len(p.Measured) > 0 {
		list(j, "records", recordsOf(p), false)
	}
	if v := p.Deviation; v != nil {
		j.value("as_recorded", deviationJSON{Records: recordsIn(v.Records), Verdict: overall(v.Judgement.Verdict).String(), Why: v.Judgement.Why,
			Within: exactNumber(&v.WithinK), Findings: findingsOf(v.Judgement.Findings), Groups: groupsOf(v.Judgement.Groups)})
	}
	list(j, "cautions", cautionsOf(Cautions(j.h, p)), false)
	list(j, "input", readingsOf(p.Readings), true)
	j.put("  }")
	return errors.Join(j.buf.Flush(), j.fault)
}

// samples writes the courses.
func (j *JSON) samples(p *Product) {
	s, n := &p.Samples, len(p.Samples.TimesS)
	j.column("t_s", s.TimesS, n, -1)
	j.column("coldest_C", s.Coldest, n, 5)
	j.column("hottest_C", s.Hottest, n, 5)
	j.column("mean_C", s.Mean, n, 5)
	medium := make([]float64, n)
	for i, t := range s.TimesS {
		medium[i] = math.NaN()
		if p.History.MediumC != nil {
			medium[i] = p.History.MediumC(t)
		}
	}
	j.column("medium_C", medium, n, 5)
	j.places("coldest_at_mm", s.ColdestAt, n)
	j.places("hottest_at_mm", s.HottestAt, n)
	j.put("    \"points\": [")
	for i, pt := range p.History.Points {
		if i > 0 {
			j.put(",")
		}
		j.put("\n      {\"point\": ")
		j.buf.Write(j.encode(pt.Name))
		j.put(", \"at_mm\": ")
		j.line = appendPlace(j.line[:0], pt.Place)
		j.line = append(j.line, `, "C": `...)
		var c []float64
		if i < len(s.Points) {
			c = s.Points[i]
		}
		j.line = append(appendNumbers(j.line, c, n, 5), '}')
		j.buf.Write(j.line)
	}
	j.put("],\n")
}

// Close writes the document and lets go of what was spooled. Call it once, after the last product, also after an error.
func (j *JSON) Close() error {
	defer j.products.Close()
	if err := j.buf.Flush(); err != nil {
		return err
	}
	j.buf.Reset(j.w)
	j.put("{\n")
	j.text("schema", Schema)
	j.text("version", j.h.Version)
	j.text("date", isoDate(j.h))
	j.value("plan", planJSON{Name: j.h.Plan, SHA256: j.h.SHA256, Items: j.itemsOf(j.h.Items), Sources: sourcesOf(j.h.Sources)})
	j.value("every_s", exactNumber(&j.h.EveryS))
	list(j, "problems", problemsOf(j.h.Problems), false)
	list(j, "not_calculated", notCalculatedOf(j.h.NotCalculated), false)
	if len(j.h.LeftOut) > 0 {
		list(j, "left_out", j.h.LeftOut, false)
	}
	list(j, "known_answers", knownOf(j.h.Known), false)
	j.put("    \"products\": [")
	if j.n > 0 {
		j.put("\n")
	}
	if _, err := j.products.WriteTo(j.buf); err != nil {
		return err
	}
	j.put("]\n}\n")
	return errors.Join(j.buf.Flush(), j.fault)
}

func (j *JSON) put(s string)       { _, _ = j.buf.WriteString(s) } // the writer keeps the first error for Flush
func (j *JSON) text(key, s string) { j.value(key, s) }

func (j *JSON) value(key string, v any) {
	j.put("    \"" + key + "\": ")
	j.buf.Write(j.encode(v))
	j.put(",\n")
}

// list writes an array, one element a line.
func list[T any](j *JSON, key string, items []T, last bool) {
	j.put("    \"" + key + "\": [")
	for i := range items {
		if i > 0 {
			j.put(",")
		}
		j.put("\n      ")
		j.buf.Write(j.encode(items[i]))
	}
	if j.put("]"); !last {
		j.put(",")
	}
	j.put("\n")
}

func (j *JSON) column(key string, v []float64, n, decimals int) {
	j.line = append(j.line[:0], "    \""+key+"\": "...)
	j.line = append(appendNumbers(j.line, v, n, decimals), ",\n"...)
	j.buf.Write(j.line)
}

func (j *JSON) places(key string, at []model.Place, n int) {
	j.line = append(j.line[:0], "    \""+key+"\": ["...)
	for i := 0; i < n; i++ {
		if i > 0 {
			j.line = append(j.line, ", "...)
		}
		if i < len(at) {
			j.line = appendPlace(j.line, at[i])
		} else {
			j.line = append(j.line, "null"...)
		}
	}
	j.buf.Write(append(j.line, "],\n"...))
}

// appendNumbers writes n numbers; those that v has not are null.
func appendNumbers(b []byte, v []float64, n, decimals int) []byte {
	b = append(b, '[')
	for i := 0; i < n; i++ {
		if i > 0 {
			b = append(b, ", "...)
		}
		x := math.NaN()
		if i < len(v) {
			x = v[i]
		}
		b = appendNumber(b, x, decimals)
	}
	return append(b, ']')
}

// appendNumber writes x with at most so many decimals, no trailing noughts and no −0; decimals −1: every digit that x has.
func appendNumber(b []byte, x float64, decimals int) []byte {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return append(b, "null"...)
	}
	if decimals > 0 && decimals < len(tens) {
		scaled := math.Abs(x) * tens[decimals]
		n := math.Floor(scaled)
		rest := scaled - n
		// Unless it is near a half, the product is rounded as the exact number would be: below 1e10 it is wrong by less than 1e-6.
		if scaled < 1e10 && math.Abs(rest-0.5) > 1e-5 {
			return appendDecimal(b, int64(n)+int64(btoi(rest > 0.5)), decimals, x < 0)
		}
	}
	start := len(b)
	b = strconv.AppendFloat(b, x, 'f', decimals, 64)
	if decimals > 0 {
		for b[len(b)-1] == '0' {
			b = b[:len(b)-1]
		}
		if b[len(b)-1] == '.' {
			b = b[:len(b)-1]
		}
	}
	if string(b[start:]) == "-0" {
		return append(b[:start], '0')
	}
	return b
}

// tens are the powers of ten.
var tens = [...]float64{1, 10, 100, 1e3, 1e4, 1e5, 1e6}

// appendDecimal writes n with its last digits behind the point, no trailing noughts and no −0.
func appendDecimal(b []byte, n int64, decimals int, negative bool) []byte {
	if negative && n > 0 {
		b = append(b, '-')
	}
	for ; decimals > 0 && n%10 == 0; decimals-- {
		n /= 10
	}
	var room [24]byte
	i := len(room)
	for k := 0; n > 0 || k <= decimals; k++ {
		if k == decimals && k > 0 {
			i--
			room[i] = '.'
		}
		i--
		room[i] = byte('0' + n%10)
		n /= 10
	}
	return append(b, room[i:]...)
}

// appendPlace writes a place as [up, across, along] in mm.
func appendPlace(b []byte, p model.Place) []byte {
	b = append(b, '[')
	b = append(appendNumber(b, p.UpM*1000, 4), ", "...)
	b = append(appendNumber(b, p.AcrossM*1000, 4), ", "...)
	return append(appendNumber(b, p.AlongM*1000, 4), ']')
}

// encode writes a value as JSON without escaping <, > and &. What cannot be written is kept as the fault that Add and Close return.
func (j *JSON) encode(v any) []byte {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(v); err != nil {
		j.fault = errors.Join(j.fault, fmt.Errorf("results.json: %w", err))
		return []byte("null")
	}
	return bytes.TrimRight(b.Bytes(), "\n")
}

// exactNumber, fixedNumber and tenFigures write a number that may not exist: with every digit, with so many decimals, with ten figures.
func exactNumber(v *float64) json.RawMessage { return fixedNumber(v, -1) }

func fixedNumber(v *float64, decimals int) json.RawMessage {
	if !finite(v) {
		return nil
	}
	return appendNumber(nil, *v, decimals)
}

func tenFigures(v *float64) json.RawMessage {
	if !finite(v) {
		return nil
	}
	return strconv.AppendFloat(nil, *v+0, 'g', 10, 64)
}

// join is the word of the column Join.
func join(anyOf bool) string {
	if anyOf {
		return "any of"
	}
	return "all of"
}

func (j *JSON) itemsOf(items []Item) json.RawMessage {
	b, seen := []byte("{"), map[string]bool{}
	for _, it := range items {
		if seen[it.Item] {
			continue
		}
		if len(seen) > 0 {
			b = append(b, ", "...)
		}
		seen[it.Item] = true
		b = append(append(b, j.encode(it.Item)...), ": "...)
		b = append(b, j.encode(it.Value)...)
	}
	return append(b, '}')
}

func sourcesOf(ss []Source) []sourceJSON {
	var out []sourceJSON // nil for none: then the key is left out
	for _, s := range ss {
		out = append(out, sourceJSON(s))
	}
	return out
}

func problemsOf(es cell.Errors) []problemJSON {
	out := make([]problemJSON, 0, len(es))
	for _, e := range es {
		out = append(out, problemJSON{e.At.String(), e.From, e.Level.String(), e.Typed, e.Msg, e.Hint})
	}
	return out
}

func notCalculatedOf(ns []NotCalculated) []notCalculatedJSON {
	out := make([]notCalculatedJSON, 0, len(ns))
	for _, n := range ns {
		out = append(out, notCalculatedJSON{n.Product, n.At.String(), problemsOf(n.Because)})
	}
	return out
}

func knownOf(ks []KnownAnswer) []knownJSON {
	out := make([]knownJSON, 0, len(ks))
	for i := range ks {
		k := &ks[i]
		out = append(out, knownJSON{k.Name, k.Source, tenFigures(&k.Expected), tenFigures(&k.Got), tenFigures(&k.Allowance), k.Unit, k.OK})
	}
	return out
}

func stepsOf(spans []model.Span) []stepJSON {
	out := make([]stepJSON, 0, len(spans))
	for i := range spans {
		sp := &spans[i]
		s := stepJSON{Start: exactNumber(&sp.StartS), End: exactNumber(&sp.EndS), Reached: sp.Reached,
			RaisedFrom: fixedNumber(sp.MediumFromC, 5), RaisedTo: fixedNumber(sp.MediumToC, 5), Films: []filmJSON{}}
		if st := sp.Step; st != nil {
			s.Step, s.Measured, s.Until = st.Name, st.Measured, fixedNumber(st.UntilC, 5)
			if st.Stage != nil {
				s.Stage = st.Stage.Name
			}
			if st.Surface != nil {
				s.Surroundings = st.Surface.Name
			}
		}
		if pr := &sp.Props; pr.KWmK > 0 {
			s.PropsAt, s.K, s.Rho, s.C = fixedNumber(&sp.PropsAtC, 5), tenFigures(&pr.KWmK), tenFigures(&pr.RhoKgM3), tenFigures(&pr.CJkgK)
		}
		for k := range sp.Films {
			f := &sp.Films[k]
			s.Films = append(s.Films, filmJSON{faceName(f.Face), tenFigures(&f.FilmW), tenFigures(&f.TotalW), f.Typed, f.Source, f.Caution})
		}
		out = append(out, s)
	}
	return out
}

// faceName is the word of the column Face, or what stands for the whole surface.
func faceName(f *model.Face) string {
	if f == nil {
		return "whole surface"
	}
	return f.Name
}

func findingsOf(fs []rules.Finding) []findingJSON {
	out := make([]findingJSON, 0, len(fs))
	for i := range fs {
		f := &fs[i]
		one := findingJSON{Level: f.Level, Verdict: f.Verdict.String(), Value: tenFigures(f.Value), Required: tenFigures(f.Required), Unit: f.Unit,
			MarginK: fixedNumber(f.MarginK, 4), MarginS: fixedNumber(f.MarginS, 4), AtS: exactNumber(f.AtS), Place: f.PlaceName,
			ClockStart: exactNumber(f.ClockStartS), ClockEnd: exactNumber(f.ClockEndS), Cells: cellNames(f.Cells), Why: f.Why,
			Notes: append([]string{}, f.Notes...), LowConductivity: kindOf(f.Run) == rules.LowConductivity, WellMixed: kindOf(f.Run) == rules.WellMixed}
		if f.Place != nil {
			one.AtMM = appendPlace(nil, *f.Place)
		}
		if l := f.Limit; l != nil {
			one.Limit, one.Rule, one.Code, one.Clause, one.Edition = l.Name, ruleName(l), l.Code, l.Clause, l.Edition
		}
		out = append(out, one)
	}
	return out
}

// recordsOf are the records of a product.
func recordsOf(p *Product) []recordJSON { return recordsIn(p.Measured) }

func recordsIn(ms []Measured) []recordJSON {
	out := make([]recordJSON, 0, len(ms))
	for i := range ms {
		m := &ms[i]
		one := recordJSON{Record: m.Name, At: m.At.String(), What: m.What, File: m.File, SHA256: m.SHA256, Sheet: m.Sheet, Column: m.Column, Unit: m.Unit,
			Begins: m.Begins, Verdict: overall(m.verdict()).String(), Readings: m.Readings, Step: exactNumber(&m.StepS), Resolution: exactNumber(&m.ResolutionK),
			Accuracy: exactNumber(m.AccuracyK), Correction: exactNumber(&m.CorrectionK), Missing: m.Missing, Doubtful: m.Doubtful, Unseen: m.unseen(), Before: m.Before, After: m.After,
			Findings: findingsOf(m.Judgement.Findings), Problems: problemsOf(m.Problems)}
		gaps := []byte{'['}
		for k, g := range m.Gaps {
			if k > 0 {
				gaps = append(gaps, ", "...)
			}
			gaps = appendNumbers(gaps, g[:], 2, 3)
		}
		one.Gaps = append(gaps, ']')
		if a := m.Against; a != nil {
			one.Against = &againstJSON{Air: a.Air, Place: a.PlaceName, AtMM: appendPlace(nil, a.Place), Readings: a.Readings, LeftOut: a.LeftOut, Bias: fixedNumber(&a.BiasK, 4), RMS: fixedNumber(&a.RMSK, 4),
				Colder: fixedNumber(&a.ColderK, 4), ColderS: exactNumber(&a.ColderS), Warmer: fixedNumber(&a.WarmerK, 4), WarmerS: exactNumber(&a.WarmerS),
				Slowest: fixedNumber(&a.SlowestK, 4), SlowestS: exactNumber(&a.SlowestS)}
			for _, f := range a.Fitted {
				typed := &f.Typed
				if f.Typed == 0 {
					typed = nil
				}
				one.Against.Fitted = append(one.Against.Fitted, fittedJSON{f.What, tenFigures(&f.Value), tenFigures(&f.Low), tenFigures(&f.High), tenFigures(typed), f.Unit, !f.Vague})
			}
		}
		out = append(out, one)
	}
	return out
}

// worstOfAll is how each limit fares between the ends of what varies.
func worstOfAll(p *Product) []worstJSON {
	out := make([]worstJSON, 0, len(p.Worst))
	for i := range p.Worst {
		w := &p.Worst[i]
		f := &w.Nominal
		one := worstJSON{Limit: w.Limit.Name, Ends: append([]string{}, w.Ends...), Verdict: f.Verdict.String(), Value: tenFigures(f.Value),
			MarginK: fixedNumber(f.MarginK, 4), MarginS: fixedNumber(f.MarginS, 4), Drivers: []driverJSON{}}
		if s := w.Share; s != nil {
			one.Share = &shareJSON{s.Pieces, s.Met, fixedNumber(&s.Low, 6), fixedNumber(&s.High, 6), s.Seed}
		}
		for _, d := range w.Drivers {
			dj := driverJSON{Quantity: d.Quantity, At: d.At.String(), Basis: d.Basis, Ends: []endJSON{}}
			for _, e := range d.Ends {
				dj.Ends = append(dj.Ends, endJSON{e.Words, e.Verdict.String(), fixedNumber(e.K, 4), fixedNumber(e.S, 4)})
			}
			one.Drivers = append(one.Drivers, dj)
		}
		out = append(out, one)
	}
	return out
}

// ruleName is the word of the column Rule.
func ruleName(l *rules.Limit) string {
	if l == nil || l.Kind == nil {
		return ""
	}
	return l.Kind.Name
}

// cellNames writes places as a spreadsheet user would; those made in code have none.
func cellNames(refs []cell.Ref) []string {
	out := make([]string, 0, len(refs))
	for _, r := range refs {
		if !r.IsZero() {
			out = append(out, r.String())
		}
	}
	return out
}

func groupsOf(gs []rules.GroupFinding) []groupJSON {
	out := make([]groupJSON, 0, len(gs))
	for _, g := range gs {
		out = append(out, groupJSON{g.Group, join(g.AnyOf), g.Verdict.String(), g.DecidedBy})
	}
	return out
}

func cautionsOf(cs []Caution) []cautionJSON {
	out := make([]cautionJSON, 0, len(cs))
	for _, c := range cs {
		out = append(out, cautionJSON(c))
	}
	return out
}

func readingsOf(rs []cell.Reading) []readingJSON {
	out := make([]readingJSON, 0, len(rs))
	for _, r := range rs {
		out = append(out, readingJSON{r.At.String(), r.From, r.Column, r.Typed, r.Used, r.Why})
	}
	return out
}
