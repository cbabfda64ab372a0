package scenarios_test

import (
	"slices"
	"testing"

	"leeway/scenarios"
	"leeway/sim"
	"leeway/sim/scenario"
)

// finished is a run that has ended.
type finished struct {
	sim.Outcome
	run *sim.Run
}

// entered counts how often a mode was entered.
func (f finished) entered(mode string) int {
	n := 0
	for _, s := range f.run.Switches() {
		if f.run.Config().Logic.Modes[s.To].Name == mode {
			n++
		}
	}
	return n
}

// run drives a shipped scenario to its end, changed and with another seed if asked.
func run(t *testing.T, slug string, seed int64, change ...func(*scenario.Scenario)) finished {
	t.Helper()
	e, ok := scenarios.Find(slug)
	if !ok {
		t.Fatalf("no scenario %s", slug)
	}
	s, err := scenario.Parse(e.Data)
	if err != nil {
		t.Fatal(err)
	}
	if seed != 0 {
		s.Seed = seed
	}
	for _, c := range change {
		c(s)
	}
	c, err := s.Config()
	if err != nil {
		t.Fatal(err)
	}
	r, err := sim.New(c)
	if err != nil {
		t.Fatal(err)
	}
	o := r.Finish()
	t.Logf("%s, seed %d: %s (leeway %.3f m, %d switches, %d contacts, estimate off by up to %.2f m)",
		slug, s.Seed, o.Reason, o.Leeway, o.Switches, o.Contacts, o.EstimateError)
	return finished{o, r}
}

// seeds are tried beside the one in the file, so that what a scenario shows is not luck.
var seeds = []int64{2, 3, 4}

// everySeed runs a scenario with the seed of its file and with others.
func everySeed(t *testing.T, slug string, check func(finished), change ...func(*scenario.Scenario)) {
	t.Helper()
	for _, seed := range append([]int64{0}, seeds...) {
		check(run(t, slug, seed, change...))
	}
}

func beams(n int) func(*scenario.Scenario) {
	return func(s *scenario.Scenario) { s.Ring.Beams = n }
}

