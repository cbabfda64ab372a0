//lint:file-ignore SA1019 nhooyr.io/websocket is marked deprecated for having moved to another name, not for a fault.

package live

import (
	"context"
	"errors"
	"fmt"
	"net/http"
	"net/http/httptest"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"nhooyr.io/websocket"
)

// serveLab serves a lab's websockets at /live/{id}.
func serveLab(t testing.TB, lab *Lab) (base string) {
	t.Helper()
	server := httptest.NewServer(http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		lab.Watch(w, r, strings.TrimPrefix(r.URL.Path, "/live/"))
	}))
	t.Cleanup(server.Close)
	return "ws" + strings.TrimPrefix(server.URL, "http") + "/live/"
}

// page is a client: it reads by itself what comes.
type page struct {
	t    testing.TB
	conn *websocket.Conn
}

func dial(t testing.TB, url string) *page {
	t.Helper()
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	conn, _, err := websocket.Dial(ctx, url, nil)
	if err != nil {
		t.Fatal(err)
	}
	conn.SetReadLimit(16 << 20)
	t.Cleanup(func() { conn.CloseNow() })
	return &page{t, conn}
}

func (p *page) send(s string) {
	p.t.Helper()
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	if err := p.conn.Write(ctx, websocket.MessageText, []byte(s)); err != nil {
		p.t.Fatal(err)
	}
}

func (p *page) read() ([]byte, error) {
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	_, b, err := p.conn.Read(ctx)
	return b, err
}

// wait reads until a message of this kind satisfies f.
func (p *page) wait(kind string, f func([]byte) bool) []byte {
	p.t.Helper()
	for {
		b, err := p.read()
		if err != nil {
			p.t.Fatalf("waiting for a %s: %v", kind, err)
		}
		if kindOf(p.t, b) == kind && (f == nil || f(b)) {
			return b
		}
	}
}

func TestViewerSeesTheRunMoveAndDrags(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	p := dial(t, serveLab(t, b.lab)+b.id)
	first, err := p.read()
	if err != nil || kindOf(t, first) != "hello" {
		t.Fatalf("first message %s, %v", first, err)
	}
	p.send(`{"kind":"play"}`)
	start := hear(t, p.wait("frame", func(f []byte) bool { return hear(t, f).Tick > 0 }))
	later := hear(t, p.wait("frame", func(f []byte) bool { return hear(t, f).Tick > start.Tick+60 }))
	if later.Pose == start.Pose || !later.Playing {
		t.Errorf("the robot stands at %v", later.Pose)
	}
	p.send(`{"kind":"drag","what":"goal","x":6.5,"y":2,"done":true}`)
	g := greet(t, p.wait("hello", nil))
	if g.Goal != [3]float64{6.5, 2, 0.3} {
		t.Errorf("the goal is at %v", g.Goal)
	}
}

func TestEveryViewerSeesWhatOneDoes(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	base := serveLab(t, b.lab)
	one := dial(t, base+b.id)
	one.wait("hello", nil)
	other := dial(t, base+b.id)
	other.wait("hello", func(h []byte) bool { return greet(t, h).Viewers == 2 })
	one.wait("frame", func(f []byte) bool { return hear(t, f).Viewers == 2 })
	one.send(`{"kind":"drag","what":"solid","id":"post","x":5,"y":1}`)
	f := hear(t, other.wait("frame", func(f []byte) bool { return len(hear(t, f).Moved) > 0 }))
	if f.Moved[0] != [3]any{"post", 5.0, 1.0} {
		t.Errorf("moved %v", f.Moved)
	}
	other.conn.Close(websocket.StatusNormalClosure, "")
	one.wait("frame", func(f []byte) bool { return hear(t, f).Viewers == 1 })
}

func TestGarbageIsAnsweredAndTheConnectionSurvives(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	p := dial(t, serveLab(t, b.lab)+b.id)
	p.wait("hello", nil)
	for _, junk := range []string{"", "{", "[1,2", `{"kind":"dance"}`, `{"kind":"drag","what":"goal","x":1e400}`, strings.Repeat("a", maxMessage-1)} {
		p.send(junk)
		if n := said(t, p.wait("problem", nil)); n.About != "message" || n.Text == "" {
			t.Errorf("%.20q: %+v", junk, n)
		}
	}
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	if err := p.conn.Write(ctx, websocket.MessageBinary, []byte(`{"kind":"play"}`)); err != nil {
		t.Fatal(err)
	}
	p.wait("problem", nil)
	p.send(`{"kind":"play"}`)
	p.wait("frame", func(f []byte) bool { return hear(t, f).Tick > 0 })
}

