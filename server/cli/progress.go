package cli

import (
	"fmt"
	"io"
	"os"
	"time"
)

// progress says how far a study is: on a terminal one line that is written over, with
// the time left; elsewhere a plain line now and then.
type progress struct {
	w        io.Writer
	terminal bool
	began    time.Time
	last     time.Time
	shown    bool
}

func newProgress(w io.Writer) *progress {
	p := &progress{w: w, began: time.Now()}
	p.last = p.began
	if f, ok := w.(*os.File); ok {
		if st, err := f.Stat(); err == nil {
			p.terminal = st.Mode()&os.ModeCharDevice != 0
		}
	}
	return p
}

// show is for study.Runner: one goroutine at a time.
func (p *progress) show(done, total int) {
	now, every := time.Now(), 10*time.Second
	if p.terminal {
		every = 100 * time.Millisecond
	}
	if now.Sub(p.last) < every {
		return
	}
	p.last, p.shown = now, true
	total = max(total, done)
	left := time.Duration(float64(now.Sub(p.began)) * float64(total-done) / float64(done)).Round(time.Second)
	line := fmt.Sprintf("%d of %d runs, %d %%, about %v left", done, total, 100*done/total, left)
	if p.terminal {
		fmt.Fprintf(p.w, "\r\x1b[K%s", line)
	} else {
		fmt.Fprintln(p.w, line)
	}
}

// done takes the line away.
func (p *progress) done() {
	if p.terminal && p.shown {
		fmt.Fprint(p.w, "\r\x1b[K")
	}
}
