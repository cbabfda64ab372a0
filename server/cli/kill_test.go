//lint:file-ignore SA1019 nhooyr.io/websocket is marked deprecated for having moved to another name, not for a fault.

package cli

import (
	"bufio"
	"context"
	"encoding/json"
	"io"
	"net/http"
	"os"
	"os/exec"
	"strings"
	"testing"
	"time"

	"nhooyr.io/websocket"
)

// asLeeway in the environment makes this test binary the program itself.
const asLeeway = "LEEWAY_TEST_AS_PROGRAM"

func TestMain(m *testing.M) {
	if os.Getenv(asLeeway) != "" {
		os.Exit(Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
	}
	os.Exit(m.Run())
}

// program starts leeway serve as a process of its own.
func program(t *testing.T, data string) (url string, p *os.Process) {
	t.Helper()
	cmd := exec.Command(os.Args[0], "serve", "--addr", "127.0.0.1:0", "--data", data)
	cmd.Env = append(os.Environ(), asLeeway+"=1")
	cmd.Stderr = os.Stderr
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		cmd.Process.Kill()
		cmd.Wait()
	})
	line, err := bufio.NewReader(out).ReadString('\n')
	if err != nil {
		t.Fatalf("it does not say where it is: %v", err)
	}
	return strings.Fields(strings.TrimPrefix(line, "Leeway is at "))[0], cmd.Process
}

// stream is one viewer.
type stream struct {
	t    *testing.T
	conn *websocket.Conn
}

func watchSession(t *testing.T, url, id string) *stream {
	t.Helper()
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	conn, _, err := websocket.Dial(ctx, "ws"+strings.TrimPrefix(url, "http")+"live/"+id, nil)
	if err != nil {
		t.Fatal(err)
	}
	conn.SetReadLimit(16 << 20)
	t.Cleanup(func() { conn.CloseNow() })
	return &stream{t, conn}
}

func (s *stream) say(text string) {
	s.t.Helper()
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	if err := s.conn.Write(ctx, websocket.MessageText, []byte(text)); err != nil {
		s.t.Fatal(err)
	}
}

type shown struct {
	Kind    string `json:"kind"`
	Tick    int64  `json:"tick"`
	Status  string `json:"status"`
	Hash    string `json:"hash"`
	Playing bool   `json:"playing"`
}

// until reads until a frame, by itself or in a hello, is as wanted.
func (s *stream) until(want func(shown) bool) shown {
	s.t.Helper()
	for {
		ctx, cancel := context.WithTimeout(context.Background(), 20*time.Second)
		_, b, err := s.conn.Read(ctx)
		cancel()
		if err != nil {
			s.t.Fatal(err)
		}
		var m struct {
			shown
			Frame shown `json:"frame"`
		}
		if err := json.Unmarshal(b, &m); err != nil {
			var other struct {
				Kind string `json:"kind"`
			}
			if json.Unmarshal(b, &other) != nil {
				s.t.Fatalf("%v in %.200s", err, b)
			}
			continue
		}
		for _, f := range []shown{m.shown, m.Frame} {
			if f.Kind == "frame" && want(f) {
				return f
			}
		}
	}
}

// A server killed by force in the middle of a run: another one on the same data
// goes on, and the run ends as if nothing had happened.
func TestKilledServerLosesAlmostNothing(t *testing.T) {
	data := t.TempDir()
	url, process := program(t, data)
	answer, err := http.Post(url+"api/sessions", "application/json", strings.NewReader(`{"shipped":"pocket","playing":true}`))
	if err != nil {
		t.Fatal(err)
	}
	answer.Body.Close()
	id := strings.TrimPrefix(answer.Header.Get("Location"), "/bench/")

	v := watchSession(t, url, id)
	v.say(`{"kind":"speed","value":8}`)
	v.until(func(f shown) bool { return f.Tick > 400 })
	v.say(`{"kind":"drag","what":"goal","x":10,"y":6.2,"done":true}`)
	v.say(`{"kind":"number","path":"robot.speed_m_s","value":0.5}`)
	before := v.until(func(f shown) bool { return f.Tick > 4000 }) // past a save, long after the changes
	if err := process.Kill(); err != nil {
		t.Fatal(err)
	}

	url, _ = program(t, data)
	v = watchSession(t, url, id)
	after := v.until(func(shown) bool { return true })
	if behind := before.Tick - after.Tick; behind > 8*2*200+400 || !after.Playing {
		t.Errorf("it went on %d ticks behind, playing: %v", behind, after.Playing)
	}
	v.say(`{"kind":"speed","value":0}`)
	end := v.until(func(f shown) bool { return f.Status != "running" })

	answer, err = http.Get(url + "api/sessions/" + id + "/scenario")
	if err != nil {
		t.Fatal(err)
	}
	file, err := io.ReadAll(answer.Body)
	answer.Body.Close()
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(string(file), `"robot.speed_m_s"`) {
		t.Error("a change was lost")
	}
	_, out, _ := leeway(t, string(file), "run", "-", "--json")
	var alone struct {
		Hash   string `json:"hash"`
		Status string `json:"status"`
	}
	if err := json.Unmarshal([]byte(out), &alone); err != nil {
		t.Fatal(err)
	}
	if alone.Hash != end.Hash || alone.Status != end.Status {
		t.Errorf("the run went on to %s %s; never interrupted it ends with %s %s", end.Status, end.Hash, alone.Status, alone.Hash)
	}
}
