package page

import (
	"context"
	"io"
	"strings"

	"github.com/a-h/templ"
)

// brief is the sentence as the server has it, so that it stands there before any
// script has run. The script puts fields of the same size into the places of the
// numbers and choices. It is written by hand because no space may come in between
// a number and the comma behind it.
func brief(parts []Part) templ.Component {
	return templ.ComponentFunc(func(_ context.Context, w io.Writer) error {
		var b strings.Builder
		for i, p := range parts {
			tail := ""
			if i+1 < len(parts) {
				tail = templ.EscapeString(punctuation(parts[i+1].Text))
			}
			switch {
			case p.Number != "":
				b.WriteString(`<span class="num"><span class="entry"><span class="still">` + templ.EscapeString(p.Number) + `</span>`)
				if p.Unit != "" {
					b.WriteString(`<span class="unit">&thinsp;` + templ.EscapeString(p.Unit) + `</span>`)
				}
				b.WriteString(`</span>` + tail + `</span>`)
			case p.Choice != "":
				b.WriteString(`<span class="choice"><span class="still">` + templ.EscapeString(p.Choice) + `</span>` + tail + `</span>`)
			case i > 0 && parts[i-1].Text == "":
				b.WriteString(templ.EscapeString(p.Text[len(punctuation(p.Text)):]))
			default:
				b.WriteString(templ.EscapeString(p.Text))
			}
		}
		_, err := io.WriteString(w, b.String())
		return err
	})
}

// punctuation is what a text begins with that belongs to the field before it: a
// field is a box of its own, and a browser may break the line behind a box.
func punctuation(text string) string {
	return text[:len(text)-len(strings.TrimLeft(text, ",.;:!?)"))]
}
