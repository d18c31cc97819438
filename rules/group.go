package rules

import "strings"

// member is a row of a group: a finding or another group.
type member struct {
	finding int // index; -1 for a group
	group   string
}

// tree is the groups of a judgement by their names in lower case.
type tree struct {
	j      *Judgement
	groups map[string]*Group
	order  []string
	rows   map[string][]member
}

// join judges the groups and marks the rows of an any-of group that do not decide as alternatives.
func (j *Judgement) join(groups []Group) {
	t := &tree{j: j, groups: map[string]*Group{}, rows: map[string][]member{}}
	for i := range groups {
		t.add(&groups[i])
	}
	for i := range j.Findings {
		l := j.Findings[i].Limit
		if l.Group == "" || j.Findings[i].Level != "must" {
			continue
		}
		k := t.add(&Group{Name: l.Group})
		t.rows[k] = append(t.rows[k], member{i, ""})
	}
	for _, k := range t.order {
		if in := t.groups[k].Within; in != "" {
			p := t.add(&Group{Name: in})
			t.rows[p] = append(t.rows[p], member{-1, k})
		}
	}
	done := map[string]bool{}
	for _, k := range t.order {
		if t.counts(k, map[string]bool{}) {
			v, by, members := t.judge(k, done)
			g := t.groups[k]
			j.Groups = append(j.Groups, GroupFinding{Group: g.Name, AnyOf: g.AnyOf, Verdict: v, DecidedBy: by, Members: members})
		}
	}
}

// add enters a group by its name, once, and gives its key.
func (t *tree) add(g *Group) string {
	k := strings.ToLower(strings.TrimSpace(g.Name))
	if t.groups[k] == nil {
		t.groups[k] = g
		t.order = append(t.order, k)
	}
	return k
}

// counts tells whether a group has a finding anywhere within it; going round in a circle does not make one.
func (t *tree) counts(k string, seen map[string]bool) bool {
	if seen[k] {
		return false
	}
	seen[k] = true
	for _, m := range t.rows[k] {
		if m.finding >= 0 || t.counts(m.group, seen) {
			return true
		}
	}
	return false
}

// judge gives a group's verdict, the name of the row that decides it, and its rows.
func (t *tree) judge(k string, seen map[string]bool) (verdict Verdict, by string, members []Member) {
	open := map[string]bool{k: true}
	for s := range seen {
		open[s] = true
	}
	verdict = NotApplicable
	chosen := -1
	for i, m := range t.rows[k] {
		v, name := NotApplicable, ""
		if m.finding >= 0 {
			v, name = t.j.Findings[m.finding].Verdict, t.j.Findings[m.finding].Limit.Name
		} else if !open[m.group] && t.counts(m.group, map[string]bool{}) {
			v, _, _ = t.judge(m.group, open)
			name = t.groups[m.group].Name
		}
		if name != "" {
			members = append(members, Member{name, v})
		}
		if v == NotApplicable {
			continue
		}
		better := rank(v) < rank(verdict)
		if chosen < 0 || better == t.groups[k].AnyOf && v != verdict {
			verdict, by, chosen = v, name, i
		}
	}
	if t.groups[k].AnyOf && chosen >= 0 {
		for i, m := range t.rows[k] {
			if i != chosen {
				t.alternative(m, map[string]bool{k: true})
			}
		}
	}
	return verdict, by, members
}

// alternative marks everything within a row as not weighing.
func (t *tree) alternative(m member, seen map[string]bool) {
	if m.finding >= 0 {
		t.j.Findings[m.finding].Level = "alternative"
		return
	}
	if seen[m.group] {
		return
	}
	seen[m.group] = true
	for _, x := range t.rows[m.group] {
		t.alternative(x, seen)
	}
}
