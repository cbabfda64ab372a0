// Package app puts the server together: the store, the sessions, the handler and
// the listener. It is the one place that knows them all.
package app

import (
	"context"
	"errors"
	"fmt"
	"log/slog"
	"net"
	"net/http"
	"path/filepath"
	"sync"
	"syscall"
	"time"

	"leeway/server/api"
	"leeway/server/live"
	"leeway/server/store"
)

// Config is what a server can be told. Zero values mean the defaults.
type Config struct {
	Addr  string   // host:port to listen on; port 0 picks a free one; default DefaultAddr
	Data  string   // folder for what is kept; required
	Hosts []string // names besides the loopback ones that it answers to

	Log   *slog.Logger     // default: none
	Ready func(url string) // called once it listens
	Now   func() time.Time // for the age of what is kept and the date of reports; default time.Now

	Version string // of this program, for reports

	Idle      time.Duration // see live.Options
	Sessions  int           // see live.Options
	Creations int           // see api.Config
}

// DefaultAddr is reachable from this machine only.
const DefaultAddr = "127.0.0.1:8321"

const (
	// keepFor is how long a session that nobody changes is kept.
	keepFor    = 30 * 24 * time.Hour
	pruneEvery = 24 * time.Hour
	// writeBuffer, in bytes, of a connection. The system's default swallows
	// megabytes, seconds of frames, before a slow viewer is noticed.
	writeBuffer = 64 << 10
	// shutdownWithin is how long requests under way may take to end.
	shutdownWithin = 5 * time.Second
)

// AddrTaken is the error of a server whose address is in use.
type AddrTaken struct{ Addr string }

func (e *AddrTaken) Error() string { return e.Addr + " is in use by another program" }

// Run serves until ctx ends, then saves every session, says goodbye to every
// viewer, and returns nil.
func Run(ctx context.Context, c Config) error {
	if c.Addr == "" {
		c.Addr = DefaultAddr
	}
	if c.Log == nil {
		c.Log = slog.New(slog.DiscardHandler)
	}
	if c.Now == nil {
		c.Now = time.Now
	}
	// The port comes first: a second server by mistake should not touch the data.
	listener, err := net.Listen("tcp", c.Addr)
	if errors.Is(err, syscall.EADDRINUSE) {
		return &AddrTaken{c.Addr}
	}
	if err != nil {
		return fmt.Errorf("cannot listen on %s: %w", c.Addr, err)
	}
	defer listener.Close()
	kept, err := store.Open(ctx, filepath.Join(c.Data, "leeway.db"))
	if err != nil {
		return err
	}
	defer kept.Close()

	lab := live.New(live.Options{Keeper: kept, Log: c.Log, Idle: c.Idle, Sessions: c.Sessions})
	listening, _, err := net.SplitHostPort(c.Addr)
	if err != nil {
		return fmt.Errorf("cannot listen on %s: %w", c.Addr, err)
	}
	server := &http.Server{
		Handler: api.New(api.Config{
			Lab: lab, Hosts: api.NewHosts(listening, c.Hosts), Log: c.Log, Creations: c.Creations,
			Version: c.Version, Now: c.Now,
		}),
		// No WriteTimeout: answers have their own, and streams have none.
		ReadHeaderTimeout: 10 * time.Second,
		ReadTimeout:       time.Minute,
		IdleTimeout:       2 * time.Minute,
		MaxHeaderBytes:    64 << 10,
		ErrorLog:          slog.NewLogLogger(c.Log.Handler(), slog.LevelDebug),
	}
	served := make(chan error, 1)
	go func() { served <- server.Serve(smallBuffers{listener}) }()

	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	var background sync.WaitGroup
	background.Go(func() { prune(ctx, kept, c) })
	if c.Ready != nil {
		c.Ready(address(listener.Addr()))
	}

	select {
	case <-ctx.Done():
		err = nil
	case err = <-served:
	}
	cancel()
	background.Wait()
	// Shutdown leaves websockets open: the lab closes them.
	lab.Close()
	end, cancelEnd := context.WithTimeout(context.WithoutCancel(ctx), shutdownWithin)
	defer cancelEnd()
	if server.Shutdown(end) != nil {
		server.Close()
	}
	return err
}

// address is where a person on this machine finds the server.
func address(a net.Addr) string {
	host, port, err := net.SplitHostPort(a.String())
	if err != nil {
		return "http://" + a.String() + "/"
	}
	if ip := net.ParseIP(host); ip != nil && ip.IsUnspecified() {
		host = "localhost"
	}
	return "http://" + net.JoinHostPort(host, port) + "/"
}

// prune forgets old sessions now and every day.
func prune(ctx context.Context, s *store.Store, c Config) {
	t := time.NewTicker(pruneEvery)
	defer t.Stop()
	for {
		n, err := s.Prune(ctx, c.Now().Add(-keepFor))
		switch {
		case ctx.Err() != nil:
			return
		case err != nil:
			c.Log.Error("old sessions were not removed", "error", err)
		case n > 0:
			c.Log.Info("old sessions removed", "count", n)
		}
		select {
		case <-t.C:
		case <-ctx.Done():
			return
		}
	}
}

// smallBuffers is a listener whose connections have small write buffers.
type smallBuffers struct{ net.Listener }

func (l smallBuffers) Accept() (net.Conn, error) {
	c, err := l.Listener.Accept()
	if tcp, ok := c.(*net.TCPConn); ok {
		tcp.SetWriteBuffer(writeBuffer) // a wish: a connection without it works too
	}
	return c, err
}
