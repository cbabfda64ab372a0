// Package e2e holds the browser tests: a real Chromium opens the pages of the real
// program, and hands move in it by mouse, finger and key.
//
// # Basics
//
// TestMain looks for Chromium; where there is none it says what to install and
// passes, or fails when the environment has CI=true. All tests share one browser;
// each has pages of its own, which share nothing (browser_test.go), and a server of
// its own on a free port with an empty data folder (server_test.go). What a page
// shows and what a hand does to it is in page_test.go.
//
// Every page is listened to while it is open: an error on its console, an exception
// that nothing caught, or a request that failed fails the test, unless the test said
// before that it is to come (page.expect).
//
// # Caveats
//
// Tests wait for what they want to see, never for a while. When a wait is in vain,
// the failure says what was waited for, and a picture of each page is kept in the
// folder that the log names.
package e2e

import (
	"errors"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"testing"

	"leeway/server/cli"
)

// asProgram, in the environment, makes the test binary the program itself, for
// tests that need a process to kill.
const asProgram = "LEEWAY_E2E_PROGRAM"

func TestMain(m *testing.M) {
	if os.Getenv(asProgram) != "" {
		os.Exit(cli.Main(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
	}
	flag.Parse()
	path, err := chromium()
	switch {
	case err == nil:
		chromiumPath = path
		code := m.Run()
		closeBrowser()
		os.Exit(code)
	case os.Getenv("CI") == "true":
		fmt.Println("The browser tests cannot run: " + err.Error() + howToInstall)
		os.Exit(1)
	default:
		tell("The browser tests did not run: " + err.Error() + howToInstall)
	}
}

const howToInstall = `.
Install one, for example on Debian or Ubuntu: sudo apt-get install chromium fonts-liberation
or name one you have: LEEWAY_CHROMIUM=/path/to/chrome; then run: go test -count=1 ./server/e2e`

var chromiumPath string

// chromium finds the browser.
func chromium() (string, error) {
	if named := os.Getenv("LEEWAY_CHROMIUM"); named != "" {
		path, err := exec.LookPath(named)
		if err != nil {
			return "", fmt.Errorf("LEEWAY_CHROMIUM names no program: %w", err)
		}
		return path, nil
	}
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome", "chrome"} {
		if path, err := exec.LookPath(name); err == nil {
			return path, nil
		}
	}
	return "", errors.New("there is no Chromium in the path")
}

// tell says something to whoever started the tests. Of a package that passes, the
// go command shows nothing that it printed, so the words go to the error stream of
// the go command as well, where the system lets us reach that. Not into a file: the
// go command would write over them.
func tell(words string) {
	fmt.Println(words)
	if testing.Verbose() {
		return
	}
	for _, name := range []string{fmt.Sprintf("/proc/%d/fd/2", os.Getppid()), "/dev/tty"} {
		if info, err := os.Stat(name); err != nil || info.Mode().IsRegular() {
			continue
		}
		if stream, err := os.OpenFile(name, os.O_WRONLY, 0); err == nil {
			fmt.Fprintln(stream, words)
			stream.Close()
			return
		}
	}
}
