package scenario

import (
	"errors"
	"fmt"
	"math"

	"leeway/sim"
	"leeway/sim/chance"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// Trials draws trials of a scenario: for every number i a plain scenario, without
// anything that varies, that depends on the scenario and i alone. Safe for several
// goroutines.
//
// Everything that is drawn has a random stream of its own, named after it, so that
// one more thing that varies leaves all others as they were, and two settings of
// a number have the same draws of everything else.
type Trials struct {
	base    *Scenario // without Vary
	vary    Vary
	floor   floor.Config // of base
	index   *floor.Map   // of base
	shifted []int        // place in floor of each of vary.Solids
	offset  []int        // place in base's movers of each of vary.Movers
}

// Trials returns the trials of a scenario; the error is Problems.
func (s *Scenario) Trials() (*Trials, error) {
	if p := s.Validate(); p != nil {
		return nil, p
	}
	t := &Trials{base: s.Clone(), vary: s.Vary.clone()}
	t.base.Vary = Vary{}
	t.floor = t.base.floorConfig()
	solids := t.base.solidIndexes()
	for _, o := range t.vary.Solids {
		t.shifted = append(t.shifted, solids[o.ID])
	}
	for _, m := range t.vary.Movers {
		i, _ := t.base.MoverIndex(m.ID)
		t.offset = append(t.offset, i)
	}
	var err error
	t.index, err = floor.NewMap(t.floor, s.Ring.Mount+s.Ring.RangeMax)
	return t, err
}

// Setting is a number set to a value.
type Setting struct {
	Path  string
	Value float64
}

// With returns the trials of the same scenario with numbers set, which are then the
// same in all trials. It shares the index of the floor.
func (t *Trials) With(settings ...Setting) (*Trials, error) {
	n := *t
	n.base = t.base.Clone()
	n.vary = t.vary.clone()
	for _, g := range settings {
		if _, _, err := n.base.varying(g.Path); err != nil {
			return nil, err
		}
		if err := n.base.SetNumber(g.Path, g.Value); err != nil {
			return nil, err
		}
		for i := range n.vary.Numbers {
			if n.vary.Numbers[i].Path == g.Path {
				n.vary.Numbers = append(n.vary.Numbers[:i], n.vary.Numbers[i+1:]...)
				break
			}
		}
	}
	return &n, nil
}

// Varies reports whether two trials may differ at all.
func (t *Trials) Varies() bool {
	v := t.vary
	v.SameSeed = false
	return !t.vary.SameSeed || !v.Empty()
}

// Base returns what all trials share, as a scenario of its own. Read only.
func (t *Trials) Base() *Scenario { return t.base }

// Trial returns trial i as a scenario. The error says why it cannot be: no free
// place was found, or numbers were drawn that do not go together.
func (t *Trials) Trial(i int) (*Scenario, error) {
	s, _, err := t.draw(i)
	if err != nil {
		return nil, err
	}
	s = s.Clone()
	name := []rune(s.Name)
	suffix := fmt.Sprintf(", trial %d", i)
	s.Name = string(name[:min(len(name), maxName-len(suffix))]) + suffix
	return s, nil
}

// Config returns trial i ready to run: the same run as that of Trial(i), on a map
// that trials with the same solids share.
func (t *Trials) Config(i int) (sim.Config, *floor.Map, error) {
	s, m, err := t.draw(i)
	if err != nil {
		return sim.Config{}, nil, err
	}
	f := t.floor
	if len(t.vary.Solids) > 0 {
		f = s.floorConfig()
	}
	f.Movers = nil
	for k := range s.Floor.Movers {
		f.Movers = append(f.Movers, s.Floor.Movers[k].config())
	}
	c := s.config(f)
	if len(t.vary.Solids) > 0 {
		m, err = floor.NewMap(f, c.Ring.Mount+c.Ring.Max)
	}
	return c, m, err
}

// How often is drawn: places for start and goal, and whole arrangements of what
// stands in their way.
const (
	placeDraws       = 2000
	arrangementDraws = 50
	normalDraws      = 1000
)

// draw returns trial i, which shares memory with base, and a map of its movers and
// of base's solids.
func (t *Trials) draw(i int) (*Scenario, *floor.Map, error) {
	s := *t.base
	fail := func(format string, args ...any) error {
		return fmt.Errorf("trial %d: %w", i, fmt.Errorf(format, args...))
	}
	seed := uint64(s.Seed)
	if !t.vary.SameSeed {
		c := chance.New(seed, "vary seed", i)
		s.Seed = int64(c.Uint64() >> 11)
	}
	if err := t.drawNumbers(&s, seed, i); err != nil {
		return nil, nil, fail("%w", err)
	}
	if t.vary.Turn > 0 {
		c := chance.New(seed, "vary heading", i)
		s.Start.Heading = rounded(degreesWithin(s.Start.Heading+(2*c.Uniform()-1)*t.vary.Turn), 1e-2)
	}

	v := &t.vary
	p := placer{
		t: t, s: &s,
		gap:   s.Robot.Radius + max(v.Margin, s.Asked.Leeway),
		start: chance.New(seed, "vary start", i), goal: chance.New(seed, "vary goal", i),
	}
	shifts, phases := chance.New(seed, "vary solids", i), chance.New(seed, "vary movers", i)
	arrangements := 1
	if len(v.Solids)+len(v.Movers) > 0 {
		arrangements = arrangementDraws
	}
	var err error
	for range arrangements {
		s.Floor.Movers = t.drawPhases(&phases)
		m := t.index
		if len(v.Movers) > 0 {
			f := make([]floor.Mover, len(s.Floor.Movers))
			for k := range f {
				f[k] = s.Floor.Movers[k].config()
			}
			if m, err = m.WithMovers(f); err != nil {
				return nil, nil, fail("%w", err)
			}
		}
		p.w = m.NewWorld()
		t.drawShifts(&s, &shifts, p.w)
		if err = p.place(); err != nil {
			continue
		}
		if len(v.Solids) > 0 {
			if problems := s.Validate(); problems != nil {
				err = errors.New(problems[0].Text)
				continue
			}
		}
		return &s, m, nil
	}
	return nil, nil, fail("%w", err)
}

// drawNumbers sets the numbers that are drawn, and checks that they go together.
func (t *Trials) drawNumbers(s *Scenario, seed uint64, i int) error {
	if len(t.vary.Numbers) == 0 {
		return nil
	}
	s.Logic = s.Clone().Logic // its numbers are behind pointers
	for k := range t.vary.Numbers {
		n := &t.vary.Numbers[k]
		r, v, err := s.varying(n.Path)
		if err != nil {
			return err
		}
		c := chance.New(seed, "vary "+n.Path, i)
		x, err := n.draw(&c, r, v.CanInt())
		if err != nil {
			return err
		}
		s.put(n.Path, v, x)
	}
	var found report
	c := checker{&found, s}
	c.robot()
	c.ring()
	c.timing()
	c.logic()
	if p := found.problems(nil); p != nil {
		return errors.New(p[0].Text)
	}
	return nil
}

// draw draws one value.
func (n *Varied) draw(c *chance.Stream, r *rule, whole bool) (float64, error) {
	switch n.Kind {
	case "list":
		return n.Values[int(c.Uniform()*float64(len(n.Values)))], nil
	case "steps":
		count := math.Floor((n.High-n.Low)/n.Step+1e-9) + 1
		x := n.Low + math.Floor(c.Uniform()*count)*n.Step
		return min(rounded(x, 1e-9), n.High), nil
	case "uniform":
		if whole {
			return n.Low + math.Floor(c.Uniform()*(n.High-n.Low+1)), nil
		}
		return max(n.Low, min(n.High, rounded(n.Low+c.Uniform()*(n.High-n.Low), 1e-6))), nil
	}
	for range normalDraws {
		x := n.Mean + n.Deviation*c.Normal()
		if whole {
			x = math.Round(x)
		} else {
			x = rounded(x, 1e-6)
		}
		if x >= r.Min && x <= r.Max {
			return x, nil
		}
	}
	return 0, fmt.Errorf("%s: %d draws about %s with a deviation of %s gave nothing %s", n.Path, normalDraws, short(n.Mean), short(n.Deviation), between(r))
}

// drawPhases returns the movers, some of them further on.
func (t *Trials) drawPhases(c *chance.Stream) []Mover {
	if len(t.offset) == 0 {
		return t.base.Floor.Movers
	}
	movers := cloneOf(t.base.Floor.Movers)
	for k, i := range t.offset {
		most := ruleAt()["floor.movers[].offset_s"].Max
		movers[i].Offset = min(most, rounded(movers[i].Offset+c.Uniform()*t.vary.Movers[k].Phase, 1e-3))
	}
	return movers
}

// drawShifts shifts solids, in s and in the world that places are looked for in.
func (t *Trials) drawShifts(s *Scenario, c *chance.Stream, w *floor.World) {
	if len(t.shifted) == 0 {
		return
	}
	walls := len(t.base.Floor.Walls)
	s.Floor.Walls, s.Floor.Solids = cloneOf(t.base.Floor.Walls), cloneOf(t.base.Floor.Solids)
	for k, i := range t.shifted {
		r, u := math.Sqrt(c.Uniform()), 2*math.Pi*c.Uniform()
		d := geom.Heading(u).Scale(r * t.vary.Solids[k].By)
		to := func(p Point) Point { return Point{rounded(p[0]+d.X, 1e-4), rounded(p[1]+d.Y, 1e-4)} }
		var anchor Point
		switch {
		case i < walls:
			p := cloneOf(s.Floor.Walls[i].Points)
			shift(p, to(p[0]))
			s.Floor.Walls[i].Points, anchor = p, p[0]
		case s.Floor.Solids[i-walls].form() == "polygon":
			p := cloneOf(s.Floor.Solids[i-walls].Corners)
			shift(p, to(p[0]))
			s.Floor.Solids[i-walls].Corners, anchor = p, p[0]
		default:
			o := &s.Floor.Solids[i-walls]
			o.Center = to(o.Center)
			anchor = o.Center
		}
		w.MoveSolid(i, vec(anchor))
	}
}

// placer finds free places for start and goal.
type placer struct {
	t           *Trials
	s           *Scenario
	w           *floor.World
	gap         float64 // from the hull's centre to anything solid, m
	start, goal chance.Stream
}

func (p *placer) place() error {
	v, s := &p.t.vary, p.s
	apart := func(a, b geom.Vec) bool { return a.Sub(b).Norm() >= v.Apart }
	if len(v.Start) > 0 {
		fixed := len(v.Goal) == 0
		goal := geom.Vec{X: s.Goal.X, Y: s.Goal.Y}
		at, ok := p.find(&p.start, v.Start, func(q geom.Vec) bool { return !fixed || apart(q, goal) })
		if !ok {
			return fmt.Errorf("no free place for the start in %d draws: the regions of vary.start leave the hull and its margin (%s m in all) no room", placeDraws, short(p.gap))
		}
		s.Start.X, s.Start.Y = at.X, at.Y
	} else if n, near := p.w.Nearest(geom.Vec{X: s.Start.X, Y: s.Start.Y}, s.Robot.Radius); near && n.Distance < s.Robot.Radius-tiny {
		return fmt.Errorf("the start leaves the hull (radius %s m) no room: something is %.2f m from its centre", short(s.Robot.Radius), n.Distance)
	}
	if len(v.Goal) > 0 {
		start := geom.Vec{X: s.Start.X, Y: s.Start.Y}
		at, ok := p.find(&p.goal, v.Goal, func(q geom.Vec) bool { return apart(q, start) })
		if !ok {
			return fmt.Errorf("no free place for the goal in %d draws: the regions of vary.goal leave the hull and its margin (%s m in all) no room %s m from the start", placeDraws, short(p.gap), short(v.Apart))
		}
		s.Goal.X, s.Goal.Y = at.X, at.Y
	}
	return nil
}

// find draws places until one is free and suits.
func (p *placer) find(c *chance.Stream, regions []Region, suits func(geom.Vec) bool) (geom.Vec, bool) {
	for range placeDraws {
		q := anywhere(c, regions)
		q.X, q.Y = rounded(q.X, 1e-4), rounded(q.Y, 1e-4)
		if !p.s.onFloor(q.X, q.Y) || !suits(q) {
			continue
		}
		if n, near := p.w.Nearest(q, p.gap); near && n.Distance < p.gap {
			continue
		}
		return q, true
	}
	return geom.Vec{}, false
}

// anywhere draws a place in one of the regions, all places alike.
func anywhere(c *chance.Stream, regions []Region) geom.Vec {
	area := func(r *Region) float64 {
		if r.form() == "disc" {
			return math.Pi * r.Radius * r.Radius
		}
		return math.Abs((r.To[0] - r.From[0]) * (r.To[1] - r.From[1]))
	}
	sum := 0.0
	for i := range regions {
		sum += area(&regions[i])
	}
	pick, a, b := c.Uniform(), c.Uniform(), c.Uniform()
	r := &regions[min(int(pick*float64(len(regions))), len(regions)-1)] // regions without area: all alike
	if sum > 0 {
		for i := range regions {
			r = &regions[i]
			if pick -= area(r) / sum; pick < 0 {
				break
			}
		}
	}
	if r.form() == "disc" {
		return vec(r.Center).AddScaled(r.Radius*math.Sqrt(a), geom.Heading(2*math.Pi*b))
	}
	return geom.Vec{X: r.From[0] + float64(a*(r.To[0]-r.From[0])), Y: r.From[1] + float64(b*(r.To[1]-r.From[1]))}
}

// rounded keeps files free of digits that nobody needs.
func rounded(x, step float64) float64 { return math.Round(x/step)/math.Round(1/step) + 0 }

// degreesWithin turns an angle into [−180, 180].
func degreesWithin(a float64) float64 { return math.Remainder(a, 360) }

// Number describes a number that a study may set: its field, its value now, and
// whether it holds whole numbers only.
func (s *Scenario) Number(path string) (f Field, value float64, whole bool, err error) {
	r, v, err := s.varying(path)
	if err != nil {
		return Field{}, 0, false, err
	}
	value, err = s.NumberAt(path)
	return r.copyOfField(), value, v.CanInt(), err
}
