package e2e

import (
	"bytes"
	"fmt"
	"math"
	"net/url"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/chromedp"
	"github.com/chromedp/chromedp/kb"

	"leeway/scenarios"
	"leeway/server/cli"
	"leeway/sim/scenario"
	"leeway/sim/shadow"
)

// made writes a page by command and returns where it lies.
func made(t *testing.T, command, file string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), command+".html")
	var out, errs bytes.Buffer
	if code := cli.Execute(t.Context(), []string{command, file, "-o", path}, strings.NewReader(""), &out, &errs); code != 0 {
		t.Fatalf("%s: %d %s", command, code, errs.String())
	}
	return path
}

// fromDisk opens a file in a page that has no network.
func fromDisk(t *testing.T, path string) *tab {
	t.Helper()
	p := newTab(t, nil)
	call(p, network.EmulateNetworkConditionsByRule, network.EmulateNetworkConditionsByRuleParams{
		MatchedNetworkConditions: []*network.Conditions{{Offline: true}},
	})
	p.openFile(path)
	return p
}

func (p *tab) openFile(path string) {
	p.t.Helper()
	p.do(chromedp.Navigate((&url.URL{Scheme: "file", Path: path}).String()))
}

// shownTime is the time on the replay's clock, s.
func (p *tab) shownTime() float64 {
	p.t.Helper()
	var minutes, seconds float64
	text := eval[string](p, `document.getElementById('clock').textContent`)
	if _, err := fmt.Sscanf(text, "%f:%f", &minutes, &seconds); err != nil {
		p.t.Fatalf("the clock shows %q", text)
	}
	return 60*minutes + seconds
}

// clockShows waits until the replay's clock shows a time.
func (p *tab) clockShows(seconds float64) {
	p.t.Helper()
	p.until(fmt.Sprintf("the clock shows %v s", seconds), func() bool { return math.Abs(p.shownTime()-seconds) < 0.051 })
}

// tells waits until an element's text contains some words, wherever its spaces may
// not break.
func (p *tab) tells(selector, words string) {
	p.t.Helper()
	p.see(fmt.Sprintf("%s tells %q", selector, words),
		fmt.Sprintf(`document.querySelector(%q).textContent.replaceAll('\u00a0', ' ').includes(%s)`, selector, quote(words)))
}

// stepped returns a shipped scenario's models at a tick, from the simulation itself.
func stepped(t *testing.T, slug string, tick int64) *shadow.Set {
	t.Helper()
	e, ok := scenarios.Find(slug)
	if !ok {
		t.Fatalf("no scenario %s", slug)
	}
	sc, err := scenario.Parse(e.Data)
	if err != nil {
		t.Fatal(err)
	}
	c, err := sc.Config()
	if err != nil {
		t.Fatal(err)
	}
	set, err := shadow.New(c)
	if err != nil {
		t.Fatal(err)
	}
	for tick < 0 && !set.Done() || set.Tick() < tick {
		set.Step()
	}
	return set
}

const loadsNothing = `performance.getEntriesByType('resource').filter((r) => !r.name.startsWith('data:')).length === 0`

