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
		for _, p := range parts {
			switch {
			case p.Number != "":
				b.WriteString(`<span class="num"><span class="entry"><span class="still">` + templ.EscapeString(p.Number) + `</span>`)
				if p.Unit != "" {
					b.WriteString(`<span class="unit">&thinsp;` + templ.EscapeString(p.Unit) + `</span>`)
				}
				b.WriteString(`</span></span>`)
			case p.Choice != "":
				b.WriteString(`<span class="choice"><span class="still">` + templ.EscapeString(p.Choice) + `</span></span>`)
			default:
				b.WriteString(templ.EscapeString(p.Text))
			}
		}
		_, err := io.WriteString(w, b.String())
		return err
	})
}
