package app

import (
	"context"
	"errors"
	"net"
	"net/http"
	"strings"
	"testing"
	"time"
)

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
	url, _ = start(t, c)
	gone := false
	for range 200 { // pruning goes on beside
		if gone = status(url) == http.StatusNotFound; gone {
			break
		}
		time.Sleep(10 * time.Millisecond)
	}
	if !gone {
		t.Error("a month later it is still there")
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
