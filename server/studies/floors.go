package studies

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"sync"

	"leeway/sim"
	"leeway/sim/chance"
	"leeway/sim/floor"
	"leeway/sim/gen"
	"leeway/sim/geom"
	"leeway/sim/reach"
	"leeway/sim/scenario"
)

// Floors are generated floors that designs are compared on: floor i is the same for
// all, and has a way from its start to its goal for the largest hull among them.
type Floors struct {
	kind gen.Kind
	seed uint64
	hull float64

	mutex  sync.Mutex
	recent map[int]*drawn // a few, since designs ask for one floor after the other
}

type drawn struct {
	once  sync.Once
	scene gen.Scene
	index *floor.Map
	err   error
}

// NewFloors takes the kind by its word: scattered, rooms, pockets or mazes.
func NewFloors(kind string, seed uint64, designs ...*scenario.Scenario) (*Floors, error) {
	f := &Floors{seed: seed, recent: map[int]*drawn{}}
	for _, d := range designs {
		f.hull = max(f.hull, d.Robot.Radius)
	}
	words := ""
	for _, k := range gen.Kinds() {
		if k.String() == kind {
			f.kind = k
			return f, nil
		}
		words += " " + k.String()
	}
	return nil, fmt.Errorf("there are no floors of kind %q; there are%s", kind, words)
}

// How many floors are drawn before one must have a way, and how many are remembered.
const (
	floorDraws = 50
	remembered = 16
)

func (f *Floors) at(i int, within float64) (*drawn, error) {
	f.mutex.Lock()
	d := f.recent[i]
	if d == nil {
		if len(f.recent) >= remembered {
			clear(f.recent)
		}
		d = new(drawn)
		f.recent[i] = d
	}
	f.mutex.Unlock()
	d.once.Do(func() {
		seeds := chance.New(f.seed, "generated floor", i)
		for range floorDraws {
			if d.scene, d.err = gen.Floor(seeds.Uint64(), f.kind, gen.Options{Hull: f.hull}); d.err != nil {
				return
			}
			var way reach.Result
			if way, d.err = d.scene.Shortest(); d.err != nil || way.Reachable {
				break
			}
		}
		// In a scenario walls come first. Ties between solids are decided by their order,
		// so the index must have the order that the printed trial has.
		slices.SortStableFunc(d.scene.Floor.Solids, func(a, b floor.Solid) int {
			return cmp.Compare(min(a.Kind, floor.Polygon), min(b.Kind, floor.Polygon))
		})
		if d.err == nil {
			d.index, d.err = floor.NewMap(d.scene.Floor, within)
		}
	})
	return d, d.err
}

// On returns the source of a design's trials on the floors: trial i is the design on
// floor i, with what floor, start and goal it has itself put aside.
func (f *Floors) On(design *scenario.Scenario) *OnFloors { return &OnFloors{f, design} }

// OnFloors are the trials of one design on generated floors.
type OnFloors struct {
	floors *Floors
	design *scenario.Scenario
}

// Trial returns trial i as a scenario.
func (o *OnFloors) Trial(i int) (*scenario.Scenario, error) {
	s, _, err := o.trial(i)
	return s, err
}

// Config returns trial i ready to run.
func (o *OnFloors) Config(i int) (sim.Config, *floor.Map, error) {
	s, m, err := o.trial(i)
	if err != nil {
		return sim.Config{}, nil, err
	}
	c, err := s.Config()
	return c, m, err
}

func (o *OnFloors) trial(i int) (*scenario.Scenario, *floor.Map, error) {
	d, err := o.floors.at(i, o.design.Ring.Mount+o.design.Ring.RangeMax)
	if err != nil {
		return nil, nil, fmt.Errorf("trial %d: %w", i, err)
	}
	s := o.design.Clone()
	seeds := chance.New(o.floors.seed, "vary seed", i)
	s.Name, s.Purpose = fmt.Sprintf("%s, trial %d", d.scene.Name, i), ""
	s.Seed, s.Vary, s.Edits = int64(seeds.Uint64()>>11), scenario.Vary{}, nil
	s.Floor = scenario.Floor{Width: d.scene.Width, Height: d.scene.Height}
	for k, p := range d.scene.Floor.Solids {
		id := fmt.Sprintf("g%d", k+1)
		switch p.Kind {
		case floor.Wall:
			s.Floor.Walls = append(s.Floor.Walls, scenario.Wall{ID: id, Points: places(p.Points)})
		case floor.Polygon:
			s.Floor.Solids = append(s.Floor.Solids, scenario.Solid{ID: id, Corners: places(p.Points)})
		case floor.Disc:
			s.Floor.Solids = append(s.Floor.Solids, scenario.Solid{ID: id, Center: places(p.Points)[0], Radius: p.Radius})
		}
	}
	at := d.scene.Start
	s.Start = scenario.Start{X: at.Pos.X, Y: at.Pos.Y, Heading: at.Theta * 180 / math.Pi}
	s.Goal.X, s.Goal.Y = d.scene.Goal.X, d.scene.Goal.Y
	return s, d.index, nil
}

func places(v []geom.Vec) []scenario.Point {
	out := make([]scenario.Point, len(v))
	for i := range v {
		out[i] = scenario.Point{v[i].X, v[i].Y}
	}
	return out
}
