package workbook

import (
	"math"
	"regexp"
	"sort"
	"strconv"
	"strings"

	"slowpoint/model"
	"slowpoint/model/cell"
	"slowpoint/model/unit"
	"slowpoint/rules"
)

// limits is what belongs to the sheet Limits while it is read.
type limits struct {
	*reader
	tables   map[string]*timeTable
	groups   map[string]*group
	inLimits map[string]bool // groups that limits name, by key
	seen     map[string]int  // row of each limit
	scopes   map[string]*scope
	order    []*scope // as limits name them
}

// scope is whom limits are for: all products, a family, or a product; worked out once for all limits of the same scope.
type scope struct {
	products []*product
	stages   map[*model.Stage]bool // of any of them
	unsure   bool                  // the stages of one of them are not all known
	points   map[string]*pointName // of any of them, by key
	readings []echoes              // of the limits for them, and of their tables and groups
	given    map[string]bool       // tables and groups whose readings are there already
}

// pointName is a point of Points with how many of the products have one of that name.
type pointName struct {
	name string
	n    int
}

// scope gives the scope of a name, made of its products the first time.
func (ls *limits) scope(name string, products []*product) *scope {
	if sc := ls.scopes[name]; sc != nil {
		return sc
	}
	sc := &scope{products: products, stages: map[*model.Stage]bool{}, points: map[string]*pointName{}, given: map[string]bool{}}
	ls.scopes[name], ls.order = sc, append(ls.order, sc)
	for _, p := range products {
		sc.unsure = sc.unsure || len(p.Steps) == 0 || ls.stepsAtFault(p)
		for i := range p.Steps {
			sc.stages[p.Steps[i].Stage] = true
			sc.unsure = sc.unsure || p.Steps[i].Stage == nil
		}
		for i := range p.Points {
			k := Key(p.Points[i].Name)
			if sc.points[k] == nil {
				sc.points[k] = &pointName{name: p.Points[i].Name}
			}
			sc.points[k].n++
		}
	}
	return sc
}

// stepsAtFault tells whether a product has a fault in the sheet Steps, so that a step of its chain may be missing.
func (ls *limits) stepsAtFault(p *product) bool {
	g := ls.grids["Steps"]
	for _, e := range p.because {
		if g == nil || e.At.Sheet == g.Name {
			return true
		}
	}
	return false
}

// nowhere tells whether it is certain that no product of the scope has a stage.
func (sc *scope) nowhere(s *model.Stage) bool {
	return s != nil && !sc.unsure && len(sc.products) > 0 && !sc.stages[s]
}

// timeTable is the rows of one name in Tables.
type timeTable struct {
	rules.Table
	because  cell.Errors
	readings []echoes
	aside    bool            // one of its rows
	byC      map[float64]int // index of a row by its temperature, 1e-6 °C
}

// group is a row of Groups.
type group struct {
	rules.Group
	line *Line
}

// readLimits reads Tables, Groups and Limits. A limit with faults is kept, so that it is judged as cannot tell and not left out.
func (r *reader) readLimits() {
	ls := &limits{reader: r, tables: map[string]*timeTable{}, groups: map[string]*group{}, inLimits: map[string]bool{}, seen: map[string]int{}, scopes: map[string]*scope{}}
	ls.readTables()
	ls.readGroups()
	for _, e := range r.unread["Limits"] {
		ls.unknown(e.At, "(part of the sheet Limits)", e)
	}
	t := r.tables["Limits"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		ls.inLimits[Key(l.Entry("Group").Text)] = true
	}
	ls.checkGroups()
	for _, l := range t.lines {
		ls.read(l)
	}
	for _, s := range []string{"Limits", "Groups"} {
		if t := r.tables[s]; t != nil && t.cut { // nobody knows whom the rest is for
			for _, p := range r.products {
				p.suffer(r.unread[s])
			}
		}
	}
	for _, l := range t.strays { // nor what these rows were meant to be
		ls.unknown(l.Ref(), "(row "+strconv.Itoa(l.row.N)+")", l.because[0])
	}
	ls.nearFamilies()
	for _, sc := range ls.order {
		for _, p := range sc.products {
			p.readings = append(p.readings, sc.readings)
		}
	}
}