func TestReplayPlaysFromDiskWithoutANetwork(t *testing.T) {
	t.Parallel()
	p := fromDisk(t, made(t, "replay", "shipped:wall"))
	whole := stepped(t, "wall", -1)
	length := float64(whole.Tick()) * 0.005

	// It shows how the run ended, and invites to play.
	p.says("h1", "Round the partition")
	p.clockShows(length)
	end := whole.Run(shadow.Robot).Outcome()
	p.tells("#because", end.Reason)
	p.tells("#big", fmt.Sprintf("%.2f m", end.Leeway))
	p.tells("#table", fmt.Sprintf("%.1f s", end.Time))
	p.tells("#caution", "ISO 13855")
	pose := whole.Run(shadow.Robot).Pose()
	p.drawn(".hull.robot .rim", [2]float64{pose.Pos.X, pose.Pos.Y})

	// It plays, faster and slower, and stands still.
	p.click("#first")
	p.see("the invitation is gone", `document.getElementById('first').hidden`)
	p.until("it plays", func() bool { t := p.shownTime(); return t > 0.3 && t < length-1 })
	p.click("#speeds label:last-child")
	p.see("16 times is chosen", `document.querySelector('#speeds input:checked').value === '16'`)
	p.keys(" ")
	p.see("it is paused", `document.getElementById('play').getAttribute('aria-label') === 'Play'`)
	still := p.shownTime()
	p.keys(kb.Home)
	p.clockShows(0)
	if still == 0 {
		t.Error("it never played")
	}
	start := stepped(t, "wall", 0).Run(shadow.Robot).Pose()
	p.drawn(".hull.robot .rim", [2]float64{start.Pos.X, start.Pos.Y})
	p.see("no way is drawn yet", `[...document.querySelectorAll('#floor .way')].every((w) => w.getTotalLength() < 0.01)`)

	// By keys: a second, ten, and to the end.
	p.keys(kb.ArrowRight)
	p.clockShows(1)
	p.keys(kb.ArrowRight, chromedp.ModifierShift)
	p.clockShows(11)
	p.keys(kb.ArrowLeft)
	p.clockShows(10)
	p.keys(".")
	p.clockShows(10.1)
	at := stepped(t, "wall", 2020)
	for _, who := range []shadow.Who{shadow.Robot, shadow.Point, shadow.Unicycle} {
		pose := at.Run(who).Pose()
		p.drawn(fmt.Sprintf(".hull.%s .rim", who), [2]float64{pose.Pos.X, pose.Pos.Y})
	}

	// Along the tape, by hand.
	box := eval[struct{ Left, Top, Width, Height float64 }](p, `(() => {
		const tape = document.getElementById('tape');
		tape.scrollIntoView({block: 'nearest', behavior: 'instant'});
		const r = tape.getBoundingClientRect();
		return {Left: r.left, Top: r.top, Width: r.width, Height: r.height};
	})()`)
	y := box.Top + box.Height/2
	p.drag(point{box.Left + box.Width*0.3, y}, point{box.Left + box.Width*0.5, y})
	scrubbed := p.shownTime()
	if scrubbed < 0.3*length || scrubbed > 0.6*length {
		t.Errorf("the middle of the tape is %v s of %v", scrubbed, length)
	}
	p.drag(point{box.Left + box.Width*0.5, y}, point{box.Left - 20, y})
	p.clockShows(0)
	p.drag(point{box.Left + box.Width*0.5, y}, point{box.Left + box.Width - 1, y})
	p.clockShows(length)

	if !eval[bool](p, loadsNothing) {
		t.Error("it loads something")
	}
}

func TestReplayJumpsToPartingsAndSaysWhy(t *testing.T) {
	t.Parallel()
	p := fromDisk(t, made(t, "replay", "shipped:wall"))
	whole := stepped(t, "wall", -1)
	partings := append(slices.Clone(whole.Partings(shadow.Point)), whole.Partings(shadow.Unicycle)...)
	slices.SortStableFunc(partings, func(a, b shadow.Parting) int { return int(a.Tick - b.Tick) })
	if len(partings) == 0 {
		t.Fatal("they never part")
	}
	first := partings[0]
	at := stepped(t, "wall", first.Tick)
	robot := at.Run(shadow.Robot)

	p.click(`#partings button[data-tick="` + fmt.Sprint(first.Tick) + `"]`)
	p.clockShows(first.Time)
	p.tells("#caption", first.Text)
	p.see("the parting is marked", fmt.Sprintf(`document.querySelector('#partings [aria-current]')?.dataset.tick === '%d'`, first.Tick))
	for _, who := range []shadow.Who{shadow.Robot, shadow.Point} {
		pose := at.Run(who).Pose()
		p.drawn(fmt.Sprintf(".hull.%s .rim", who), [2]float64{pose.Pos.X, pose.Pos.Y})
	}

	// Why the robot is in its mode, at every place that one can jump to.
	check := func(tick int64) {
		t.Helper()
		robot := stepped(t, "wall", tick).Run(shadow.Robot)
		mode := robot.Config().Logic.Modes[robot.Engine().Mode()].Name
		p.tells("#mode", strings.ToUpper(mode[:1])+mode[1:])
		want := robot.Why()
		if _, switched := robot.Engine().LastSwitch(); switched {
			want = fmt.Sprintf("Since %s. %s", shadow.Clock(robot.Engine().Since()), want)
		}
		p.tells("#because", want)
	}
	if robot.Status().String() != "running" {
		t.Fatal("the robot has ended before it parts")
	}
	check(first.Tick)
	for _, tenth := range []int64{5, 100, 120, 200} {
		p.keys(kb.Home)
		for range tenth / 10 {
			p.keys(kb.ArrowRight)
		}
		if tenth%10 != 0 {
			for range tenth % 10 {
				p.keys(".")
			}
		}
		p.clockShows(float64(tenth) / 10)
		check(tenth * 20)
	}

	// By keys from parting to parting.
	p.keys(kb.Home)
	p.keys("n")
	p.clockShows(first.Time)
	p.keys("p") // there is none before
	p.clockShows(first.Time)
}

