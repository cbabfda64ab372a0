package live

import (
	"context"
	"fmt"
	"math/rand/v2"
	"testing"
	"testing/synctest"
	"time"

	"leeway/sim/scenario"
)

// The heart of it: whatever people do, whenever the server is killed, the run
// ends as the file that it leaves ends by itself.
func TestAnythingDoneAndAnyCrashLeavesARunThatItsFileGivesAgain(t *testing.T) {
	for seed := range uint64(10) {
		synctest.Test(t, func(t *testing.T) {
			r := rand.New(rand.NewPCG(seed, 1))
			b := newBench(t, room(t), Opening{Playing: true})
			v := b.join()
			somewhere := func() string { return fmt.Sprintf(`"x":%.4f,"y":%.4f`, r.Float64()*8, r.Float64()*6) }
			for range 120 {
				switch r.IntN(16) {
				case 0:
					b.say(v, `{"kind":"pause"}`)
				case 1, 2:
					b.say(v, `{"kind":"play"}`)
				case 3:
					b.say(v, `{"kind":"tick"}`)
				case 4:
					b.say(v, fmt.Sprintf(`{"kind":"number","path":"robot.speed_m_s","value":%.2f}`, 0.1+r.Float64()))
				case 5:
					b.say(v, fmt.Sprintf(`{"kind":"number","path":"asked.within_s","value":%d}`, 60+r.IntN(60)))
				case 6:
					b.say(v, fmt.Sprintf(`{"kind":"speed","value":%d}`, 1+r.IntN(8)))
				case 7:
					things := []string{`"goal"`, `"robot"`, `"solid","id":"desk"`, `"solid","id":"screen"`, `"solid","id":"post"`, `"mover","id":"cart"`}
					what := things[r.IntN(len(things))]
					for range r.IntN(5) {
						b.say(v, `{"kind":"drag","what":`+what+`,`+somewhere()+`}`)
						time.Sleep(time.Duration(r.IntN(60)) * time.Millisecond)
					}
					b.say(v, `{"kind":"drag","what":`+what+`,`+somewhere()+`,"done":true}`)
				case 8:
					if r.IntN(4) == 0 {
						b.say(v, `{"kind":"restart"}`)
					}
				case 12, 13:
					for range 1 + r.IntN(5) {
						b.say(v, fmt.Sprintf(`{"kind":"seek","tick":%d}`, r.Int64N(b.length()+50)))
						time.Sleep(time.Duration(r.IntN(40)) * time.Millisecond)
					}
				case 14:
					for range 1 + r.IntN(4) {
						b.say(v, `{"kind":"back"}`)
					}
				case 15:
					b.say(v, fmt.Sprintf(`{"kind":"shadows","on":%t}`, r.IntN(2) == 0))
				case 9: // the server is killed, and another one takes over what the disk has
					if r.IntN(2) == 0 {
						time.Sleep(time.Duration(r.IntN(3000)) * time.Millisecond)
						synctest.Wait()
						disk := b.keep.crashCopy()
						lab := New(Options{Keeper: disk})
						t.Cleanup(lab.Close)
						b = reopened(t, lab, disk, b.id)
						v = b.join()
					}
				}
				time.Sleep(time.Duration(r.IntN(200)) * time.Millisecond)
			}
			o := b.untilEnded(v)
			text := b.text()
			if want := finish(t, text); o != want {
				t.Errorf("seed %d: live %+v\nalone %+v\n%s", seed, o, want, text)
			}
			if o.Ticks == 0 {
				t.Error("nothing was run")
			}
			sc, err := b.lab.Scenario(context.Background(), b.id)
			if err != nil {
				t.Fatal(err)
			}
			again, err := scenario.Decode(sc.Encode())
			if err != nil {
				t.Fatal(err)
			}
			if finish(t, again.Print()) != o {
				t.Error("the link gives another run")
			}
		})
	}
}