// against holds a row of a table against the rows before it: one temperature has one time, and what is hotter than the row before does
// not take longer.
func (tt *timeTable) against(l *Line, c, s float64) {
	k := math.Round(c * 1e6)
	if i, there := tt.byC[k]; there && tt.Rows[i].S != s {
		l.Fault("Temperature", l.Entry("Temperature").Text, tableSameAt, strconv.Itoa(tt.Rows[i].At.Row))
		return
	}
	if tt.byC == nil {
		tt.byC = map[float64]int{}
	}
	tt.byC[k] = len(tt.Rows)
	if n := len(tt.Rows); n > 0 {
		if o := &tt.Rows[n-1]; c > o.C && s > o.S || c < o.C && s < o.S {
			l.Remark(cell.Warning, "Time", l.Entry("Time").Text, tableRising, strconv.Itoa(o.At.Row), o.Typed)
		}
	}
}

// unknown keeps what nobody can read as a limit for every product, so that none is met by what is missing.
func (ls *limits) unknown(at cell.Ref, name string, e cell.Error) {
	ls.plan.Limits = append(ls.plan.Limits, rules.Limit{At: at, Name: name, Kind: rules.Stated, Applies: rules.Applies{All: true},
		Unreadable: e.Error(), Typed: map[string]string{}})
}

func (ls *limits) readTables() {
	t := ls.reader.tables["Tables"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		name, at, time := l.Words("Table"), l.Value("Temperature"), l.Value("Time")
		if name == "" {
			continue
		}
		tt := ls.tables[Key(name)]
		if tt == nil {
			tt = &timeTable{Table: rules.Table{At: l.Ref(), Name: name}}
			ls.tables[Key(name)] = tt
		}
		if at != nil && time != nil {
			tt.against(l, at.Computed, time.Computed)
			tt.Rows = append(tt.Rows, rules.Row{At: l.Ref(), C: at.Computed, S: time.Computed, Typed: at.Typed + ", " + time.Typed})
		}
		reasons(&tt.because, l.because)
		tt.aside = tt.aside || l.aside
		tt.readings = append(tt.readings, l.readings...)
	}
}

func (ls *limits) readGroups() {
	t := ls.reader.tables["Groups"]
	if t == nil {
		return
	}
	for _, l := range t.lines {
		g := &group{line: l}
		g.At, g.Name, g.AnyOf, g.Within = l.Ref(), l.Words("Group"), l.Choice("Join") == "any of", l.Words("Within")
		if g.Name == "" {
			continue
		}
		if first := ls.groups[Key(g.Name)]; first != nil {
			l.Fault("Group", g.Name, duplicate, strconv.Itoa(first.At.Row), "group")
			first.line.suffer(l.because)
			continue
		}
		ls.groups[Key(g.Name)] = g
		ls.plan.Groups = append(ls.plan.Groups, g.Group)
	}
}

// checkGroups looks for groups that lie within themselves, within nothing, or that nothing belongs to.
func (ls *limits) checkGroups() {
	held := map[string]bool{}
	for _, pg := range ls.plan.Groups {
		held[Key(pg.Within)] = true
	}
	for _, pg := range ls.plan.Groups {
		g := ls.groups[Key(pg.Name)]
		if !ls.inLimits[Key(g.Name)] && !held[Key(g.Name)] {
			g.line.Fault("Group", g.Name, groupEmpty)
		}
		if g.Within == "" {
			continue
		}
		if ls.groups[Key(g.Within)] == nil && !ls.inLimits[Key(g.Within)] {
			g.line.Fault("Within", g.Within, groupUnknown, ls.offer(g.Within, func() []string { return names(ls.plan.Groups, func(g rules.Group) string { return g.Name }) }))
			continue
		}
		path := []string{g.Within}
		for o := ls.groups[Key(g.Within)]; o != nil; o = ls.groups[Key(o.Within)] {
			if Key(o.Name) == Key(g.Name) {
				g.line.Fault("Within", g.Within, groupCycle, strings.Join(path, ", "))
				break
			}
			if len(path) > mostDeep {
				g.line.Fault("Within", g.Within, groupDeep, strconv.Itoa(mostDeep))
				break
			}
			path = append(path, o.Within)
		}
	}
}

// mostDeep is how deep groups may lie within each other.
const mostDeep = 50

