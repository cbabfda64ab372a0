package web

import (
	"net/http"
	"net/http/httptest"
	"path"
	"regexp"
	"strings"
	"testing"
	"testing/fstest"
)

func get(t *testing.T, url string, header ...string) *http.Response {
	t.Helper()
	r := httptest.NewRequest("GET", url, nil)
	for i := 0; i < len(header); i += 2 {
		r.Header.Set(header[i], header[i+1])
	}
	w := httptest.NewRecorder()
	Handler().ServeHTTP(w, r)
	return w.Result()
}

func TestFilesAreServedForEver(t *testing.T) {
	for name, a := range assets {
		res := get(t, URL(name))
		if res.StatusCode != http.StatusOK {
			t.Errorf("%s: status %d", name, res.StatusCode)
		}
		if c := res.Header.Get("Cache-Control"); !strings.Contains(c, "immutable") {
			t.Errorf("%s: Cache-Control %q", name, c)
		}
		if k := res.Header.Get("Content-Type"); k != types[path.Ext(name)] {
			t.Errorf("%s: Content-Type %q", name, k)
		}
		if again := get(t, URL(name), "If-None-Match", a.tag); again.StatusCode != http.StatusNotModified {
			t.Errorf("%s: asked again with its tag: status %d", name, again.StatusCode)
		}
	}
}

func TestOtherHashLeadsToThisOne(t *testing.T) {
	res := get(t, "/static/000000000000/js/bench.js")
	if res.StatusCode != http.StatusFound || res.Header.Get("Location") != URL("js/bench.js") {
		t.Errorf("status %d to %q", res.StatusCode, res.Header.Get("Location"))
	}
	if c := res.Header.Get("Cache-Control"); c != "no-store" {
		t.Errorf("the way there is kept: %q", c)
	}
}

func TestNothingElseIsServed(t *testing.T) {
	for _, url := range []string{"/static/", "/static/x", "/static/" + version, "/static/" + version + "/", "/static/" + version + "/js",
		"/static/" + version + "/../embed.go", "/static/" + version + "/nothing.js"} {
		if res := get(t, url); res.StatusCode != http.StatusNotFound {
			t.Errorf("%s: status %d", url, res.StatusCode)
		}
	}
	w := httptest.NewRecorder()
	Handler().ServeHTTP(w, httptest.NewRequest("POST", URL("js/bench.js"), nil))
	if w.Code != http.StatusMethodNotAllowed {
		t.Errorf("POST: status %d", w.Code)
	}
}

func TestUnknownNamePanics(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("an address was given for a file that is not there")
		}
	}()
	URL("js/nothing.js")
}

// TestHashCoversEverything changes a byte, a name, and nothing.
func TestHashCoversEverything(t *testing.T) {
	hash := func(name, data string) string {
		_, h := load(fstest.MapFS{"static/a.js": {Data: []byte("a")}, name: {Data: []byte(data)}})
		return h
	}
	first := hash("static/js/b.js", "b")
	if first != hash("static/js/b.js", "b") {
		t.Error("the same files have two hashes")
	}
	if first == hash("static/js/b.js", "c") || first == hash("static/js/c.js", "b") {
		t.Error("other files have the same hash")
	}
}

var importing = regexp.MustCompile(`(?m)^import\b[^;']*'([^']+)'`)

// TestImportsStayBelowTheHash holds every import of every module to a relative
// path of a module that is there.
func TestImportsStayBelowTheHash(t *testing.T) {
	found := 0
	for name, a := range assets {
		if path.Ext(name) != ".js" {
			continue
		}
		for _, m := range importing.FindAllSubmatch(a.data, -1) {
			found++
			from := string(m[1])
			target := path.Join(path.Dir(name), from)
			if _, ok := assets[target]; !ok || !strings.HasPrefix(from, ".") {
				t.Errorf("%s imports %q, which is not there", name, from)
			}
		}
	}
	if found < 40 {
		t.Errorf("only %d imports were found: the test no longer reads them", found)
	}
}

// TestCoreIsFreeOfTheDOM holds the modules of js/core to what also runs without a
// page.
func TestCoreIsFreeOfTheDOM(t *testing.T) {
	page := regexp.MustCompile(`\b(document|window|navigator|location|localStorage|HTMLElement|SVGElement|requestAnimationFrame)\b[.(]`)
	comment := regexp.MustCompile(`(?s)/\*.*?\*/|//[^\n]*`)
	for name, a := range assets {
		if !strings.HasPrefix(name, "js/core/") {
			continue
		}
		if m := page.Find(comment.ReplaceAll(a.data, nil)); m != nil {
			t.Errorf("%s uses %s", name, m)
		}
		for _, m := range importing.FindAllSubmatch(a.data, -1) {
			if !strings.HasPrefix(string(m[1]), "./") {
				t.Errorf("%s imports %s from outside the core", name, m[1])
			}
		}
	}
}

// TestForeignFilesCarryTheirLicence checks that what others have written ships with
// its licence, and that uPlot neither evaluates text nor writes style attributes,
// which the pages' policy would refuse.
func TestForeignFilesCarryTheirLicence(t *testing.T) {
	licence, ok := assets["vendor/uplot/LICENSE.txt"]
	if !ok || !strings.Contains(string(licence.data), "The MIT License") {
		t.Fatal("uPlot comes without its licence")
	}
	code := string(assets["vendor/uplot/uPlot.esm.js"].data)
	if !strings.Contains(code, "(v1.6.32)") {
		t.Error("uPlot is of another version than the modules were written for")
	}
	for _, refused := range []string{"eval(", "new Function", `setAttribute("style"`, `setAttribute('style'`, ".innerHTML"} {
		if strings.Contains(code, refused) {
			t.Errorf("uPlot has %s", refused)
		}
	}
}
