package web

import (
	"encoding/base64"
	"path"
	"regexp"
	"strings"
)

// Text returns the text of a file of static/. Like URL it panics when there is no
// such file.
func Text(name string) string {
	a, ok := assets[name]
	if !ok {
		panic("web: there is no static file " + name)
	}
	return string(a.data)
}

var (
	sheetURL    = regexp.MustCompile(`url\("([^"]+)"\)`)
	fontDisplay = regexp.MustCompile(`font-display: \w+;`)
)

// Sheet returns a style sheet of static/ for a page that is kept as a file: what it
// refers to, the fonts, stands in it as data, so there is nothing to wait for.
func Sheet(name string) string {
	text := fontDisplay.ReplaceAllString(Text(name), "font-display: block;")
	return sheetURL.ReplaceAllStringFunc(text, func(u string) string {
		file := path.Join(path.Dir(name), sheetURL.FindStringSubmatch(u)[1])
		kind, _, _ := strings.Cut(assets[file].kind, ";")
		return `url("data:` + kind + `;base64,` + base64.StdEncoding.EncodeToString([]byte(Text(file))) + `")`
	})
}