func TestTooLongMessageEndsThatConnectionOnly(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	base := serveLab(t, b.lab)
	bad, good := dial(t, base+b.id), dial(t, base+b.id)
	bad.wait("hello", nil)
	good.wait("hello", nil)
	bad.send(strings.Repeat("a", maxMessage+1))
	for {
		if _, err := bad.read(); err != nil {
			if code := websocket.CloseStatus(err); code != websocket.StatusMessageTooBig {
				t.Errorf("closed with %d: %v", code, err)
			}
			break
		}
	}
	good.wait("frame", func(f []byte) bool { return hear(t, f).Viewers == 1 })
	good.send(`{"kind":"play"}`)
	good.wait("frame", func(f []byte) bool { return hear(t, f).Tick > 0 })
}

func TestUnknownSessionIsSaidAndClosedForGood(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	base := serveLab(t, b.lab)
	for _, id := range []string{"aaaaaaaaaaaaaaaa", "nothing", "../../etc/passwd"} {
		p := dial(t, base+id)
		said(t, p.wait("ended", nil))
		if _, err := p.read(); websocket.CloseStatus(err) != 4404 {
			t.Errorf("%s: %v", id, err)
		}
	}
}

func TestForeignOriginIsRefused(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	url := serveLab(t, b.lab) + b.id
	host := strings.Split(strings.TrimPrefix(url, "ws://"), "/")[0]
	for origin, want := range map[string]bool{
		"http://" + host:           true,
		"http://evil.example":      false,
		"http://127.0.0.1:1":       false, // another port of this machine is another site
		"http://" + host + ".evil": false,
		"null":                     false,
	} {
		ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
		conn, answer, err := websocket.Dial(ctx, url, &websocket.DialOptions{HTTPHeader: http.Header{"Origin": {origin}}})
		cancel()
		if (err == nil) != want {
			t.Errorf("origin %s: %v", origin, err)
		}
		if err == nil {
			conn.CloseNow()
		} else if answer == nil || answer.StatusCode != http.StatusForbidden {
			t.Errorf("origin %s: %v", origin, answer)
		}
	}
}

func TestReconnectingGoesOnWhereItIs(t *testing.T) {
	b := newBench(t, room(t), Opening{Playing: true})
	base := serveLab(t, b.lab)
	p := dial(t, base+b.id)
	before := hear(t, p.wait("frame", func(f []byte) bool { return hear(t, f).Tick > 40 }))
	p.conn.CloseNow() // as when a network goes
	p = dial(t, base+b.id)
	g := greet(t, p.wait("hello", nil))
	if g.Frame.Tick < before.Tick || len(g.Tape.Rows) == 0 {
		t.Errorf("tick %d after %d, %d rows", g.Frame.Tick, before.Tick, len(g.Tape.Rows))
	}
}

func TestServerStartedAgainGoesOnWhereItWas(t *testing.T) {
	b := newBench(t, room(t), Opening{Playing: true})
	base := serveLab(t, b.lab)
	p := dial(t, base+b.id)
	p.send(`{"kind":"drag","what":"goal","x":6.5,"y":2,"done":true}`)
	before := hear(t, p.wait("frame", func(f []byte) bool { return hear(t, f).Tick > 40 }))
	closed := make(chan struct{})
	go func() {
		defer close(closed)
		b.lab.Close()
	}()
	for {
		if _, err := p.read(); err != nil {
			if websocket.CloseStatus(err) != websocket.StatusGoingAway {
				t.Errorf("the connection ended with %v", err)
			}
			break
		}
	}
	<-closed
	lab := New(Options{Keeper: b.keep})
	defer lab.Close()
	p = dial(t, serveLab(t, lab)+b.id)
	g := greet(t, p.wait("hello", nil))
	if g.Frame.Tick < before.Tick || !g.Playing || g.Goal[0] != 6.5 {
		t.Errorf("tick %d after %d, playing %v, goal %v", g.Frame.Tick, before.Tick, g.Playing, g.Goal)
	}
	p.wait("frame", func(f []byte) bool { return hear(t, f).Tick > g.Frame.Tick+20 })
}

