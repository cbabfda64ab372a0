package e2e

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"io"
	"net/http"
	"os"
	"os/exec"
	"strings"
	"testing"
	"time"

	"leeway/server/app"
	"leeway/sim/scenario"
)

// site is a running server.
type site struct {
	t    *testing.T
	url  string // http://127.0.0.1:1234
	data string
	// stop ends it as a person does, with Ctrl+C.
	stop func()
	// kill ends it as a crash does; nil when it runs within the tests.
	kill func()
}

// serve runs the server within the test's process, on a free port and with an empty
// data folder.
func serve(t *testing.T) *site {
	t.Helper()
	s := &site{t: t, data: t.TempDir()}
	ctx, cancel := context.WithCancel(context.Background())
	ready, ended := make(chan string, 1), make(chan error, 1)
	go func() {
		ended <- app.Run(ctx, app.Config{Addr: "127.0.0.1:0", Data: s.data, Creations: 10_000, Ready: func(url string) { ready <- url }})
	}()
	select {
	case url := <-ready:
		s.url = strings.TrimSuffix(url, "/")
	case err := <-ended:
		t.Fatalf("the server does not start: %v", err)
	case <-time.After(patience):
		t.Fatal("the server does not get ready")
	}
	stopped := false
	s.stop = func() {
		if stopped {
			return
		}
		stopped = true
		cancel()
		select {
		case err := <-ended:
			if err != nil {
				t.Errorf("the server ended with: %v", err)
			}
		case <-time.After(patience):
			t.Error("the server does not stop")
		}
	}
	t.Cleanup(s.stop)
	return s
}

// serveProcess runs the server as a process of its own at an address (port 0: a
// free one).
func serveProcess(t *testing.T, addr, data string) *site {
	t.Helper()
	s := &site{t: t, data: data}
	program, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(program, "serve", "--addr", addr, "--data", data)
	cmd.Env = append(os.Environ(), asProgram+"=1")
	var said bytes.Buffer
	cmd.Stderr = &said
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	lines := bufio.NewReader(out)
	first, err := lines.ReadString('\n')
	url, ok := strings.CutPrefix(strings.TrimSpace(first), "Leeway is at ")
	if err != nil || !ok {
		cmd.Process.Kill()
		cmd.Wait()
		t.Fatalf("the program does not say where it is: %q %v\n%s", first, err, said.String())
	}
	s.url = strings.TrimSuffix(url, "/")
	drained := make(chan struct{})
	go func() {
		io.Copy(io.Discard, lines)
		close(drained)
	}()
	ended := false
	end := func(signal os.Signal) {
		if ended {
			return
		}
		ended = true
		cmd.Process.Signal(signal)
		<-drained
		var exit *exec.ExitError
		if err := cmd.Wait(); err != nil && !(errors.As(err, &exit) && signal == os.Kill) {
			t.Errorf("the program ended with %v\n%s", err, said.String())
		}
	}
	s.stop = func() { end(os.Interrupt) }
	s.kill = func() { end(os.Kill) }
	t.Cleanup(s.kill)
	return s
}

// addr is the host and port.
func (s *site) addr() string { return strings.TrimPrefix(s.url, "http://") }

// open opens a session over HTTP and returns its id. what is the request's body.
func (s *site) open(what map[string]any) string {
	s.t.Helper()
	body, err := json.Marshal(what)
	if err != nil {
		s.t.Fatal(err)
	}
	answer, err := http.Post(s.url+"/api/sessions", "application/json", bytes.NewReader(body))
	if err != nil {
		s.t.Fatal(err)
	}
	defer answer.Body.Close()
	text, err := io.ReadAll(answer.Body)
	if err != nil {
		s.t.Fatal(err)
	}
	var made struct{ Session string }
	if err := json.Unmarshal(text, &made); err != nil || answer.StatusCode != http.StatusCreated {
		s.t.Fatalf("no session is opened: %d %s", answer.StatusCode, text)
	}
	return made.Session
}

// get returns what the server answers to a GET.
func (s *site) get(path string) string {
	s.t.Helper()
	answer, err := http.Get(s.url + path)
	if err != nil {
		s.t.Fatal(err)
	}
	defer answer.Body.Close()
	text, err := io.ReadAll(answer.Body)
	if err != nil || answer.StatusCode != http.StatusOK {
		s.t.Fatalf("%s: %d %v %s", path, answer.StatusCode, err, text)
	}
	return string(text)
}

// scenario returns the scenario of a session as the server has it, with its edits
// still apart.
func (s *site) scenario(session string) *scenario.Scenario {
	s.t.Helper()
	sc, err := scenario.Parse([]byte(s.get("/api/sessions/" + session + "/scenario")))
	if err != nil {
		s.t.Fatal(err)
	}
	return sc
}

// workshop is a floor with one of everything that can be dragged, and room beside
// each of it.
const workshop = `{
  "leeway": 1,
  "name": "The workshop",
  "floor": {
    "width_m": 12, "height_m": 8,
    "walls":  [{"id": "screen", "points_m": [[4, 6], [4, 7], [5, 7]]}],
    "solids": [{"id": "desk", "corners_m": [[6, 5], [7, 5], [7, 5.6], [6, 5.6]]},
               {"id": "post", "center_m": [6, 1.5], "radius_m": 0.3}],
    "movers": [{"id": "cart", "box_m": [0.8, 0.5], "route_m": [[9, 6], [11, 6]], "speed_m_s": 0.2, "pause_s": 1}]
  },
  "start": {"x_m": 1, "y_m": 4},
  "goal": {"x_m": 11, "y_m": 4}
}`
