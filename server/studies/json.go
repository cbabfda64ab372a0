package studies

import (
	"encoding/json"
	"math"

	"leeway/sim/study"
	"leeway/sim/study/stat"
)

// Head is how every study begins.
type Head struct {
	Study      string  `json:"study"`
	Name       string  `json:"name"`
	Seed       int64   `json:"seed"`
	Complete   bool    `json:"complete"` // false: stopped before the end
	Runs       int     `json:"runs_done"`
	Confidence float64 `json:"confidence"`
}

// Head makes the head of a study.
func (s *Subject) Head(kind string, complete bool, runs int, confidence float64) Head {
	return Head{kind, s.Scenario.Name, s.Scenario.Seed, complete, runs, confidence}
}

// JSON writes a view, indented, with a newline at its end.
func JSON(view any) ([]byte, error) {
	b, err := json.MarshalIndent(view, "", "  ")
	return append(b, '\n'), err
}

// Trials is what JSON holds of trials.
type Trials struct {
	Head
	Stopped string `json:"stopped"`
	Verdict string `json:"verdict"` // of a sequential test
	Summary
	Groups []Group `json:"groups"`
	Worst  []Look  `json:"worst"`
}

// TrialsView makes the view.
func (s *Subject) TrialsView(h Head, t *study.Trials) Trials {
	return Trials{h, t.Stopped, verdict(t.Verdict), summary(&t.Summary), groups(t.Groups), s.looks(t)}
}

func verdict(v stat.Verdict) string {
	return map[stat.Verdict]string{stat.Undecided: "undecided", stat.Accept: "met", stat.Reject: "not met"}[v]
}

// Check is what JSON holds of a check.
type Check struct {
	Head
	Verdict string  `json:"verdict"`
	Target  float64 `json:"target"`
	Bounds  Bounded `json:"bounds"` // of success, at the confidence that the looks leave
	Asked   Asked   `json:"asked"`
	Summary
	Groups []Group `json:"groups"`
	Worst  []Look  `json:"worst"`
}

// Asked is what is asked of every run.
type Asked struct {
	Within   float64 `json:"within_s"`
	Leeway   float64 `json:"leeway_m"`
	Switches int     `json:"switches"` // −1: not asked
}

// CheckView makes the view.
func (s *Subject) CheckView(h Head, c *study.Check) Check {
	a := s.Scenario.Asked
	t := &c.Trials.Summary
	return Check{
		h, verdict(c.Verdict), c.Plan.Target, interval(share(t.Successes, t.N), c.Bounds),
		Asked{a.Within, a.Leeway, a.Switches}, summary(t), groups(c.Trials.Groups), s.looks(c.Trials),
	}
}

// Axis is a number that was set.
type Axis struct {
	Path string  `json:"path"`
	Low  float64 `json:"low"`
	High float64 `json:"high"`
}

func axes(list []study.Axis) []Axis {
	out := make([]Axis, len(list))
	for i, a := range list {
		out[i] = Axis{a.Path, a.Low, a.High}
	}
	return out
}

// Sweep is what JSON holds of a sweep.
type Sweep struct {
	Head
	Layout  string   `json:"layout"`
	Axes    []Axis   `json:"axes"`
	Cells   []Cell   `json:"cells"`
	Success *Indices `json:"success_indices"`
	Leeway  *Indices `json:"leeway_indices"`
}

// Cell is one setting; its values are in the order of the axes.
type Cell struct {
	Values []float64 `json:"values"`
	Summary
}

// Indices are shares of the variance over the settings, an entry an axis.
type Indices struct {
	Variance float64   `json:"variance"`
	First    []Bounded `json:"first_order"`
	Total    []Bounded `json:"total_order"`
}

// SweepView makes the view.
func (s *Subject) SweepView(h Head, x *study.Sweep) Sweep {
	v := Sweep{Head: h, Layout: x.Plan.Layout.String(), Axes: axes(x.Plan.Axes), Cells: []Cell{}}
	for i := range x.Cells {
		v.Cells = append(v.Cells, Cell{x.Cells[i].Values, summary(&x.Cells[i].Summary)})
	}
	v.Success, v.Leeway = indices(x.Success), indices(x.Leeway)
	return v
}

func indices(x *stat.Indices) *Indices {
	if x == nil {
		return nil
	}
	v := &Indices{Variance: x.Variance}
	for i := range x.First {
		v.First = append(v.First, interval(x.First[i], x.FirstIn[i]))
		v.Total = append(v.Total, interval(x.Total[i], x.TotalIn[i]))
	}
	return v
}

// Compare is what JSON holds of a comparison.
type Compare struct {
	Head
	Designs []Design `json:"designs"`
	Pairs   []Pair   `json:"pairs"`
}

// Design is one of those compared.
type Design struct {
	Name string `json:"design"`
	Summary
	Groups []Group `json:"groups"`
}

// Pair compares a design with the first.
type Pair struct {
	First      string  `json:"first"`
	Other      string  `json:"other"`
	OnlyFirst  int     `json:"only_first"`
	OnlyOther  int     `json:"only_other"`
	P          float64 `json:"mcnemar_p"`
	Difference Bounded `json:"success_difference"`
	Leeway     Bounded `json:"leeway_difference_m"`
}

// CompareView makes the view.
func (s *Subject) CompareView(h Head, names []string, c *study.Compare) Compare {
	v := Compare{Head: h, Designs: []Design{}, Pairs: []Pair{}}
	for i := range c.Designs {
		v.Designs = append(v.Designs, Design{names[i], summary(&c.Designs[i].Summary), groups(c.Designs[i].Groups)})
	}
	for _, p := range c.Pairs {
		v.Pairs = append(v.Pairs, Pair{names[0], names[p.Other], p.OnlyFirst, p.OnlyOther, p.P, bounded(p.Difference), bounded(p.Leeway)})
	}
	return v
}