func TestTwoHundredViewersAndOneThatReadsNothing(t *testing.T) {
	b := newBench(t, room(t), Opening{Playing: true})
	base := serveLab(t, b.lab)
	dial(t, base+b.id) // never read from
	viewers := 200
	if testing.Short() { // under the race detector two cores have no time for more
		viewers = 40
	}
	var heardIt atomic.Int64
	var wg sync.WaitGroup
	began := time.Now()
	for range viewers {
		p := dial(t, base+b.id)
		wg.Go(func() {
			frames := 0
			for frames < 20 {
				m, err := p.read()
				if err != nil {
					t.Error(err)
					return
				}
				if strings.HasPrefix(string(m), `{"kind":"frame"`) {
					frames++
				}
			}
			heardIt.Add(1)
		})
	}
	wg.Wait()
	took := time.Since(began)
	if n := heardIt.Load(); n != int64(viewers) {
		t.Fatalf("%d of %d viewers heard the run", n, viewers)
	}
	// The run kept pace meanwhile.
	want := took.Seconds() / 0.005
	if got := float64(b.tick()); got < 0.7*want-100 {
		t.Errorf("tick %v after %s, want about %v", got, took, want)
	}
}

func TestCrowdIsLimited(t *testing.T) {
	keep := &memory{}
	lab := New(Options{Keeper: keep, Viewers: 1})
	defer lab.Close()
	id, err := lab.Create(context.Background(), room(t), Opening{})
	if err != nil {
		t.Fatal(err)
	}
	base := serveLab(t, lab)
	dial(t, base+id).wait("hello", nil)
	late := dial(t, base+id)
	if n := said(t, late.wait("ended", nil)); !strings.Contains(n.Text, "many people") {
		t.Error(n.Text)
	}
}

func TestPlainRequestIsAnswered(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	url := "http" + strings.TrimPrefix(serveLab(t, b.lab)+b.id, "ws")
	answer, err := http.Get(url)
	if err != nil {
		t.Fatal(err)
	}
	answer.Body.Close()
	if answer.StatusCode != http.StatusUpgradeRequired {
		t.Errorf("status %d", answer.StatusCode)
	}
}

func TestHastyViewerWaits(t *testing.T) {
	b := newBench(t, room(t), Opening{})
	p := dial(t, serveLab(t, b.lab)+b.id)
	p.wait("hello", nil)
	go func() {
		for range 3000 {
			ctx, cancel := context.WithTimeout(context.Background(), 5*time.Second)
			err := p.conn.Write(ctx, websocket.MessageText, []byte(`{"kind":"drag","what":"goal","x":6.5,"y":2}`))
			cancel()
			if err != nil {
				return
			}
		}
	}()
	// Another viewer is served as ever.
	other := dial(t, serveLab(t, b.lab)+b.id)
	other.wait("hello", nil)
	other.send(`{"kind":"play"}`)
	other.wait("frame", func(f []byte) bool { return hear(t, f).Tick > 20 })
	if err := b.s.do(context.Background(), func() {}); errors.Is(err, errEnded) {
		t.Error("the session has ended")
	}
}

func TestViewerLooksBackAndGoesOn(t *testing.T) {
	b := newBench(t, room(t), Opening{Tick: 3000})
	p := dial(t, serveLab(t, b.lab)+b.id)
	p.wait("hello", nil)
	for tick := 2900; tick >= 100; tick -= 100 {
		p.send(fmt.Sprintf(`{"kind":"seek","tick":%d}`, tick))
	}
	back := hear(t, p.wait("frame", func(f []byte) bool { return hear(t, f).Tick == 100 }))
	if back.Length != 3000 || back.AtHead || back.Playing || len(back.Shadows) != 2 {
		t.Errorf("%+v", back)
	}
	p.send(`{"kind":"play"}`)
	p.wait("frame", func(f []byte) bool { h := hear(t, f); return h.Tick > 110 && h.Playing && h.Length == 3000 })
	p.send(`{"kind":"drag","what":"goal","x":6.5,"y":2,"done":true}`)
	if n := said(t, p.wait("notice", nil)); !strings.Contains(n.Text, "another future") {
		t.Error(n.Text)
	}
	g := greet(t, p.wait("hello", nil))
	if g.Tape.Length >= 3000 || g.Frame.Tick > g.Tape.Length || g.Goal[0] != 6.5 {
		t.Errorf("length %d, goal %v", g.Tape.Length, g.Goal)
	}
}
