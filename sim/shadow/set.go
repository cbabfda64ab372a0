package shadow

import (
	"errors"
	"math"

	"leeway/sim"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// Who is one of the models that run side by side.
type Who int

// The models: the robot as it is, and its shadows.
const (
	Robot Who = iota
	Point
	Unicycle
	Models // how many there are
)

// String returns the model's name as it is written on screen.
func (w Who) String() string {
	return [...]string{"robot", "point", "unicycle"}[w]
}

// The switches that make the shadows.
const (
	asUnicycle = sim.NoWheelLimits | sim.NoLag | sim.AllRoundSight | sim.NoiselessSight | sim.TruePosition
	asPoint    = asUnicycle | sim.PointMotion
)

// Config returns the config of a model: c itself for the robot, and c with
// switches thrown for a shadow.
func Config(c sim.Config, w Who) sim.Config {
	switch w {
	case Point:
		c.Ideal |= asPoint
	case Unicycle:
		c.Ideal |= asUnicycle
	}
	return c
}

// Set is a robot with its shadows.
type Set struct {
	runs  []*sim.Run // by Who; the robot alone when there are no shadows
	apart []apart    // likewise
	tick  int64
	dt    float64
	hull  float64
}

// New returns a robot with its shadows, all at tick 0, on one shared floor map.
func New(c sim.Config) (*Set, error) {
	m, err := floor.NewMap(c.Floor, c.Ring.Mount+c.Ring.Max)
	if err != nil {
		return nil, err
	}
	return NewOn(m, c, true)
}

// NewOn is New on a floor map that others share, with shadows or without: a robot
// alone costs what a Run costs.
func NewOn(m *floor.Map, c sim.Config, shadows bool) (*Set, error) {
	s := &Set{dt: c.Tick, hull: c.Hull}
	for w := range Models {
		if w != Robot && !shadows {
			break
		}
		r, err := sim.NewOn(m, Config(c, w))
		if err != nil {
			return nil, err
		}
		s.runs = append(s.runs, r)
		s.apart = append(s.apart, apart{})
	}
	return s, nil
}

// Run returns the run of one model, nil for a shadow that the set does not have.
// Stepping or editing it is the Set's business.
func (s *Set) Run(w Who) *sim.Run {
	if int(w) < len(s.runs) {
		return s.runs[w]
	}
	return nil
}

// Shadows reports whether the robot has its shadows beside it.
func (s *Set) Shadows() bool { return len(s.runs) > 1 }

// Tick returns how many ticks have been stepped.
func (s *Set) Tick() int64 { return s.tick }

// Done reports whether every model has ended and no edit is left to revive one.
func (s *Set) Done() bool {
	for _, r := range s.runs {
		if r.Going() {
			return false
		}
	}
	return true
}

// Step steps every model that has not ended by one tick, and compares them.
func (s *Set) Step() {
	if s.Done() {
		return
	}
	for _, r := range s.runs {
		if r.Going() {
			r.Step()
		} else {
			r.Idle() // all clocks go together, so that an edit falls at one time for all
		}
	}
	s.tick++
	for w := range s.apart[1:] {
		s.apart[w+1].compare(s, Who(w+1))
	}
}

// Finish steps until every model has ended.
func (s *Set) Finish() {
	for !s.Done() {
		s.Step()
	}
}

// Edit does a person's change on every model, now.
func (s *Set) Edit(e sim.Edit) error {
	var errs []error
	for _, r := range s.runs {
		errs = append(errs, r.Edit(e))
	}
	return errors.Join(errs...)
}

// CopyFrom makes s stand exactly where src stands, keeping its memory. A zero Set
// will do.
func (s *Set) CopyFrom(src *Set) {
	for len(s.runs) < len(src.runs) {
		s.runs, s.apart = append(s.runs, new(sim.Run)), append(s.apart, apart{})
	}
	s.runs, s.apart = s.runs[:len(src.runs)], s.apart[:len(src.runs)]
	for w := range src.runs {
		s.runs[w].CopyFrom(src.runs[w])
		a, b := &s.apart[w], &src.apart[w]
		log := append(a.partings[:0], b.partings...)
		*a = *b
		a.partings = log
	}
	s.tick, s.dt, s.hull = src.tick, src.dt, src.hull
}

// Deviation is how far a shadow and the robot were apart at the same times, for as
// long as both were under way.
type Deviation struct {
	Largest float64 // m
	At      float64 // s, when it was largest
	RMS     float64 // m
	Now     float64 // m, at the last tick at which both were under way
}

// Deviation compares a shadow with the robot, same-time: |x_robot(t) − x_shadow(t)|.
func (s *Set) Deviation(w Who) Deviation {
	if int(w) >= len(s.apart) {
		return Deviation{}
	}
	a := &s.apart[w]
	d := Deviation{Largest: a.largest, At: float64(a.at) * s.dt, Now: a.now}
	if a.n > 0 {
		d.RMS = math.Sqrt(a.sum / float64(a.n))
	}
	return d
}

// apart is what is known of one shadow beside the robot.
type apart struct {
	n       int64
	sum     float64 // of squares
	largest float64
	at      int64
	now     float64

	watch    watch
	partings []Parting
}

func (a *apart) compare(s *Set, w Who) {
	robot, shadow := s.runs[Robot], s.runs[w]
	if robot.Status() != sim.Running || shadow.Status() != sim.Running {
		return
	}
	d := robot.Pose().Pos.Sub(shadow.Pose().Pos).Norm()
	a.n++
	a.sum += d * d
	a.now = d
	if d > a.largest {
		a.largest, a.at = d, s.tick
	}
	if p, ok := a.watch.look(s, w, d); ok && len(a.partings) < maxPartings {
		a.partings = append(a.partings, p)
	}
}

// Frechet returns the discrete Fréchet distance between two ways, given as
// polylines: how long a leash two walkers need who go along them without ever
// turning back. 0 when either is empty.
//
// The recursion is c(i,j) = max(min(c(i−1,j), c(i−1,j−1), c(i,j−1)), d(i,j)) of
// Eiter and Mannila, Computing discrete Fréchet distance, TU Wien CD-TR 94/64 (1994).
// It takes len(p)·len(q) steps; see Resample.
func Frechet(p, q []geom.Vec) float64 {
	if len(p) == 0 || len(q) == 0 {
		return 0
	}
	row := make([]float64, len(q))
	for i := range p {
		diagonal := 0.0 // c(i−1, j−1)
		for j := range q {
			d := p[i].Sub(q[j]).Norm()
			up := row[j] // c(i−1, j)
			var least float64
			switch {
			case i == 0 && j == 0:
				least = d
			case i == 0:
				least = row[j-1]
			case j == 0:
				least = up
			default:
				least = min(up, diagonal, row[j-1])
			}
			diagonal = up
			row[j] = max(least, d)
		}
	}
	return row[len(q)-1]
}

// Resample returns a way as at most n points at equal steps along it, ends
// included, so that the discrete Fréchet distance of two ways is off by at most
// a step.
func Resample(way []geom.Vec, n int) []geom.Vec {
	if len(way) <= 1 || n < 2 {
		return way
	}
	total := 0.0
	for i := 1; i < len(way); i++ {
		total += way[i].Sub(way[i-1]).Norm()
	}
	out := make([]geom.Vec, 0, n)
	out = append(out, way[0])
	step, gone := total/float64(n-1), 0.0
	for i := 1; i < len(way) && step > 0; i++ {
		d := way[i].Sub(way[i-1])
		l := d.Norm()
		for len(out) < n-1 && gone+l >= step*float64(len(out)) {
			out = append(out, way[i-1].AddScaled((step*float64(len(out))-gone)/l, d))
		}
		gone += l
	}
	return append(out, way[len(way)-1])
}