// read reads one row of Limits.
func (ls *limits) read(l *Line) {
	lim := rules.Limit{At: l.Ref(), Typed: map[string]string{}}
	lim.Name = l.Words("Limit")
	if first := ls.seen[Key(lim.Name)]; first > 0 && lim.Name != "" {
		l.Fault("Limit", lim.Name, duplicate, strconv.Itoa(first), "limit")
	} else {
		ls.seen[Key(lim.Name)] = l.row.N
	}
	if w := l.Choice("Rule"); w != "" {
		lim.Kind = rules.Named(w)
	}
	sc := ls.appliesTo(l, &lim)
	ls.stages(l, &lim, sc)
	ls.where(l, &lim, sc)
	numbers(l, &lim)
	sc.likely(l, &lim)
	lim.Clock = clockOf(l, &lim)
	for _, s := range []*model.Stage{lim.Clock.Start, lim.Clock.End} {
		if sc.nowhere(s) {
			l.Fault("Clock starts", l.Entry("Clock starts").Text, stageNowhere)
		}
	}
	choices(l, &lim)
	words := ls.citation(l, &lim)
	aside := l.aside
	if name := l.Words("Table"); name != "" {
		if tt := ls.tables[Key(name)]; tt == nil && len(ls.unread["Tables"]) > 0 {
			l.suffer(ls.unread["Tables"])
		} else if tt == nil {
			l.Fault("Table", name, tableUnknown, ls.offer(name, ls.tableNames))
		} else {
			lim.Table = &tt.Table
			l.suffer(tt.because)
			aside = aside || tt.aside
			sc.give("table "+Key(name), tt.readings)
		}
	}
	for g, n := ls.groups[Key(lim.Group)], 0; lim.Group != "" && g != nil && n <= mostDeep; g, n = ls.groups[Key(g.Within)], n+1 {
		l.suffer(g.line.because)
		aside = aside || g.line.aside
		sc.give("group "+Key(g.Name), g.line.readings)
	}
	if lim.Group != "" && ls.groups[Key(lim.Group)] == nil {
		l.suffer(ls.unread["Groups"])
	}
	if lim.Kind != nil {
		needs(l, lim.Kind)
		if l.Sound() {
			for _, f := range lim.Faults() {
				l.Fault(f.Column, l.Entry(f.Column).Text, asFound, verb(f.Msg, l.Filled(f.Column)), f.Hint)
			}
		}
	} else {
		lim.Kind = rules.Stated // never judged: the row is unreadable
	}
	if len(l.because) > 0 {
		lim.Unreadable = l.because[0].Error()
		lim.Advice = lim.Advice && l.sure("Level")
		if !l.sure("Applies to") || lim.Applies == (rules.Applies{}) {
			lim.Applies = rules.Applies{All: true} // it may be meant for any product
		}
	}
	for h := range l.t.place {
		if l.Filled(h) && lim.Typed[h] == "" && !strings.HasPrefix(h, "?") {
			lim.Typed[h] = l.Entry(h).Text
		}
	}
	for k, v := range words {
		lim.Typed[k] = v
	}
	ls.plan.Limits = append(ls.plan.Limits, lim)
	sc.give("", l.readings)
	if aside {
		for _, p := range sc.products {
			p.suffer(l.because)
		}
	}
}

// sure tells whether a column is the only one that its cells may have been meant for.
func (l *Line) sure(heading string) bool {
	h := l.t.place[heading]
	return h != nil && len(h.faults) == 0
}

// give adds readings to those of a scope; those of a table or group (which have a name) once.
func (sc *scope) give(name string, readings []echoes) {
	if name != "" && sc.given[name] {
		return
	}
	sc.given[name] = true
	sc.readings = append(sc.readings, readings...)
}

func (ls *limits) tableNames() []string {
	var known []string
	for _, o := range ls.tables {
		known = append(known, o.Name)
	}
	sort.Strings(known)
	return known
}

// verb fits a sentence of its own behind a quoted text.
func verb(msg string, quoted bool) string {
	if quoted {
		return "cannot stand here: " + msg
	}
	return strings.ToUpper(msg[:1]) + msg[1:]
}

