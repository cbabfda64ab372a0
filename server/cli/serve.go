package cli

import (
	"errors"
	"fmt"
	"log/slog"
	"net"
	"os"
	"path/filepath"
	"runtime"
	"runtime/debug"

	"github.com/spf13/cobra"

	"leeway/server/app"
)

func newServe() *cobra.Command {
	c := app.Config{Version: version()}
	verbose := false
	cmd := &cobra.Command{
		Use:   "serve",
		Short: "Serve the lab for a browser (also what leeway does without a command)",
		Long: `Serve the lab for a browser until it is told to stop (Ctrl+C). Sessions are kept in
the data folder and go on where they were when the server is started again.

By default only this machine can reach it. There are no accounts: whoever reaches
it can watch and change every session whose address they know. To let others in,
listen on a network address and say by which names it is called:

  leeway serve --addr 0.0.0.0:8321 --allow-host lab.example`,
		Example: `  leeway serve
  leeway serve --addr 127.0.0.1:0
  leeway serve --data ./sessions`,
		Args: cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			if c.Data == "" {
				dir, err := dataDir()
				if err != nil {
					return err
				}
				c.Data = dir
			}
			level := slog.LevelWarn
			if verbose {
				level = slog.LevelDebug
			}
			c.Log = slog.New(slog.NewTextHandler(cmd.ErrOrStderr(), &slog.HandlerOptions{Level: level}))
			c.Ready = func(url string) {
				fmt.Fprintf(cmd.OutOrStdout(), "Leeway is at %s\nSessions are kept in %s. Stop it with Ctrl+C.\n", url, c.Data)
			}
			err := app.Run(cmd.Context(), c)
			var taken *app.AddrTaken
			if errors.As(err, &taken) {
				return fmt.Errorf("%w.\nIf that is Leeway, open http://%s/ in a browser.\nOtherwise choose another port: leeway serve --addr %s",
					err, taken.Addr, nextPort(taken.Addr))
			}
			return err
		},
	}
	f := cmd.Flags()
	f.StringVar(&c.Addr, "addr", app.DefaultAddr, "`host:port` to listen on; port 0 picks a free one")
	f.StringVar(&c.Data, "data", "", "`folder` in which sessions are kept (default: one for each user)")
	f.StringSliceVar(&c.Hosts, "allow-host", nil, "`name` besides localhost that the server answers to; may be repeated")
	f.BoolVar(&verbose, "verbose", false, "log what happens, not only what goes wrong")
	return cmd
}

// nextPort suggests an address: the same host, with a port that is free.
func nextPort(addr string) string {
	host, _, err := net.SplitHostPort(addr)
	if err != nil {
		return "127.0.0.1:0"
	}
	return net.JoinHostPort(host, "0")
}

// dataDir is the folder in which programs keep a user's data on this system.
func dataDir() (string, error) {
	var base string
	var err error
	switch runtime.GOOS {
	case "windows":
		base, err = os.UserCacheDir() // %LocalAppData%
	case "darwin":
		base, err = os.UserConfigDir() // ~/Library/Application Support
	default:
		// After the XDG Base Directory Specification: a relative path is no path.
		if base = os.Getenv("XDG_DATA_HOME"); !filepath.IsAbs(base) {
			var home string
			home, err = os.UserHomeDir()
			base = filepath.Join(home, ".local", "share")
		}
	}
	if err != nil {
		return "", fmt.Errorf("there is no folder for data (%w); name one with --data", err)
	}
	return filepath.Join(base, "leeway"), nil
}

func newVersion() *cobra.Command {
	return &cobra.Command{
		Use:     "version",
		Short:   "Print the version",
		Long:    "Print the version, the revision it was built from, and the Go version.",
		Example: "  leeway version",
		Args:    cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			_, err := fmt.Fprintln(cmd.OutOrStdout(), versionLine())
			return err
		},
	}
}

// version is the version of this program, in one word.
func version() string {
	if b, ok := debug.ReadBuildInfo(); ok {
		return b.Main.Version
	}
	return "unknown"
}

func versionLine() string {
	version, revision, changed := "unknown", "", ""
	if b, ok := debug.ReadBuildInfo(); ok {
		version = b.Main.Version
		for _, s := range b.Settings {
			switch {
			case s.Key == "vcs.revision":
				revision = ", revision " + s.Value[:min(12, len(s.Value))]
			case s.Key == "vcs.modified" && s.Value == "true":
				changed = " with changes"
			}
		}
	}
	return fmt.Sprintf("leeway %s%s%s, %s %s/%s", version, revision, changed, runtime.Version(), runtime.GOOS, runtime.GOARCH)
}
