package report

import "slowpoint/rules"

// Room says the margin of the deciding limit in words, rounded down so that it never looks larger than it is; "" if there is none.
func (r *Row) Room(h *Head) string {
	return h.room(&rules.Finding{MarginK: r.MarginK, MarginS: r.MarginS, MarginPlace: r.MarginPlace})
}

// Margin says the margin of a finding in words, as Room does, with the verdict in mind: what is not met has no room.
func (h *Head) Margin(f *rules.Finding) string { return h.room(f) }