// appliesTo reads whom a limit is for; the scope of nobody is empty.
func (ls *limits) appliesTo(l *Line, lim *rules.Limit) *scope {
	typed := l.Words("Applies to")
	head, family, named := strings.Cut(typed, ":")
	switch {
	case Key(typed) == "all":
		lim.Applies.All = true
	case ls.loose != nil && ls.blind() && typed != "":
		l.Remark(cell.Warning, "Applies to", typed, appliesElsewhere)
	}
	switch {
	case typed == "" || ls.blind():
		return ls.scope("", nil)
	case Key(typed) == "all":
		return ls.scope("all", ls.products)
	case named && Key(head) == "family":
		ps := ls.families[Key(family)]
		if Key(family) == "" || len(ps) == 0 {
			l.Fault("Applies to", typed, familyUnknown, ls.offer(family, ls.familyNames))
			return ls.scope("", nil)
		}
		lim.Applies.Family = ps[0].Family
		return ls.scope("family "+Key(family), ps)
	}
	if p := ls.byName[Key(typed)]; p != nil {
		lim.Applies.Product = p.Name
		return ls.scope("product "+Key(typed), []*product{p})
	}
	hint := ls.offer(typed, func() []string { return append([]string{"all"}, ls.productNames()...) })
	if ps := ls.families[Key(typed)]; len(ps) > 0 {
		hint = "; did you mean family: " + ps[0].Family + "?"
	}
	l.Fault("Applies to", typed, appliesUnknown, hint)
	return ls.scope("", nil)
}

// nearFamilies warns of products whose family no limit names and is written nearly like one that a limit is for.
func (ls *limits) nearFamilies() {
	var named []string
	first := map[string]*rules.Limit{} // by the key of a family
	for i := range ls.plan.Limits {
		lim := &ls.plan.Limits[i]
		if f := lim.Applies.Family; f != "" && first[Key(f)] == nil {
			first[Key(f)] = lim
			named = append(named, f)
		}
	}
	if len(named) == 0 {
		return
	}
	meant := map[string]string{} // by the key of a family
	for _, p := range ls.products {
		k := Key(p.Family)
		if k == "" || first[k] != nil {
			continue
		}
		near, asked := meant[k]
		if !asked {
			if near = ls.near(p.Family, func() []string { return named }); near != "" && !slip(k, Key(near)) {
				near = ""
			}
			meant[k] = near
		}
		if near != "" {
			p.line.Remark(cell.Warning, "Family", p.Family, familyNear, near, strconv.Quote(first[Key(near)].Name))
		}
	}
}

// slip tells whether one name may be the other misspelt: one letter apart, two in long names, or written with other blanks. Names that
// differ in numbers or single letters only, as line 1 and line 2, are two.
func slip(a, b string) bool {
	solid := func(s string) string { return strings.ReplaceAll(s, " ", "") }
	if solid(a) == solid(b) {
		return true
	}
	unnumbered := func(s string) string {
		return strings.Map(func(c rune) rune {
			if c >= '0' && c <= '9' {
				return -1
			}
			return c
		}, s)
	}
	x, y := strings.Fields(a), strings.Fields(b)
	lettered := len(x) == len(y)
	for i := range x {
		lettered = lettered && (x[i] == y[i] || len([]rune(x[i])) == 1 && len([]rune(y[i])) == 1)
	}
	if lettered || unnumbered(a) == unnumbered(b) {
		return false
	}
	n := edits([]rune(a), []rune(b))
	short := min(len([]rune(a)), len([]rune(b)))
	return n == 1 && short >= 4 || n == 2 && short >= 6
}

func (ls *limits) familyNames() []string {
	var known []string
	for _, ps := range ls.families {
		known = append(known, ps[0].Family)
	}
	sort.Strings(known)
	return known
}