// Audit is what JSON holds of an audit.
type Audit struct {
	Head
	Trials   int      `json:"trials"`
	Sentence string   `json:"sentence"`
	Names    []string `json:"assumptions"`
	Ideal    Bounded  `json:"ideal_success"`
	Real     Bounded  `json:"real_success"`
	Success  Losses   `json:"success_loss"`
	Leeway   Losses   `json:"leeway_loss_m"`
	// Sets are the values of all combinations; bit i of the index: assumption i is real.
	Rates    []float64 `json:"success_by_set"`
	Leeways  []float64 `json:"mean_leeway_m_by_set"`
	Examples [][]Look  `json:"examples"`
}

// Losses is how a loss is shared out, an entry an assumption.
type Losses struct {
	Whole  float64     `json:"whole"`
	Shares []Bounded   `json:"shapley"`
	Alone  []float64   `json:"one_at_a_time"`
	Rest   float64     `json:"unexplained_by_one_at_a_time"`
	Pairs  [][]float64 `json:"pairs"`
}

// AuditView makes the view.
func (s *Subject) AuditView(h Head, a *study.Audit) Audit {
	v := Audit{
		Head: h, Trials: a.N, Sentence: a.Sentence(), Ideal: bounded(a.Ideal), Real: bounded(a.Real),
		Success: losses(&a.Success), Leeway: losses(&a.Leeway), Rates: a.Rates, Leeways: a.Leeways, Examples: [][]Look{},
	}
	for _, x := range a.Assumptions {
		v.Names = append(v.Names, x.Name)
	}
	for _, list := range a.Examples {
		looks := []Look{}
		for i := range list {
			looks = append(looks, s.look(&list[i]))
		}
		v.Examples = append(v.Examples, looks)
	}
	return v
}

func losses(l *study.Losses) Losses {
	v := Losses{Whole: l.Whole, Alone: l.Alone, Rest: l.Rest, Pairs: l.Pairs}
	for _, s := range l.Shares {
		v.Shares = append(v.Shares, bounded(s))
	}
	return v
}

// Limit is what JSON holds of a limit.
type Limit struct {
	Head
	Axis     Axis     `json:"axis"`
	Smallest bool     `json:"smallest"`
	Target   float64  `json:"target"`
	Found    bool     `json:"found"`
	Value    *float64 `json:"value"`
	Beyond   *float64 `json:"beyond"`
	Monotone bool     `json:"monotone"`
	Text     string   `json:"text"`
	Curve    []Sample `json:"curve"`
}

// Sample is one value tried.
type Sample struct {
	Value     float64 `json:"value"`
	Runs      int     `json:"runs"`
	Successes int     `json:"successes"`
	Success   Bounded `json:"success"`
	Meets     bool    `json:"meets"`
}

// LimitView makes the view.
func (s *Subject) LimitView(h Head, l *study.Limit) Limit {
	v := Limit{
		Head: h, Axis: axes([]study.Axis{l.Plan.Axis})[0], Smallest: l.Plan.Smallest, Target: l.Plan.Target,
		Found: l.Found, Value: number(l.Value), Beyond: number(l.Beyond), Monotone: l.Monotone, Text: l.Text, Curve: []Sample{},
	}
	for _, c := range l.Curve {
		v.Curve = append(v.Curve, Sample{c.Value, c.N, c.Successes, interval(share(c.Successes, c.N), c.Share), c.Meets})
	}
	return v
}

// Tune is what JSON holds of a tuning.
type Tune struct {
	Head
	Axes  []Axis    `json:"axes"`
	Start []float64 `json:"start"`
	Best  []float64 `json:"best"`
	// Chosen is the best setting on the trials it was chosen on; Before and After are
	// the start setting and the best on fresh trials.
	Chosen     *Summary `json:"on_tuning_trials"`
	Before     *Summary `json:"start_on_fresh_trials"`
	After      *Summary `json:"best_on_fresh_trials"`
	P          *float64 `json:"mcnemar_p"`
	Difference *Bounded `json:"success_difference"`
	Leeway     *Bounded `json:"leeway_difference_m"`
	Tried      []Try    `json:"tried"`
}

// Try is one setting tried.
type Try struct {
	Values    []float64 `json:"values"`
	Successes int       `json:"successes"`
	Leeway    *float64  `json:"mean_leeway_m"`
	Time      *float64  `json:"mean_time_s"`
}

// TuneView makes the view.
func (s *Subject) TuneView(h Head, t *study.Tune) Tune {
	v := Tune{Head: h, Axes: axes(t.Plan.Axes), Tried: []Try{}}
	for i := range t.Tried {
		x := &t.Tried[i]
		v.Tried = append(v.Tried, Try{x.Values, x.Successes, number(x.Leeway.Mean), number(x.Time.Mean)})
	}
	of := func(x *study.Summary) *Summary {
		if x == nil {
			return nil
		}
		y := summary(x)
		return &y
	}
	if len(t.Tried) > 0 {
		v.Start, v.Best, v.Chosen = t.Tried[0].Values, t.Tried[t.Best].Values, of(&t.Tried[t.Best].Summary)
	}
	v.Before, v.After = of(t.Before), of(t.After)
	if f := t.Fresh; f != nil {
		d, l := bounded(f.Difference), bounded(f.Leeway)
		v.P, v.Difference, v.Leeway = number(f.P), &d, &l
	}
	return v
}

// percentText is a share in words.
func percentText(v float64) string {
	if math.IsNaN(v) {
		return "–"
	}
	return trimmed(100*v, 1) + " %"
}
