package report

import (
	"io"
	"strings"
)

// WriteSummaryPDF writes the overview of a plan: one line a product, the tightest first. Thousands of rows are fine.
func WriteSummaryPDF(w io.Writer, h *Head, rows []Row) (err error) {
	defer caught(&err)
	d := newDoc(h, h.overviewTitle())
	d.summary(rows)
	return d.finish(w)
}

// OnePDF writes the overview and every product in one document. each hands over the products one by one and stops at an error.
func OnePDF(w io.Writer, h *Head, rows []Row, each func(func(*Product) error) error) (err error) {
	defer caught(&err)
	d := newDoc(h, h.overviewTitle())
	d.summary(rows)
	d.nest = 1
	if err := each(func(p *Product) error {
		d.product(p)
		return d.pdf.err()
	}); err != nil {
		return err
	}
	return d.finish(w)
}

// summary writes the pages of the overview.
func (d *doc) summary(rows []Row) {
	h := d.head
	d.title = h.overviewTitle()
	d.page()
	d.heading(h.overviewTitle(), 0, 20)
	var n, records [4]int
	list := make([]slim, len(rows))
	for i, r := range rows {
		list[i] = slim{Row: r, calculated: true}
		n[overall(r.Verdict)]++
		if r.Measured != nil {
			records[*r.Measured]++
		}
	}
	list = listed(nil, list)
	sentence := say("summary sentence", counted(len(rows), "products calculated"), tallied(n))
	if len(h.NotCalculated) > 0 {
		sentence += say("summary refused", len(h.NotCalculated))
	}
	if records != [4]int{} {
		sentence += say("summary records", tallied(records))
	}
	d.para(sentence, style{size: 11, bold: true, after: 2})
	if left := h.LeftOutWords(); left != "" {
		d.boxed([]string{left}, style{size: body, bold: true})
	}
	if h.NotImported > 0 {
		d.boxed([]string{counted(h.NotImported, "not imported")}, style{size: body, bold: true})
	}
	if len(h.NotCalculated) > 0 {
		d.notCalculated()
	}
	d.heading(say("summary list"), 1, 25)
	var cells [][]string
	for i := range list {
		r := &list[i]
		margin := r.Room(h)
		switch {
		case margin == "":
			margin = r.Why
		case r.Beside != "":
			margin += "\n" + r.Beside
		}
		if len(r.Records) > 0 {
			margin = strings.TrimSpace(margin + "\n" + strings.Join(r.Records, "\n"))
		}
		name := r.Product
		if r.File != "" {
			name += "\n" + r.File
		}
		if r.Problems > 0 {
			name += "\n" + say("row notes", r.Problems)
		}
		cells = append(cells, []string{name, r.Process, r.Words(verdictWord), margin, r.Deciding})
	}
	if len(cells) == 0 {
		d.text(say("summary none"))
	} else {
		d.table([]col{{title: say("col product"), wide: 45}, {title: say("col process"), wide: 25}, {title: say("col verdict"), wide: 29, bold: true},
			{title: say("col margin"), wide: 46}, {title: say("col deciding"), wide: 35}}, cells, small)
	}
	d.plan()
	d.noted()
	d.heading(say("standing title"), 1, 30)
	for _, s := range CautionText() {
		d.item("•", s, body)
	}
	d.heading(say("known title"), 1, 30)
	if len(h.Known) == 0 {
		d.text(say("known none"))
		return
	}
	d.text(h.knownSentence() + " " + say("known note"))
	d.knownTable(h.Known)
}

// notCalculated names the products that are missing in the list.
func (d *doc) notCalculated() {
	d.heading(say("summary not"), 1, 20)
	d.text(say("summary not note"))
	var rows [][]string
	for _, n := range d.head.NotCalculated {
		var why []string
		for i, e := range n.Because {
			if i == 3 {
				break
			}
			why = append(why, e.Error())
		}
		rows = append(rows, []string{n.Product, n.At.String(), strings.Join(why, "\n")})
	}
	d.table([]col{{title: say("col product"), wide: 44, bold: true}, {title: say("col place"), wide: 28}, {title: say("col why"), wide: frameWide - 72}}, rows, small)
}

// plan says what was read and by which version.
func (d *doc) plan() {
	h := d.head
	d.heading(say("plan title"), 1, 30)
	var rows [][2]string
	for _, it := range h.Items {
		rows = append(rows, [2]string{it.Item, it.Value})
	}
	rows = append(rows, [2]string{say("key file"), h.Plan}, [2]string{say("key digest"), h.SHA256})
	rows = append(rows, h.sources(len(h.Sources))...)
	d.pairs(append(rows, [2]string{say("key version"), h.Version}, [2]string{say("key date"), h.day()}), 45)
}

// noted lists everything that was noted about the input, at most 200 lines.
func (d *doc) noted() {
	h := d.head
	d.heading(say("summary problems"), 1, 20+20*btof(len(h.Problems) > 0)) // with the first row
	if len(d.unseen) > 0 {
		d.text(say("summary unseen", d.unseen.list()))
	}
	if len(h.Problems) == 0 {
		if len(d.unseen) == 0 {
			d.text(say("summary no problem"))
		}
		return
	}
	ps := h.Problems
	const most = 200
	x := &sheet{doc: d}
	x.problems(ps[:min(len(ps), most)])
	if len(ps) > most {
		d.text(counted(len(ps)-most, "summary more"))
	}
}