// stages reads a stage, several joined by +, or a pair.
func (ls *limits) stages(l *Line, lim *rules.Limit, sc *scope) {
	typed := l.Words("Stage")
	if typed == "" {
		if lim.Kind != nil && lim.Kind.Uses("Stage") && lim.Kind != rules.Delay && lim.Kind != rules.Duration {
			l.note("Stage", "", "the whole chain", "blank: the whole chain is taken")
		}
		return
	}
	named := func(word string) *model.Stage {
		for _, s := range model.Stages {
			if Key(word) == Key(s.Name) || s.Also != "" && Key(word) == Key(s.Also) {
				return s
			}
		}
		l.Fault("Stage", typed, stageUnknown, meant(word, stageNames), strings.Join(stageNames, ", "))
		return nil
	}
	first, second, pair := strings.Cut(typed, ">")
	if pair {
		a, b := named(first), named(second)
		if a != nil && b != nil {
			lim.Stages, lim.Then = []*model.Stage{a}, b
		}
		if lim.Kind != nil && lim.Kind != rules.Delay {
			l.Fault("Stage", typed, noPair)
		}
	} else {
		for _, w := range strings.Split(typed, "+") {
			if s := named(w); s != nil {
				lim.Stages = append(lim.Stages, s)
			}
		}
	}
	if !l.Sound() || len(lim.Stages) == 0 {
		return
	}
	found := false
	for _, st := range lim.Stages { // of several that are joined one is enough, of a pair both must be there
		found = found || !sc.nowhere(st)
	}
	if !found || sc.nowhere(lim.Then) {
		l.Fault("Stage", typed, stageNowhere)
	}
}

// where reads which places a limit is about.
func (ls *limits) where(l *Line, lim *rules.Limit, sc *scope) {
	typed := l.Words("Where")
	if typed == "" {
		lim.Where.Name = whereWords[0]
		if lim.Kind != nil && lim.Kind.Uses("Where") {
			l.note("Where", "", whereWords[0], "blank: every point is taken")
		}
		return
	}
	for _, w := range whereWords {
		if Key(w) == Key(typed) {
			lim.Where.Name = w
			return
		}
	}
	lim.Where.Name = typed
	if len(sc.products) == 0 {
		return // nobody knows whose point it would be
	}
	switch pt := sc.points[Key(typed)]; {
	case pt == nil && len(ls.unread["Points"]) > 0:
		l.suffer(ls.unread["Points"])
	case pt == nil:
		l.Fault("Where", typed, whereUnknown, ls.offer(typed, func() []string {
			known := append([]string(nil), whereWords...)
			for _, p := range sc.points {
				known = append(known, p.name)
			}
			sort.Strings(known)
			return known
		}))
	default:
		lim.Where.Name = pt.name
		if pt.n < len(sc.products) {
			l.Remark(cell.Warning, "Where", typed, whereLacking, sc.without(Key(typed)))
		}
	}
}

// without names the first product that lacks a point.
func (sc *scope) without(point string) string {
	for _, p := range sc.products {
		if p.points[point] == 0 {
			return p.Name
		}
	}
	return ""
}

// numbers reads the columns of numbers, and keeps each as typed.
func numbers(l *Line, lim *rules.Limit) {
	for _, c := range []struct {
		heading string
		field   **float64
	}{
		{"From", &lim.FromC}, {"To", &lim.ToC}, {"Time", &lim.TimeS}, {"Second time", &lim.SecondS},
		{"Reference temperature", &lim.ReferenceC}, {"z", &lim.ZK}, {"z above the reference temperature", &lim.ZAboveK}, {"D", &lim.DS},
		{"Log reductions", &lim.Logs}, {"Allowance", &lim.AllowanceK}, {"Humidity", &lim.HumidityPc}, {"Share of stage", &lim.SharePc},
	} {
		if v := l.Value(c.heading); v != nil {
			*c.field = &v.Computed
			lim.Typed[c.heading] = v.Typed
		}
	}
}

// clockOf reads Clock starts.
func clockOf(l *Line, lim *rules.Limit) (c rules.Clock) {
	typed := l.Words("Clock starts")
	if typed == "" {
		return c
	}
	k := Key(typed)
	head, name, event := strings.Cut(k, ":")
	at, ofN := strings.CutPrefix(k, "crossing of ")
	switch {
	case k == "crossing":
		c.Crossing = true
	case ofN:
		v, m := unit.Temperature.Parse(at, nil, l.r.decimal)
		if m != nil && !strings.ContainsAny(strings.ToUpper(at), "CFK") {
			l.Fault("Clock starts", typed, clockNoUnit)
			return c
		}
		if m != nil {
			l.Fault("Clock starts", typed, asFound, "does not name a temperature: "+strconv.Quote(at)+" "+m.Says, m.Mend)
			return c
		}
		c.Crossing, c.AtC = true, &v.Computed
	case event && (tidy(head) == "stage start" || tidy(head) == "stage end"):
		var stage *model.Stage
		for _, s := range model.Stages {
			if tidy(name) == s.Name || s.Also != "" && tidy(name) == s.Also {
				stage = s
			}
		}
		if stage == nil {
			l.Fault("Clock starts", typed, stageUnknown, meant(name, stageNames), strings.Join(stageNames, ", "))
		}
		if tidy(head) == "stage start" {
			c.Start = stage
		} else {
			c.End = stage
		}
	default:
		l.Fault("Clock starts", typed, clockUnknown)
	}
	return c
}