func TestReplayOnAPhoneInTheDark(t *testing.T) {
	t.Parallel()
	p := newTab(t, nil)
	p.size(390, 844, true)
	p.scheme("dark")
	p.openFile(made(t, "replay", "shipped:lag"))
	p.says("h1", "Heavy on its wheels")
	if out := eval[string](p, beside); out != "" {
		t.Errorf("it sticks out: %s", out)
	}
	p.see("it is dark", `getComputedStyle(document.body).backgroundColor === 'rgb(20, 24, 29)'`)
	p.see("all controls can be hit", `[...document.querySelectorAll('.controls button, .controls label')].every((e) => e.getBoundingClientRect().height >= 20)`)
	p.middle("#tape")
	box := eval[struct{ Left, Top, Width, Height float64 }](p, `(() => {
		const r = document.getElementById('tape').getBoundingClientRect();
		return {Left: r.left, Top: r.top, Width: r.width, Height: r.height};
	})()`)
	before := p.shownTime()
	p.swipe(point{box.Left + box.Width*0.8, box.Top + 40}, point{box.Left + box.Width*0.4, box.Top + 40})
	p.until("the swipe goes back in time", func() bool { return p.shownTime() < before-1 })
}

// Whatever a scenario is called, its words are shown and do nothing.
func TestReplayAndReportOfAHostileFile(t *testing.T) {
	t.Parallel()
	const name = `</script><img src=x onerror="document.title='owned'">`
	sc := scenario.New(5, 4)
	sc.Name, sc.Purpose = name, "<b>"+name
	sc.Floor.Solids = []scenario.Solid{{ID: `"><script>document.title='owned'</script>`, Center: scenario.Point{2.5, 3}, Radius: 0.3}}
	sc.Edits = []scenario.Edit{{Tick: 10, What: "solid", ID: sc.Floor.Solids[0].ID, To: scenario.Point{2.5, 2.9}}}
	file := filepath.Join(t.TempDir(), "hostile.json")
	if err := os.WriteFile(file, sc.Print(), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, command := range []string{"replay", "report"} {
		p := fromDisk(t, made(t, command, file))
		p.see("the name is shown as it is", fmt.Sprintf(`document.querySelector('h1').textContent === %s`, quote(name)))
		p.see("nothing of it became an element", `document.querySelectorAll('img, main b script, main b img').length === 0 && document.title !== 'owned'`)
	}
}

func TestReportFromDiskAndOnPaper(t *testing.T) {
	t.Parallel()
	p := fromDisk(t, made(t, "report", "shipped:doors"))
	p.says("h1", "Clinic supply run")
	p.see("its letters are its own", `document.fonts.check('15px "Leeway Next"')`)
	for _, width := range []int64{1440, 390} {
		p.size(width, 900, false)
		if out := eval[string](p, beside); out != "" {
			t.Errorf("at %d pixels it sticks out: %s", width, out)
		}
	}
	if !eval[bool](p, loadsNothing) {
		t.Error("it loads something")
	}
	for paper, inches := range map[string][2]float64{"A4": {8.27, 11.69}, "Letter": {8.5, 11}} {
		pdf := call(p, page.PrintToPDF, page.PrintToPDFParams{PaperWidth: inches[0], PaperHeight: inches[1]})
		sheets := bytes.Count(pdf.Data, []byte("/Type /Page\n")) + bytes.Count(pdf.Data, []byte("/Type /Page ")) + bytes.Count(pdf.Data, []byte("/Type/Page/"))
		if !bytes.HasPrefix(pdf.Data, []byte("%PDF-")) || sheets == 0 || sheets > 5 {
			t.Errorf("%s: %d sheets in %d bytes", paper, sheets, len(pdf.Data))
		}
	}
}

// TestFilesAreAccessible has axe-core look for what keeps people out of the pages
// that are kept as files.
func TestFilesAreAccessible(t *testing.T) {
	t.Parallel()
	checker, err := os.ReadFile(axe)
	if err != nil {
		how := "report and replay were not checked for accessibility: axe-core is not installed; (cd .ci/js && npm ci), then run the test again"
		if os.Getenv("CI") == "true" {
			t.Fatal(how)
		}
		tell("server/e2e: " + how)
		return
	}
	p := newTab(t, nil)
	for _, command := range []string{"report", "replay"} {
		path := made(t, command, "shipped:doors")
		for _, scheme := range []string{"light", "dark"} {
			for _, width := range []int64{1440, 390} {
				p.size(width, 900, width < 500)
				p.scheme(scheme)
				p.openFile(path)
				p.says("h1", "Clinic supply run")
				eval[any](p, "void function () {"+string(checker)+"}.call(window)")
				found := eval[struct {
					Passes     int
					Violations []string
				}](p, `axe.run().then((r) => ({passes: r.passes.length, violations: r.violations.map((v) => v.id + ': ' + v.help + ': ' + v.nodes.map((n) => n.html).join(' '))}))`)
				if found.Passes < 10 || len(found.Violations) > 0 {
					t.Errorf("%s, %s, %d pixels: %d rules passed, violated are %s", command, scheme, width, found.Passes, strings.Join(found.Violations, "\n\t"))
				}
			}
		}
	}
}
