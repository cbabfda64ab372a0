package e2e

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// patience is how long a test waits for what it wants to see. It is far above what
// anything takes, and only a test that fails waits for so long.
const patience = 20 * time.Second

// The one browser of all tests; it is started when the first page is opened.
var shared struct {
	once sync.Once
	ctx  context.Context
	err  error
	end  []func()
}

func theBrowser(t *testing.T) context.Context {
	t.Helper()
	shared.once.Do(func() {
		options := append(slices.Clone(chromedp.DefaultExecAllocatorOptions[:]),
			chromedp.ExecPath(chromiumPath),
			chromedp.NoSandbox, // a container has no user namespaces; only our own pages are opened
			chromedp.DisableGPU,
			chromedp.Flag("disable-quic", true),
			chromedp.Flag("disable-component-update", true),
		)
		alloc, endAlloc := chromedp.NewExecAllocator(context.Background(), options...)
		ctx, endBrowser := chromedp.NewContext(alloc)
		shared.ctx = ctx
		shared.end = []func(){endBrowser, endAlloc}
		// The browser lives as long as the context it is started with: one without end.
		shared.err = chromedp.Do(ctx)
	})
	if shared.err != nil {
		t.Fatalf("%s does not start: %v", chromiumPath, shared.err)
	}
	return shared.ctx
}

func closeBrowser() {
	if shared.ctx != nil && shared.err == nil {
		ctx, cancel := context.WithTimeout(shared.ctx, patience)
		defer cancel()
		chromedp.Cancel(ctx)
	}
	for _, end := range shared.end {
		end()
	}
}

// tab is an open page.
type tab struct {
	t    *testing.T
	site *site
	ctx  context.Context
	name string // in messages and names of pictures

	mu       sync.Mutex
	frame    frame // the last that it received
	frames   int   // received over the present connection
	faults   []string
	expected []*regexp.Regexp
}

// newTab opens an empty page that shares nothing with other pages: neither storage
// nor cache.
func newTab(t *testing.T, s *site) *tab {
	t.Helper()
	p := &tab{t: t, site: s}
	ctx, cancel := chromedp.NewContext(theBrowser(t),
		chromedp.WithNewBrowserContext(), chromedp.WithListener(p.listen))
	p.ctx = ctx
	t.Cleanup(func() {
		if t.Failed() {
			p.picture()
		}
		p.judge()
		cancel()
	})
	// The page lives as long as the context of its first action: one without a limit.
	if err := chromedp.Do(ctx); err != nil {
		t.Fatalf("no page opens: %v", err)
	}
	p.do(
		chromedp.EmulateViewport(1440, 900),
		// Without it only one window of the browser could have the focus.
		chromedp.Func(func(ctx context.Context, target *chromedp.Target) error {
			_, err := cdp.Call(ctx, target, emulation.SetFocusEmulationEnabled, emulation.SetFocusEmulationEnabledParams{Enabled: true})
			return err
		}),
	)
	return p
}

// do does actions in the page, or fails.
func (p *tab) do(actions ...chromedp.Action[chromedp.Void]) {
	p.t.Helper()
	ctx, cancel := context.WithTimeout(p.ctx, patience)
	defer cancel()
	if err := chromedp.Do(ctx, actions...); err != nil {
		p.t.Fatalf("the browser does not do as it is told: %v", err)
	}
}

// call sends a command of the protocol to the page, or fails.
func call[P, R any](p *tab, command cdp.Command[P, R], params P) R {
	p.t.Helper()
	ctx, cancel := context.WithTimeout(p.ctx, patience)
	defer cancel()
	result, err := chromedp.Call(ctx, command, params)
	if err != nil {
		p.t.Fatalf("%s: %v", command.Method, err)
	}
	return result
}

// expect says that messages which match the pattern are to come and no faults.
func (p *tab) expect(pattern string) {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.expected = append(p.expected, regexp.MustCompile(pattern))
}

