package e2e

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/browser"
	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/dom"
	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"

	"leeway/sim/scenario"
)

// file writes a file of that name and returns its path.
func file(t *testing.T, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// choose gives a file to a file input, as the dialog of the browser does.
func (p *tab) choose(selector, path string) {
	p.t.Helper()
	found := call(p, runtime.Evaluate, runtime.EvaluateParams{Expression: "document.querySelector(" + quote(selector) + ")"})
	if found.Result.ObjectID == "" {
		p.t.Fatalf("there is no %s", selector)
	}
	call(p, dom.SetFileInputFiles, dom.SetFileInputFilesParams{Files: []string{path}, ObjectID: found.Result.ObjectID})
}

// drop drops a file onto the page, as from a window of files.
func (p *tab) drop(path string, at point) {
	p.t.Helper()
	data := &input.DragData{Items: []*input.DragDataItem{}, Files: []string{path}, DragOperationsMask: 1}
	for _, kind := range []input.DispatchDragEventType{
		input.DispatchDragEventTypeDragEnter, input.DispatchDragEventTypeDragOver, input.DispatchDragEventTypeDrop,
	} {
		call(p, input.DispatchDragEvent, input.DispatchDragEventParams{Type: kind, X: at.X, Y: at.Y, Data: data})
	}
}

// wrong is a file with two faults, at known places.
const wrong = `{
  "leeway": 1,
  "floor": {"width_m": 12, "height_m": 8},
  "robot": {"radius_m": -0.2},
  "start": {"x_m": 1, "y_m": 4},
  "goal": {"x_m": 11, "y_m": 4, "colour": "red"}
}`

// TestFileIsOpened chooses and drops files, bad ones and good ones.
func TestFileIsOpened(t *testing.T) {
	t.Parallel()
	p := newTab(t, serve(t))
	p.expect(`/api/sessions answered 422|status of 422`)
	p.visit("/")
	p.choose("#intake input[type=file]", file(t, "wrong.json", wrong))
	p.says("#intake .fault-box", "wrong.json")
	faults := strings.Join(strings.Fields(p.read("#intake .faults")), " ")
	for _, want := range []string{"line 4, column 25", "robot.radius_m", "line 6, column 33", "colour"} {
		if !contains(faults, want) {
			t.Errorf("the faults do not say %q: %s", want, faults)
		}
	}
	p.see("the place is marked in the line", `document.querySelector('#intake .fault-line mark')?.textContent === '-'`)
	if at := eval[string](p, `location.pathname`); at != "/" {
		t.Errorf("the page went to %s", at)
	}

	// Mended, the same file opens.
	mended := strings.NewReplacer("-0.2", "0.2", `, "colour": "red"`, "").Replace(wrong)
	p.choose("#intake input[type=file]", file(t, "wrong.json", mended))
	p.see("the bench opens", `location.pathname.startsWith('/bench/')`)
	p.alive()

	// On the bench a bad file says so in a dialog, over a run that goes on.
	p.drop(file(t, "text.json", "This is no scenario."), p.at(6, 4))
	p.see("the dialog opens", `document.getElementById('opener').open`)
	p.says("#opener .fault-box", "wrong in text.json")
	p.says("#opener .fault-box", "line 1, column ")
	p.keys("\u001b")
	session := p.session()
	p.drop(file(t, "workshop.json", workshop), p.at(6, 4))
	p.see("another bench opens", `location.pathname.startsWith('/bench/') && location.pathname !== '/bench/`+session+`'`)
	p.says("#name", "The workshop")
	p.see("the sheet for dropping is gone", `document.body.dataset.drop === undefined`)
}

// TestFileIsSaved changes something and saves the file.
func TestFileIsSaved(t *testing.T) {
	t.Parallel()
	s := serve(t)
	p := newTab(t, s)
	dir := t.TempDir()
	p.do(chromedp.Func(func(ctx context.Context, _ *chromedp.Target) error {
		c := chromedp.FromContext(ctx)
		_, err := cdp.Call(ctx, c.Browser, browser.SetDownloadBehavior, browser.SetDownloadBehaviorParams{
			Behavior: browser.SetDownloadBehaviorBehaviorAllow, BrowserContextID: c.BrowserContextID, DownloadPath: dir,
		})
		return err
	}))
	id := s.open(map[string]any{"scenario": workshop, "playing": false})
	p.bench(id)
	p.drag(p.at(11, 4), p.at(9, 2))
	p.until("the change is made", func() bool { return near(p.last().Goal, [2]float64{9, 2}, 0.012) })
	p.click("#save")
	path := filepath.Join(dir, "the-workshop.json")
	var saved []byte
	p.until("the file is there", func() bool {
		var err error
		saved, err = os.ReadFile(path)
		return err == nil && len(saved) > 0
	})
	if want := s.get("/api/sessions/" + id + "/scenario"); string(saved) != want {
		t.Errorf("the file is not what the server has:\n%s", saved)
	}
	sc, err := scenario.Parse(saved)
	if err != nil {
		t.Fatalf("the file does not open: %v", err)
	}
	if string(sc.Print()) != string(saved) {
		t.Error("the file is not in canonical form")
	}
	if g := sc.Folded().Goal; !near([2]float64{g.X, g.Y}, [2]float64{9, 2}, 0.012) {
		t.Errorf("the file has the goal at %v, %v", g.X, g.Y)
	}
	if at := p.session(); at != id {
		t.Errorf("saving led away, to %s", at)
	}
}
