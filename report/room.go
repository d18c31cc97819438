package report

import "slowpoint/rules"

// Room says the margin of the deciding limit in words, rounded down so that it never looks larger than it is; "" if there is none.
func (r *Row) Room(h *Head) string {
	return h.room(&rules.Finding{MarginK: r.MarginK, MarginS: r.MarginS, MarginPlace: r.MarginPlace})
}