// listen hears all that happens in the page. It must not send commands.
func (p *tab) listen(event any) {
	p.mu.Lock()
	defer p.mu.Unlock()
	fault := func(format string, args ...any) { p.faults = append(p.faults, fmt.Sprintf(format, args...)) }
	switch e := event.(type) {
	case *runtime.EventConsoleAPICalled:
		switch e.Type {
		case runtime.ConsoleAPICalledTypeError, runtime.ConsoleAPICalledTypeWarning, runtime.ConsoleAPICalledTypeAssert:
			var words []string
			for _, a := range e.Args {
				words = append(words, strings.Trim(string(a.Value), `"`)+a.Description)
			}
			fault("console %s: %s", e.Type, strings.Join(words, " "))
		}
	case *runtime.EventExceptionThrown:
		d := e.ExceptionDetails
		words := d.Text
		if d.Exception != nil {
			words += " " + d.Exception.Description
		}
		fault("exception: %s (%s:%d)", words, d.URL, d.LineNumber+1)
	case *log.EventEntryAdded:
		if e.Entry.Level == log.EntryLevelError || e.Entry.Level == log.EntryLevelWarning {
			fault("console %s: %s (%s)", e.Entry.Level, e.Entry.Text, e.Entry.URL)
		}
	case *network.EventResponseReceived:
		if e.Response.Status >= 400 {
			fault("request: %s answered %d", e.Response.URL, e.Response.Status)
		}
	case *network.EventLoadingFailed:
		if !e.Canceled { // leaving a page cancels what it still loads
			fault("request: a %s failed: %s", e.Type, e.ErrorText)
		}
	case *network.EventWebSocketFrameError:
		fault("websocket: %s", e.ErrorMessage)
	case *network.EventWebSocketCreated:
		p.frames = 0
	case *network.EventWebSocketFrameReceived:
		p.received(e.Response.PayloadData, fault)
	}
}

// received takes in a message of the live stream.
func (p *tab) received(text []byte, fault func(string, ...any)) {
	var m struct {
		Kind string `json:"kind"`
	}
	err := json.Unmarshal(text, &m)
	switch {
	case err != nil:
	case m.Kind == "frame":
		var f frame
		if err = json.Unmarshal(text, &f); err == nil {
			p.frame = f
			p.frames++
		}
	case m.Kind == "hello":
		var h struct{ Frame frame }
		if err = json.Unmarshal(text, &h); err == nil {
			p.frame = h.Frame
			p.frames++
		}
	}
	if err != nil {
		fault("live stream: %v in %.200s", err, text)
	}
}

// judge fails the test for each fault that was not expected.
func (p *tab) judge() {
	p.t.Helper()
	p.mu.Lock()
	defer p.mu.Unlock()
	for _, f := range p.faults {
		if !slices.ContainsFunc(p.expected, func(r *regexp.Regexp) bool { return r.MatchString(f) }) {
			p.t.Errorf("on the page%s: %s", p.name, f)
		}
	}
	p.faults = nil
}

// pictures is the folder that keeps pictures of failures.
var pictures = sync.OnceValues(func() (string, error) { return os.MkdirTemp("", "leeway-e2e-") })

// picture keeps a picture of the page and logs where.
func (p *tab) picture() {
	dir, err := pictures()
	if err != nil {
		p.t.Logf("no picture of the page: %v", err)
		return
	}
	name := strings.NewReplacer("/", "_", " ", "_").Replace(p.t.Name() + p.name)
	file := filepath.Join(dir, name+".png")
	if err := p.shoot(file); err != nil {
		p.t.Logf("no picture of the page: %v", err)
		return
	}
	p.t.Logf("the page as it was: %s", file)
}

// shoot writes what the page shows into a file.
func (p *tab) shoot(file string) error {
	ctx, cancel := context.WithTimeout(p.ctx, patience)
	defer cancel()
	shot, err := chromedp.Call(ctx, page.CaptureScreenshot, page.CaptureScreenshotParams{})
	if err != nil {
		return err
	}
	return os.WriteFile(file, shot.Data, 0o666)
}