// TestEachShowsItsThing runs every scenario and looks whether it does what its purpose says.
func TestEachShowsItsThing(t *testing.T) {
	shows := map[string]func(t *testing.T){
		"crossing": func(t *testing.T) {
			everySeed(t, "crossing", func(f finished) {
				if f.Status != sim.Arrived || f.Switches != 1 || f.Contacts != 0 || f.Leeway < f.run.Config().Asked.Leeway {
					t.Errorf("not all went well: %+v", f.Outcome)
				}
			})
		},
		"wall": func(t *testing.T) {
			everySeed(t, "wall", func(f finished) {
				if f.Status != sim.Arrived || f.entered("wall-following") == 0 || f.entered("goal-seeking") == 0 || f.Contacts != 0 {
					t.Errorf("the wall was not met, followed and left: %+v", f.Outcome)
				}
			})
		},
		"pocket": func(t *testing.T) {
			everySeed(t, "pocket", func(f finished) {
				if f.Status != sim.Arrived || f.Way < 15 { // 10 m as the crow flies
					t.Errorf("it did not get into the pocket and out again: %+v", f.Outcome)
				}
			})
		},
		"doors": func(t *testing.T) {
			everySeed(t, "doors", func(f finished) {
				if f.Status != sim.Arrived || f.entered("wall-following") < 3 {
					t.Errorf("three doors: %+v", f.Outcome)
				}
			})
		},
		"office": func(t *testing.T) {
			everySeed(t, "office", func(f finished) {
				if f.Status != sim.Arrived || f.Way < 53 { // whether it takes two minutes or ten is a matter of chance
					t.Errorf("%+v", f.Outcome)
				}
			})
		},
		"pillars": func(t *testing.T) {
			everySeed(t, "pillars", func(f finished) {
				if f.Status != sim.Arrived || f.Contacts != 0 || f.entered("wall-following") < 3 {
					t.Errorf("many small detours: %+v", f.Outcome)
				}
			})
		},
		"cart": func(t *testing.T) {
			f := run(t, "cart", 0)
			without := run(t, "cart", 0, func(s *scenario.Scenario) { s.Floor.Movers = nil })
			if f.Status != sim.Arrived || f.Contacts != 0 || f.entered("wall-following") == 0 {
				t.Errorf("it did not cope with the cart: %+v", f.Outcome)
			}
			if without.Switches != 1 || without.Leeway < 0.5 || f.Time < without.Time+5 {
				t.Errorf("it is not the cart that makes the difference: %+v", without.Outcome)
			}
		},
		"passage": func(t *testing.T) {
			everySeed(t, "passage", func(f finished) {
				if f.Leeway > 0.01 {
					t.Errorf("8 beams saw the frame in time: %+v", f.Outcome)
				}
			})
			everySeed(t, "passage", func(f finished) {
				if f.Contacts != 0 {
					t.Errorf("36 beams did not see the frame: %+v", f.Outcome)
				}
			}, beams(36))
			if c := run(t, "passage", 0).run.Config(); c.Ring.MissedWidth(0.5) < 0.06 {
				t.Error("a frame of 6 cm cannot stand between two beams")
			}
		},
		"sparse": func(t *testing.T) {
			touched := 0
			for seed := int64(1); seed <= 12; seed++ {
				if run(t, "sparse", seed).Contacts > 0 {
					touched++
				}
			}
			if touched < 9 {
				t.Errorf("six beams touch a leg in %d of 12 runs only", touched)
			}
			everySeed(t, "sparse", func(f finished) {
				if f.Contacts != 0 || f.Status != sim.Arrived {
					t.Errorf("36 beams did not: %+v", f.Outcome)
				}
			}, beams(36))
		},
		"lag": func(t *testing.T) {
			everySeed(t, "lag", func(slow finished) {
				quick := run(t, "lag", int64(slow.run.Config().Seed), func(s *scenario.Scenario) {
					d := scenario.New(12, 8).Robot
					s.Robot.WheelLag, s.Robot.WheelDeadTime, s.Robot.WheelAccelMax = d.WheelLag, d.WheelDeadTime, d.WheelAccelMax
				})
				if slow.Status != sim.Arrived || quick.Status != sim.Arrived || slow.Leeway > quick.Leeway-0.05 || slow.Leeway >= slow.run.Config().Asked.Leeway || quick.Leeway < slow.run.Config().Asked.Leeway {
					t.Errorf("late wheels cost no leeway: %+v, against %+v", slow.Outcome, quick.Outcome)
				}
			})
		},
		"drift": func(t *testing.T) {
			everySeed(t, "drift", func(f finished) {
				if f.Status != sim.Missed || f.EstimateError < 0.5 {
					t.Errorf("it knew where it was: %+v", f.Outcome)
				}
			})
			everySeed(t, "drift", func(f finished) {
				if f.Status != sim.Arrived || f.EstimateError > 0.3 {
					t.Errorf("position fixes do not help: %+v", f.Outcome)
				}
			}, func(s *scenario.Scenario) { s.Robot.FixEvery = 5 })
		},
		"walled": func(t *testing.T) {
			everySeed(t, "walled", func(f finished) {
				if f.Status != sim.GaveUp || f.Reason == "" || f.Contacts != 0 {
					t.Errorf("it did not give up: %+v", f.Outcome)
				}
			})
		},
	}
	for _, e := range scenarios.All() {
		show, ok := shows[e.Slug]
		if !ok {
			t.Errorf("nothing is known of %s", e.Slug)
			continue
		}
		t.Run(e.Slug, show)
	}
}

// TestRunsAreReproducible: the same file gives the same run, bit for bit.
func TestRunsAreReproducible(t *testing.T) {
	for _, slug := range []string{"wall", "cart"} {
		a, b := run(t, slug, 0), run(t, slug, 0)
		if a.Outcome != b.Outcome || !slices.Equal(a.run.Switches(), b.run.Switches()) {
			t.Errorf("%s: %+v, then %+v", slug, a.Outcome, b.Outcome)
		}
	}
}
