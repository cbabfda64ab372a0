package e2e

import (
	"bytes"
	"context"
	"encoding/json"
	"net/url"
	"testing"

	"github.com/chromedp/cdproto/browser"
	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/chromedp"

	"leeway/server/cli"
)

// toTheEnd lets the run go as fast as it goes and returns the frame it ends with.
func (p *tab) toTheEnd() frame {
	p.t.Helper()
	p.click(`.speeds input[value="0"]`)
	if !p.last().Playing {
		p.click("[data-do=play]")
	}
	p.until("the run ends", func() bool { return p.last().Status != "running" })
	return p.last()
}

// clipboard lets the page use the clipboard, or keeps it shut.
func (p *tab) clipboard(setting browser.PermissionSetting) {
	p.t.Helper()
	p.do(chromedp.Func(func(ctx context.Context, _ *chromedp.Target) error {
		c := chromedp.FromContext(ctx)
		for _, name := range []string{"clipboard-read", "clipboard-write"} {
			_, err := cdp.Call(ctx, c.Browser, browser.SetPermission, browser.SetPermissionParams{
				BrowserContextID: c.BrowserContextID, Setting: setting,
				Permission: &browser.PermissionDescriptor{Name: name},
			})
			if err != nil {
				return err
			}
		}
		return nil
	}))
}

// TestLinkOpensTheSameRunElsewhere changes a run by hand, copies its link, and opens
// it on a server that has never heard of it. All three ways to the end of the run
// must come to the same hash.
func TestLinkOpensTheSameRunElsewhere(t *testing.T) {
	t.Parallel()
	here := serve(t)
	p := newTab(t, here)
	id := here.open(map[string]any{"scenario": workshop, "playing": true})
	p.bench(id)
	// Edits of several kinds, while it drives.
	p.drag(p.at(11, 4), p.at(10, 1.5))
	p.drag(p.at(6.5, 5.3), p.at(5.2, 3.2))
	p.click(field("robot.speed_m_s"))
	p.keys("0.6\r\t")
	here.has(p, id, "robot.speed_m_s", 0.6)
	end := p.toTheEnd()
	if end.Status != "arrived" {
		t.Errorf("the run ended with %q; one that arrives shows more", end.Status)
	}
	if n := len(here.scenario(id).Edits); n < 3 {
		t.Errorf("only %d edits", n)
	}

	p.clipboard(browser.PermissionSettingGranted)
	p.click("#copy")
	p.says("#strip", "Link copied")
	link := eval[string](p, `navigator.clipboard.readText()`)
	u, err := url.Parse(link)
	if err != nil || u.Path != "/open" || u.Host != here.addr() || u.Fragment == "" {
		t.Fatalf("that is no link: %q %v", link, err)
	}

	there := serve(t)
	if there.url == here.url {
		t.Fatal("one server, not two")
	}
	q := newTab(t, there)
	q.name = " elsewhere"
	q.visit("/open#" + u.Fragment)
	q.see("the link gives way to a bench", `location.pathname.startsWith('/bench/')`)
	q.alive()
	q.says("#name", "The workshop")
	again := q.toTheEnd()
	if again.Hash != end.Hash || again.Tick != end.Tick || again.Status != end.Status {
		t.Errorf("the run ends with\n%+v, and from its link with\n%+v", end, again)
	}

	var out, errs bytes.Buffer
	code := cli.Main([]string{"run", link, "--json"}, &bytes.Buffer{}, &out, &errs)
	var result struct{ Status, Hash string }
	if err := json.Unmarshal(out.Bytes(), &result); err != nil || code != 0 {
		t.Fatalf("leeway run: status %d, %v, %s%s", code, err, out.String(), errs.String())
	}
	if result.Hash != end.Hash {
		t.Errorf("the command line comes to %s, the bench to %s", result.Hash, end.Hash)
	}
}

// TestLinkIsShownWhereItCannotBeCopied has the browser keep the clipboard shut.
func TestLinkIsShownWhereItCannotBeCopied(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	id := s.open(map[string]any{"shipped": "wall", "playing": false})
	p.bench(id)
	p.clipboard(browser.PermissionSettingDenied)
	p.click("#copy")
	p.see("a dialog opens", `document.getElementById('share').open`)
	if got := eval[string](p, `document.getElementById('share-link').value`); !contains(got, s.url+"/open#") {
		t.Errorf("the dialog shows %q", got)
	}
	p.see("the link is selected", `getSelection().toString().includes('/open#') || document.activeElement.selectionEnd > 20`)
	p.keys("\u001b")
	p.see("Escape closes it", `!document.getElementById('share').open`)
}

// TestDamagedLinkSaysSo opens links that are none.
func TestDamagedLinkSaysSo(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	p.expect(`answered 422|status of 422`)
	for fragment, words := range map[string]string{
		"":                  "This link is empty",
		"#%25%25%25":        "This link is damaged",
		"#AAAAAAAAAAAAAAAA": "could not be opened",
	} {
		p.visit("/") // between two addresses that differ in the fragment alone nothing is loaded
		p.visit("/open" + fragment)
		p.says("main", words)
	}
}