// choices reads the columns that take one of a few words.
func choices(l *Line, lim *rules.Limit) {
	index := func(heading string, words []string) int {
		if w := l.Choice(heading); w != "" {
			for i := range words {
				if words[i] == w {
					return i + 1
				}
			}
		}
		return 0
	}
	lim.Counting = rules.Counting(index("Counting", countWords))
	lim.Compare = rules.Compare(index("Compare", compareWords))
	lim.CompareTime = rules.Compare(index("Compare time", compareWords))
	for _, h := range []string{"Compare", "Compare time"} {
		if lim.Kind != nil && lim.Kind.Uses(h) && !l.Filled(h) {
			l.note(h, "", "as the rule "+lim.Kind.Name+" does", "blank: the rule's own comparison is taken")
		}
	}
	lim.Advice = l.Choice("Level") == "advice"
	if !l.Filled("Level") {
		l.note("Level", "", "must", "blank: must is taken")
	}
	lim.Status = l.Choice("Status")
	if e := l.Entry("Answer"); e.Kind == Truth {
		l.Fault("Answer", e.Text, isTruth, "yes, no, or words")
	} else {
		lim.Answer = l.Words("Answer")
	}
}

var monthClause = regexp.MustCompile(`(?i)^\d{1,2}[-. ](jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)[a-z]*\.?$|^(jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)[a-z]*[-. ]\d{2,4}$`)

// citation reads where a limit comes from; what is missing, or what a spreadsheet seems to have changed, is a warning.
// It returns what is to be printed where that is not the text of the cell.
func (ls *limits) citation(l *Line, lim *rules.Limit) map[string]string {
	changed := map[string]string{}
	for _, c := range []struct {
		heading string
		field   *string
	}{
		{"Group", &lim.Group}, {"CCP", &lim.CCP}, {"Hazard", &lim.Hazard}, {"Code", &lim.Code}, {"Clause", &lim.Clause}, {"Edition", &lim.Edition},
		{"Issued by", &lim.IssuedBy}, {"Confirmed by", &lim.ConfirmedBy}, {"Confirmed on", &lim.ConfirmedOn}, {"Note", &lim.Note},
	} {
		*c.field = l.Words(c.heading)
		e := l.Entry(c.heading)
		if *c.field != e.Text {
			changed[c.heading] = *c.field
		}
		if c.heading != "Clause" && c.heading != "Edition" {
			continue
		}
		switch {
		case e.Kind == Figure && e.Form == Date, e.Kind == Text && l.t.grid.CSV && monthClause.MatchString(e.Text):
			l.Remark(cell.Warning, c.heading, *c.field, clauseDate, strings.ToLower(c.heading))
		case e.Kind == Figure && (strings.ContainsAny(e.Text, ".eE") || e.Form != Bare && e.Form < Worded):
			l.Remark(cell.Warning, c.heading, *c.field, clauseDecimal, strings.ToLower(c.heading))
		}
	}
	var lack []string
	for _, h := range []string{"Code", "Clause", "Edition"} {
		if !l.Filled(h) {
			lack = append(lack, h)
		}
	}
	if len(lack) > 0 {
		l.Remark(cell.Warning, lack[0], "", noCitation, and(lack), isAre(len(lack)))
	}
	return changed
}

// needs holds the filled columns against those that the kind needs and may have.
func needs(l *Line, k *rules.Kind) {
	for _, any := range k.Needs {
		filled := false
		for _, h := range any {
			filled = filled || l.Filled(h)
		}
		if !filled {
			l.Fault(any[0], "", limitNeeds, or(any), k.Name, or(any))
		}
	}
	for _, c := range l.t.sheet.Columns {
		if l.Filled(c.Heading) && !k.Uses(c.Heading) {
			l.Fault(c.Heading, l.Entry(c.Heading).Text, limitUnused, k.Name, c.Heading)
		}
	}
}
