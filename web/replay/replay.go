// Package replay writes a run as one file that plays it: a page of HTML with style,
// fonts, script and data in it, which opens in any browser from disk, without a
// server and without a network.
//
// # Basics
//
// [Write] takes a [Film] and writes the page. The modules below js/ play it; what in
// them needs no page (unpacking, where everything is at a moment, the layout of the
// tape) is in js/core and tested without one. They share the writing of numbers,
// shapes and elements with the bench (../static/js), and are joined into one script
// by [bundle], because a page from disk cannot load modules.
//
// # Safety
//
// All that comes from a scenario is in the packed data, in base64, and is put on the
// page as text; only the title stands in the HTML itself, escaped. The page's own
// policy forbids it every request, and every script and style but its own, by hash.
//
// # Caveats
//
// A page has at most [MaxBytes]. Where a run does not fit, frames are left out, then
// the beams: what happens in between is drawn straight.
package replay

import (
	"bytes"
	"crypto/sha256"
	"embed"
	"encoding/base64"
	"fmt"
	"html/template"
	"io"
	"io/fs"
	"strings"
	"sync"

	"leeway/web"
)

// MaxBytes is the size of the largest page.
const MaxBytes = 1_000_000

//go:embed js page.html replay.css
var files embed.FS

// parts are what all pages have in common.
type parts struct {
	page          *template.Template
	style, script string
	policy        string
}

var common = sync.OnceValues(func() (*parts, error) {
	p := &parts{}
	css, err := fs.ReadFile(files, "replay.css")
	if err != nil {
		return nil, err
	}
	p.style = web.Sheet("css/leeway.css") + string(css)
	p.script, err = bundle("replay/js/replay.js", module)
	if err != nil {
		return nil, err
	}
	p.policy = fmt.Sprintf("default-src 'none'; script-src '%s'; style-src '%s'; font-src data:; base-uri 'none'; form-action 'none'",
		digest(p.script), digest(p.style))
	p.page, err = template.New("page.html").ParseFS(files, "page.html")
	return p, err
})

// module reads a module by its path below web/.
func module(name string) (string, error) {
	if file, ok := strings.CutPrefix(name, "static/"); ok {
		return web.Text(file), nil
	}
	b, err := fs.ReadFile(files, strings.TrimPrefix(name, "replay/"))
	return string(b), err
}

// digest is how a policy names the text of an element.
func digest(text string) string {
	sum := sha256.Sum256([]byte(text))
	return "sha256-" + base64.StdEncoding.EncodeToString(sum[:])
}

// Policy returns the content security policy that a server must send with a page.
// The page says the same of itself.
func Policy() string {
	p, err := common()
	if err != nil {
		return "default-src 'none'"
	}
	return p.policy
}

// Write writes the page. The same film gives the same bytes.
func Write(w io.Writer, f *Film) error {
	p, err := common()
	if err != nil {
		return err
	}
	var b bytes.Buffer
	write := func(film string) error {
		b.Reset()
		return p.page.Execute(&b, map[string]any{
			"Name": f.Name, "Policy": template.HTMLAttr(`content="` + template.HTMLEscapeString(p.policy) + `"`),
			"Summary": strings.TrimSpace(f.Big + " " + f.Of + " " + f.Words + " " + f.Ending),
			// Our own texts, which the policy names by their digests, and base64.
			"Style":  template.HTML("<style>" + p.style + "</style>"),
			"Script": template.HTML("<script>" + p.script + "</script>"),
			"Film":   template.HTML(`<script id="film" type="text/plain">` + film + "</script>"),
		})
	}
	if err := write(""); err != nil {
		return err
	}
	film, err := fit(f, MaxBytes-b.Len())
	if err != nil {
		return err
	}
	if err := write(film); err != nil {
		return err
	}
	_, err = w.Write(b.Bytes())
	return err
}
