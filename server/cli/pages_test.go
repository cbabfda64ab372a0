package cli

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestPagesAreWritten(t *testing.T) {
	_, link, _ := leeway(t, open, "link", "-")
	link = strings.TrimSpace(link)
	for command, mark := range map[string]string{"report": "Report of one simulated run", "replay": "Replay of one simulated run"} {
		path := filepath.Join(t.TempDir(), "page.html")
		code, out, errs := leeway(t, open, command, "-", "-o", path, "--base", "http://lab.example:1/")
		if code != 0 || out != "" || errs != "" {
			t.Errorf("%s: %d %s %s", command, code, out, errs)
		}
		page, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		for _, want := range []string{"<title>Open · " + command, mark, "default-src"} {
			if !strings.Contains(string(page), want) {
				t.Errorf("%s: no %q", command, want)
			}
		}
		if command == "report" && !strings.Contains(string(page), `href="http://lab.example:1/open#1`) {
			t.Errorf("%s: its link does not lead to the given address", command)
		}
		// To standard output, from a link, of a run that does not arrive: a page is a page.
		if code, out, errs := leeway(t, "", command, link, "--output", "-"); code != 0 || !strings.Contains(out, "<title>Open") {
			t.Errorf("%s: %d %s", command, code, errs)
		}
		if code, out, errs := leeway(t, shut, command, "-", "-o", "-"); code != 0 || !strings.Contains(out, "<title>Shut") {
			t.Errorf("%s: %d %s", command, code, errs)
		}
		for _, bad := range []struct{ in, args, errs string }{
			{"", command + " shipped:wall", "output"},
			{"", command + " nothing.json -o " + path, "there is no file nothing.json"},
			{bad, command + " - -o " + path, "standard input:4:"},
			{open, command + " - -o no/such/folder.html", "no/such"},
			{"", command + " -o " + path, "accepts 1 arg"},
		} {
			if code, _, errs := leeway(t, bad.in, strings.Fields(bad.args)...); code != badInput || !strings.Contains(errs, bad.errs) {
				t.Errorf("leeway %s: %d %q, want %q", bad.args, code, errs, bad.errs)
			}
		}
	}
}
