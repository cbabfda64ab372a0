// Package web holds what a browser loads besides the pages themselves: style
// sheets, ES modules, fonts and pictures, built into the binary.
//
// Every file is served below /static/HASH/, where HASH stands for the contents
// of all files together. An address therefore never changes its meaning and may
// be kept by a browser for ever, and the modules can import one another by
// relative path: what a module imports lies below the same HASH.
//
// There is no build step. A file put into static/ is served as it is; files that
// must not ship, such as the tests of the modules, live outside of it.
package web

import (
	"bytes"
	"crypto/sha256"
	"embed"
	"encoding/hex"
	"io/fs"
	"net/http"
	"path"
	"strings"
	"time"
)

//go:embed static
var files embed.FS

// prefix is the path that Handler must be mounted at.
const prefix = "/static/"

// types are the content types of what is served. They do not depend on what the
// machine has registered for a suffix, as mime.TypeByExtension does.
var types = map[string]string{
	".css":   "text/css; charset=utf-8",
	".js":    "text/javascript; charset=utf-8",
	".svg":   "image/svg+xml",
	".txt":   "text/plain; charset=utf-8",
	".woff2": "font/woff2",
}

type asset struct {
	data []byte
	kind string // content type
	tag  string // ETag
}

// assets and version are fixed once the program has started.
var assets, version = load(files)

// load reads every file of fsys below static/, and digests them all in the order
// of their names.
func load(fsys fs.FS) (map[string]asset, string) {
	found := map[string]asset{}
	all := sha256.New()
	err := fs.WalkDir(fsys, "static", func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		data, err := fs.ReadFile(fsys, name)
		if err != nil {
			return err
		}
		sum := sha256.Sum256(data)
		name = strings.TrimPrefix(name, "static/")
		kind, ok := types[path.Ext(name)]
		if !ok {
			kind = "application/octet-stream"
		}
		found[name] = asset{data, kind, `"` + hex.EncodeToString(sum[:8]) + `"`}
		all.Write([]byte(name))
		all.Write(sum[:])
		return nil
	})
	if err != nil {
		panic("web: the embedded files cannot be read: " + err.Error())
	}
	return found, hex.EncodeToString(all.Sum(nil)[:6])
}

// URL returns the address of a file of static/, for example
// URL("css/leeway.css"). It panics when there is no such file: a page that names
// one is wrong whoever asks for it, and a test that renders the page finds it.
func URL(name string) string {
	if _, ok := assets[name]; !ok {
		panic("web: there is no static file " + name)
	}
	return prefix + version + "/" + name
}

// Handler serves everything below /static/. A file asked for below another HASH
// (by a page older than this program) is redirected to where it is now.
func Handler() http.Handler { return http.HandlerFunc(serve) }

func serve(w http.ResponseWriter, r *http.Request) {
	if r.Method != http.MethodGet && r.Method != http.MethodHead {
		w.Header().Set("Allow", "GET, HEAD")
		http.Error(w, "only GET and HEAD", http.StatusMethodNotAllowed)
		return
	}
	hash, name, _ := strings.Cut(strings.TrimPrefix(r.URL.Path, prefix), "/")
	a, ok := assets[name]
	if !ok {
		http.NotFound(w, r)
		return
	}
	if hash != version {
		w.Header().Set("Cache-Control", "no-store")
		http.Redirect(w, r, URL(name), http.StatusFound)
		return
	}
	w.Header().Set("Content-Type", a.kind)
	w.Header().Set("Cache-Control", "public, max-age=31536000, immutable")
	w.Header().Set("ETag", a.tag)
	http.ServeContent(w, r, "", time.Time{}, bytes.NewReader(a.data))
}
