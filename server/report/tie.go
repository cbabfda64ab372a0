package report

import (
	"regexp"

	"leeway/web/page"
)

var beforeUnit = regexp.MustCompile(`(\d) (m/s²|m/s|rad/s²|rad/s|mm|m|s|%|×)([^\pL\d]|$)`)

// tied keeps numbers and their units on one line.
func tied(s string) string { return beforeUnit.ReplaceAllString(s, "$1\u00a0$2$3") }

// tie does so in all sentences of a page.
func tie(v *page.ReportView) {
	for _, s := range []*string{&v.Asked, &v.Of, &v.Ending, &v.More} {
		*s = tied(*s)
	}
	for _, list := range [][]string{v.Shortfalls, v.Ways, v.Unparted, v.Events, v.Changes, v.Shared} {
		for i := range list {
			list[i] = tied(list[i])
		}
	}
	for _, rows := range [][]page.ReportRow{v.Rows, v.Traits} {
		for _, r := range rows {
			for i := range r.Cells {
				r.Cells[i].Text = tied(r.Cells[i].Text)
			}
		}
	}
	for i := range v.Partings {
		v.Partings[i].Text = tied(v.Partings[i].Text)
	}
	for i := range v.Advice {
		v.Advice[i].Text = tied(v.Advice[i].Text)
	}
}
