package app

import (
	"context"
	"errors"
	"log/slog"
	"net"
	"net/http"
	"strings"
	"testing"
	"time"
)

// said is what a log says, line by line.
type said chan string

func (s said) Write(b []byte) (int, error) {
	s <- string(b)
	return len(b), nil
}

// start runs a server until the test or the returned stop ends it.
func start(t *testing.T, c Config) (url string, stop func() error) {
	t.Helper()
	ctx, cancel := context.WithCancel(context.Background())
	ready, ended := make(chan string, 1), make(chan error, 1)
	c.Ready = func(url string) { ready <- url }
	go func() { ended <- Run(ctx, c) }()
	select {
	case url = <-ready:
	case err := <-ended:
		t.Fatal(err)
	case <-time.After(20 * time.Second):
		t.Fatal("it is not ready")
	}
	stop = func() error {
		cancel()
		select {
		case err := <-ended:
			ended <- err
			return err
		case <-time.After(20 * time.Second):
			return errors.New("it does not stop")
		}
	}
	t.Cleanup(func() { stop() })
	return url, stop
}

func TestSessionsOutliveTheServerUntilTheyAreOld(t *testing.T) {
	c := Config{Addr: "127.0.0.1:0", Data: t.TempDir()}
	url, stop := start(t, c)
	answer, err := http.Post(url+"api/sessions", "application/json", strings.NewReader(`{"shipped":"crossing"}`))
	if err != nil {
		t.Fatal(err)
	}
	answer.Body.Close()
	bench := strings.TrimPrefix(answer.Header.Get("Location"), "/")
	status := func(url string) int {
		answer, err := http.Get(url + bench)
		if err != nil {
			t.Fatal(err)
		}
		answer.Body.Close()
		return answer.StatusCode
	}
	if err := stop(); err != nil {
		t.Fatal(err)
	}
	c.Now = func() time.Time { return time.Now().Add(keepFor - time.Hour) }
	url, stop = start(t, c)
	if got := status(url); got != http.StatusOK {
		t.Errorf("after a restart: %d", got)
	}
	if err := stop(); err != nil {
		t.Fatal(err)
	}
	c.Now = func() time.Time { return time.Now().Add(keepFor + time.Hour) }
	removed := make(said, 10)
	c.Log = slog.New(slog.NewTextHandler(removed, nil))
	url, _ = start(t, c)
	select {
	case line := <-removed:
		if !strings.Contains(line, "old sessions removed") || !strings.Contains(line, "count=1") {
			t.Error(line)
		}
	case <-time.After(10 * time.Second):
		t.Fatal("nothing was removed")
	}
	if got := status(url); got != http.StatusNotFound {
		t.Errorf("a month later: %d", got)
	}
}

func TestTakenAddress(t *testing.T) {
	l, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	defer l.Close()
	err = Run(t.Context(), Config{Addr: l.Addr().String(), Data: t.TempDir()})
	var taken *AddrTaken
	if !errors.As(err, &taken) || taken.Addr != l.Addr().String() {
		t.Errorf("%v", err)
	}
}

func TestUnusableDataFolderIsAnError(t *testing.T) {
	if err := Run(t.Context(), Config{Addr: "127.0.0.1:0", Data: "app.go"}); err == nil {
		t.Error("sessions are kept inside a file")
	}
}

func TestAddressForPeople(t *testing.T) {
	for in, want := range map[string]string{
		"127.0.0.1:80": "http://127.0.0.1:80/", "0.0.0.0:80": "http://localhost:80/", "[::]:80": "http://localhost:80/", "[::1]:80": "http://[::1]:80/",
	} {
		a, err := net.ResolveTCPAddr("tcp", in)
		if err != nil {
			t.Fatal(err)
		}
		if got := address(a); got != want {
			t.Errorf("%s became %s", in, got)
		}
	}
}
