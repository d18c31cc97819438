// Package codes holds starter limits of published food codes: rows that a user may copy into the sheets Limits,
// Tables and Groups of a plan. Nothing here is ever applied unasked.
//
// The data are the embedded files limits.csv (a row of Limits a line), tables.csv, groups.csv and documents.csv
// (what is cited, in which edition, how it was seen). Every cell carries the unit that the document prints
// ("165 °F", "15 s", "6 h"); that unit is the master and nothing is converted here.
package codes

import (
	"fmt"
	"slices"
	"strings"
)

// Reminder ends the Note of every starter limit.
const Reminder = "Confirm against the code in force."

// Row is one starter limit.
type Row struct {
	ID     string            // of the published clause; parts of one clause are ID+part
	Where  string            // jurisdiction: "US", "UK-Scotland"
	Stage  string            // stage of the process it is listed under: "cook", "hold cold"
	Title  string            // the name of the limit, the same as Cells["Limit"]
	Cells  map[string]string // cells of the sheet Limits by heading without unit; blanks are left out
	Tables []TableRow        // rows of the sheet Tables that it needs, in printed order
	Groups []GroupRow        // rows of the sheet Groups that it needs, the outermost group first

	Source   string   // issuer, document, edition, clause
	Evidence string   // how the figures were seen
	Covers   []string // ids of the published rows that it stands for; none for a further part of a clause
}

// TableRow is a row of the sheet Tables.
type TableRow struct {
	Table       string
	Temperature string // with its unit: "145 °F"
	Time        string // with its unit: "4 min"; "0 s" is met when reached once
}

// GroupRow is a row of the sheet Groups.
type GroupRow struct {
	Group  string
	Join   string // "all of" or "any of"
	Within string // another group; "" for none
}

// All lists every starter limit, in the order of limits.csv. The rows are the caller's to change.
func All() []Row { return read(files) }

// Find lists the starter limits whose jurisdiction, issuer or document contains where and whose stage contains
// stage, without regard to case; "" asks for nothing. The stage is the one it is listed under or the one it
// judges; chill is accepted for cool.
func Find(where, stage string) []Row {
	where = strings.ToLower(strings.TrimSpace(where))
	stage = strings.ReplaceAll(strings.ToLower(strings.TrimSpace(stage)), "chill", "cool")
	return slices.DeleteFunc(All(), func(r Row) bool {
		place := strings.ToLower(r.Where + "\n" + r.Cells["Issued by"] + "\n" + r.Cells["Code"])
		return !strings.Contains(place, where) || !strings.Contains(r.Stage+"\n"+r.Cells["Stage"], stage)
	})
}

// ByID gives the limits with these ids, each once, in the order asked for, without regard to case. An id may be
// that of a row, of a clause (all its parts come), of a published row (the limit that stands for it: a table for
// a row of it) or the name of a group (everything in it). The error names each id that is none of them and the
// nearest ones; then there are no rows.
func ByID(ids ...string) ([]Row, error) {
	all := All()
	var found []Row
	var unknown []string
	for _, id := range ids {
		rows := matching(all, strings.TrimSpace(id))
		if len(rows) == 0 {
			unknown = append(unknown, fmt.Sprintf("no starter limit %q; nearest: %s", id, strings.Join(nearest(all, id), ", ")))
		}
		found = appendNew(found, rows)
	}
	if len(unknown) > 0 {
		return nil, fmt.Errorf("%s", strings.Join(unknown, "\n"))
	}
	return found, nil
}

// WithGroup gives the limits of an id together with everything in their outermost groups, in the order of
// limits.csv. Ids are those of ByID.
func WithGroup(id string) ([]Row, error) {
	asked, err := ByID(id)
	if err != nil {
		return nil, err
	}
	return slices.DeleteFunc(All(), func(r Row) bool {
		return !slices.ContainsFunc(asked, func(a Row) bool {
			return a.ID == r.ID || len(a.Groups) > 0 && len(r.Groups) > 0 && a.Groups[0] == r.Groups[0]
		})
	}), nil
}

// Clause is the published id without the part: "US-FC22-401.11-C" of "US-FC22-401.11-C+surface".
func (r Row) Clause() string {
	clause, _, _ := strings.Cut(r.ID, "+")
	return clause
}

// matching lists the rows that an id means, by the first of these that gives any: row, clause, published row, group.
func matching(all []Row, id string) []Row {
	means := []func(Row) bool{
		func(r Row) bool { return strings.EqualFold(r.ID, id) },
		func(r Row) bool { return strings.EqualFold(r.Clause(), id) },
		func(r Row) bool {
			return slices.ContainsFunc(r.Covers, func(c string) bool { return strings.EqualFold(c, id) })
		},
		func(r Row) bool {
			return slices.ContainsFunc(r.Groups, func(g GroupRow) bool { return strings.EqualFold(g.Group, id) })
		},
	}
	for _, is := range means {
		var rows []Row
		for _, r := range all {
			if is(r) {
				rows = append(rows, r)
			}
		}
		if len(rows) > 0 {
			return rows
		}
	}
	return nil
}

// appendNew appends the rows that are not there yet.
func appendNew(to, rows []Row) []Row {
	for _, r := range rows {
		if !slices.ContainsFunc(to, func(o Row) bool { return o.ID == r.ID }) {
			to = append(to, r)
		}
	}
	return to
}
