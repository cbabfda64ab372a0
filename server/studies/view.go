package studies

import (
	"fmt"
	"math"

	"leeway/sim/study"
	"leeway/sim/study/stat"
)

// Bounded is an estimate with its interval; null where the runs do not bound it.
type Bounded struct {
	Value *float64 `json:"value"`
	Low   *float64 `json:"low"`
	High  *float64 `json:"high"`
}

// Spread is how a number is distributed over runs.
type Spread struct {
	Runs    int      `json:"runs"`
	Mean    *float64 `json:"mean"`
	Least   *float64 `json:"least"`
	Largest *float64 `json:"largest"`
	Q05     Bounded  `json:"q05"`
	Q50     Bounded  `json:"q50"`
	Q95     Bounded  `json:"q95"`
}

// Summary is what a list of runs comes to. Leeways count at most 1 m.
type Summary struct {
	Runs      int     `json:"runs"`
	Successes int     `json:"successes"`
	Arrivals  int     `json:"arrivals"`
	Broken    int     `json:"broken"`
	Success   Bounded `json:"success"`
	Arrived   Bounded `json:"arrived"`
	Leeway    Spread  `json:"leeway_m"`
	Time      Spread  `json:"time_s"`
	Detour    Spread  `json:"detour"`
	Switches  Spread  `json:"switches"`
	Contacts  Spread  `json:"contacts"`
	Error     Spread  `json:"estimate_error_m"`
	Stops     *Stops  `json:"stops"`
}

// Stops is how the places where runs came to rest lie about the goal (ISO 9283).
type Stops struct {
	Accuracy      float64 `json:"accuracy_m"`
	Mean          float64 `json:"mean_m"`
	Deviation     float64 `json:"deviation_m"`
	Repeatability float64 `json:"repeatability_m"`
}

// Group is runs that missed in the same way at about the same place.
type Group struct {
	Why     string  `json:"why"`
	X       float64 `json:"x_m"`
	Y       float64 `json:"y_m"`
	Count   int     `json:"count"`
	Example int     `json:"example_trial"`
}

// Look is a trial worth a look.
type Look struct {
	Trial  int      `json:"trial"`
	Seed   string   `json:"seed"` // as text: it may need more digits than a JSON reader keeps
	Why    string   `json:"why"`
	Reason string   `json:"reason"`
	Time   float64  `json:"time_s"`
	Leeway *float64 `json:"leeway_m"`
	Hash   string   `json:"hash"`
	Link   string   `json:"link"` // data of a link to it
}

func number(v float64) *float64 {
	if math.IsInf(v, 0) || math.IsNaN(v) {
		return nil
	}
	return &v
}

func interval(v float64, in stat.Interval) Bounded {
	return Bounded{number(v), number(in.Low), number(in.High)}
}

func bounded(b study.Bounded) Bounded { return interval(b.Value, b.In) }

func spread(s study.Spread) Spread {
	return Spread{s.N, number(s.Mean), number(s.Least), number(s.Largest), bounded(s.Q05), bounded(s.Q50), bounded(s.Q95)}
}

func share(k, n int) float64 {
	if n == 0 {
		return math.NaN()
	}
	return float64(k) / float64(n)
}

func summary(s *study.Summary) Summary {
	v := Summary{
		Runs: s.N, Successes: s.Successes, Arrivals: s.Arrivals, Broken: s.Broken,
		Success: interval(share(s.Successes, s.N), s.Share), Arrived: interval(share(s.Arrivals, s.N), s.Arrived),
		Leeway: spread(s.Leeway), Time: spread(s.Time), Detour: spread(s.Detour),
		Switches: spread(s.Switches), Contacts: spread(s.Contacts), Error: spread(s.Error),
	}
	if s.Stops != nil {
		v.Stops = &Stops{s.Stops.Accuracy, s.Stops.Mean, s.Stops.Deviation, s.Stops.Repeatability}
	}
	return v
}

func groups(list []study.Group) []Group {
	out := make([]Group, len(list))
	for i, g := range list {
		out[i] = Group{g.Why, g.At.X, g.At.Y, g.Count, g.Example}
	}
	return out
}

func (s *Subject) looks(t *study.Trials) []Look {
	out := make([]Look, len(t.Worst))
	for i, k := range t.Worst {
		out[i] = s.look(&t.Results[k])
	}
	return out
}

func (s *Subject) look(r *study.Result) Look {
	l := Look{
		Trial: r.Trial, Seed: fmt.Sprint(r.Seed), Why: r.Why(), Reason: r.Reason, Time: r.Time,
		Leeway: number(r.Leeway), Hash: fmt.Sprintf("%016x", r.Hash), Link: s.Link(r.Trial),
	}
	if r.Fault != "" {
		l.Reason = r.Fault
	}
	return l
}
