package replay

import (
	"bytes"
	"crypto/sha256"
	"encoding/base64"
	"errors"
	"fmt"
	"html"
	"regexp"
	"strings"
	"testing"
)

func written(t testing.TB, f *Film) string {
	t.Helper()
	var b bytes.Buffer
	if err := Write(&b, f); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func TestPageIsByteStable(t *testing.T) {
	first, second := written(t, sample(20)), written(t, sample(20))
	if first != second {
		t.Error("the same film gives other bytes")
	}
}

// Whatever a scenario is called, what the page holds is ours.
func TestHostileWordsStayWords(t *testing.T) {
	const hostile = `</script></title><img src=x onerror=alert(1)> "quoted" & '{{.}}' <!-- ]]> ` + "\u2028\x00"
	f := sample(5)
	for _, s := range []*string{&f.Name, &f.Purpose, &f.Asked, &f.Big, &f.Of, &f.Words, &f.Ending, &f.Brief, &f.Caution, &f.Link, &f.Seed, &f.Hash, &f.Version, &f.Date} {
		*s = hostile
	}
	f.Failures, f.Ways = []string{hostile}, []string{hostile}
	f.Modes[0].Name, f.Models[0].Name, f.Models[0].Ending = hostile, hostile, hostile
	f.Whys[0].Text, f.Marks[0].Text, f.Pin.Text, f.Pin.More = hostile, hostile, hostile, hostile
	f.Advice, f.Table = []Advice{{hostile, false}}, []Row{{hostile, []Cell{{hostile, true}}}}
	f.Solids[0].Shape = hostile
	page := written(t, f)

	// Tags are counted where they would act: outside of style and scripts.
	outside := regexp.MustCompile(`(?s)<(style|script)[^>]*>.*?</(style|script)>`).ReplaceAllString(page, "<$1/>")
	if n := strings.Count(outside, "<script/>"); n != 2 {
		t.Errorf("%d scripts", n)
	}
	for _, never := range []string{"<img", "<iframe", "<link", "<object", "<base"} {
		if strings.Contains(outside, never) {
			t.Errorf("%s in it", never)
		}
	}
	if m := regexp.MustCompile(`<[a-zA-Z][^>]*\s(?:on[a-z]+|style|src|href)=`).FindString(regexp.MustCompile(`="[^"]*"`).ReplaceAllString(outside, `=""`)); m != "" {
		t.Errorf("it runs or loads something: %s", m)
	}
	title := regexp.MustCompile(`<title>([^<]*)</title>`).FindStringSubmatch(page)
	if title == nil || !strings.Contains(html.UnescapeString(title[1]), "</title><img src=x") {
		t.Errorf("the title is %v", title)
	}
	head, _ := unpacked(t, filmIn(t, page))
	if head["name"] != hostile {
		t.Errorf("the name came back as %q", head["name"])
	}
}

func filmIn(t testing.TB, page string) string {
	t.Helper()
	m := regexp.MustCompile(`<script id="film" type="text/plain">([A-Za-z0-9+/=]*)</script>`).FindStringSubmatch(page)
	if m == nil {
		t.Fatal("no film")
	}
	return m[1]
}

func TestPolicyIsThatOfThePage(t *testing.T) {
	page := written(t, sample(5))
	meta := regexp.MustCompile(`<meta http-equiv="Content-Security-Policy" content="([^"]*)">`).FindStringSubmatch(page)
	if meta == nil {
		t.Fatal("no policy")
	}
	policy := html.UnescapeString(meta[1])
	if policy != Policy() || !strings.HasPrefix(policy, "default-src 'none'; ") || strings.Contains(policy, "unsafe") || strings.Contains(policy, "http") {
		t.Errorf("the policy is %s, to be sent is %s", policy, Policy())
	}
	digest := func(text string) string {
		sum := sha256.Sum256([]byte(text))
		return "'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'"
	}
	style := regexp.MustCompile(`(?s)<style>(.*?)</style>`).FindStringSubmatch(page)
	script := regexp.MustCompile(`(?s)<script>(.*?)</script>`).FindStringSubmatch(page)
	if style == nil || script == nil || !strings.Contains(policy, "style-src "+digest(style[1])) || !strings.Contains(policy, "script-src "+digest(script[1])) {
		t.Errorf("style and script are not those of the policy %s", policy)
	}
	for _, u := range regexp.MustCompile(`url\("?([^")]*)`).FindAllStringSubmatch(style[1], -1) {
		if !strings.HasPrefix(u[1], "data:font/woff2;base64,") {
			t.Errorf("the style loads %.60s", u[1])
		}
	}
	if m := regexp.MustCompile(`[^{](?:\b(?:fetch|XMLHttpRequest|WebSocket|EventSource|importScripts|import)\s*\(|sendBeacon)`).FindString(script[1]); m != "" {
		t.Errorf("the script calls %s", m)
	}
}

func TestLargeFilmsFit(t *testing.T) {
	// An hour of frames with movers and beams.
	if page := written(t, sample(36_000)); len(page) > MaxBytes {
		t.Errorf("%d bytes", len(page))
	} else if _, columns := unpacked(t, filmIn(t, page)); len(columns["tick"][0]) < 5000 {
		t.Errorf("%d frames are left", len(columns["tick"][0]))
	}
	f := sample(100)
	for i := range 60_000 {
		x := float64(i*7919%500_000) / 1000
		f.Solids = append(f.Solids, Solid{Shape: "wall", Points: [][2]float64{{x, float64(i*104_729%500_000) / 1000}, {x + 0.123, 1}}})
	}
	if page := written(t, f); len(page) > MaxBytes {
		t.Errorf("%d bytes with 60,000 walls", len(page))
	}
}

func TestBundle(t *testing.T) {
	read := func(files map[string]string) func(string) (string, error) {
		return func(name string) (string, error) {
			if text, ok := files[name]; ok {
				return text, nil
			}
			return "", fmt.Errorf("no %s", name)
		}
	}
	got, err := bundle("a/main.js", read(map[string]string{
		"a/main.js": "// Main.\nimport { one, two as deux } from './b.js';\nimport { three } from '../c.js';\none(deux, three);\n",
		"a/b.js":    "import { three } from '../c.js';\nconst own = 1;\nexport function one() {}\nexport const two = own + three;\n",
		"c.js":      "const own = 2;\nexport const three = own;\nexport class Four {}\n",
	}))
	if err != nil {
		t.Fatal(err)
	}
	want := `'use strict';
const modules = {};
modules['c.js'] = (() => {
const own = 2;
const three = own;
class Four {}
return {three, Four};
})();
modules['a/b.js'] = (() => {
const { three } = modules['c.js'];
const own = 1;
function one() {}
const two = own + three;
return {one, two};
})();
modules['a/main.js'] = (() => {
// Main.
const { one, two: deux } = modules['a/b.js'];
const { three } = modules['c.js'];
one(deux, three);
return {};
})();
`
	if got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	for what, files := range map[string]map[string]string{
		"a circle":        {"m.js": "import { a } from './n.js';\n", "n.js": "import { b } from './m.js';\nexport const a = 1;\n"},
		"nothing there":   {"m.js": "import { a } from './gone.js';\n"},
		"another form":    {"m.js": "import * as a from './n.js';\n", "n.js": ""},
		"a default":       {"m.js": "export default 1;\n"},
		"an end of it":    {"m.js": "const s = '</script>';\n"},
		"a list of names": {"m.js": "const a = 1;\nexport { a };\n"},
	} {
		if _, err := bundle("m.js", read(files)); err == nil {
			t.Errorf("%s is bundled", what)
		}
	}
}

func TestPageIsWrittenWholeOrNotAtAll(t *testing.T) {
	f := sample(5)
	for range 40_000 {
		f.Solids = append(f.Solids, Solid{Shape: "polygon", Points: [][2]float64{{0.1234, 5.4321}}})
	}
	failing := writer(func([]byte) (int, error) { return 0, errors.New("full") })
	if err := Write(failing, f); err == nil || err.Error() != "full" {
		t.Errorf("error %v", err)
	}
}

type writer func([]byte) (int, error)

func (w writer) Write(b []byte) (int, error) { return w(b) }
