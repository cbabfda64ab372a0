// Package ring is the ring of range sensors round the hull: where its beams
// point, when they fire, and what they read of a world.
//
// A beam starts at the sensor, on the mount circle in the direction of its
// bearing, and runs along the bearing; a cone is several rays from the sensor,
// spread evenly over its opening angle, of which the nearest echo counts.
//
// # From distance to reading
//
// The effects come in this order, each with a random stream of its own for
// each beam:
//
//  1. no echo within Max: no hit, reads Max;
//  2. noise: a normal deviate of σ = NoiseBase + NoiseGain·distance is added; what
//     comes to lie beyond Max is no hit;
//  3. dropout: with probability Dropout the echo is lost: no hit, reads Max;
//  4. random return: with probability Random, whatever happened before, a hit
//     somewhere in [Min, Max], all places alike;
//  5. a hit nearer than Min reads Min and is still a hit;
//  6. a hit is rounded to the nearest multiple of Quantum that lies in [Min, Max].
//
// This is the beam model of S. Thrun, W. Burgard and D. Fox, Probabilistic
// Robotics, 2005, ch. 6, without its exponential part: unexpected things in the
// way are on the floor itself here, as movers. Its weights are (1 − Dropout)·(1 − Random)
// for the echo, Dropout·(1 − Random) for the maximum, and Random.
//
// Every stream gives the same count of numbers for each reading, whatever the
// outcome: switching one effect on or off, or moving a wall, leaves the numbers
// of all the others as they were.
package ring

import (
	"math"

	"leeway/sim/chance"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// World is what a ring needs of the floor.
type World interface {
	// Cast writes to out[i] the distance along rays[i] to what it first meets,
	// +Inf where that is nothing within max.
	Cast(rays []floor.Ray, max float64, out []float64)
	// Nearest returns what is nearest to p within the given distance.
	Nearest(p geom.Vec, within float64) (floor.Near, bool)
}

// Ring is the state of one ring: what it last read, and its places in the
// random streams.
type Ring struct {
	cfg   Config // Bearings is not used: the scan holds them
	scan  Scan
	phase []int64    // tick of the period at which each beam fires
	dirs  []geom.Vec // of all rays, beam by beam, body frame
	beams []sources

	// working memory of Sense
	due   []int
	rays  []floor.Ray
	cast  []float64
	kLow  float64 // least and largest multiple of Quantum in [Min, Max]
	kHigh float64
}

// sources are the random streams of one beam.
type sources struct{ noise, dropout, random chance.Stream }

// New returns a ring that has read nothing yet. Its random streams are those
// called ("ring noise", i), ("ring dropout", i) and ("ring random", i), for beam i.
func New(c Config, seed uint64) *Ring {
	r := new(Ring)
	r.Reset(c, seed)
	return r
}

// Reset makes r what New returns, in the memory it has.
func (r *Ring) Reset(c Config, seed uint64) {
	bearings := c.bearings()
	n, k := len(bearings), c.raysPerBeam()
	r.scan.clear(&c, bearings)
	r.cfg = c
	r.cfg.Bearings = nil // the caller's memory

	r.phase = sized(r.phase, n)
	r.beams = sized(r.beams, n)
	r.dirs = sized(r.dirs, n*k)
	for i, b := range r.scan.Bearing {
		r.phase[i] = c.phase(i, n)
		r.beams[i] = sources{
			noise:   chance.New(seed, "ring noise", i),
			dropout: chance.New(seed, "ring dropout", i),
			random:  chance.New(seed, "ring random", i),
		}
		for j := range k {
			r.dirs[i*k+j] = geom.Heading(b + offset(j, k, c.Cone))
		}
	}
	r.due = sized(r.due, n)
	r.rays = sized(r.rays, n*k)
	r.cast = sized(r.cast, n*k)
	if c.Quantum > 0 {
		const slack = 1e-9 // so that 0.3/0.001 counts as 300
		r.kLow, r.kHigh = math.Ceil(c.Min/c.Quantum-slack), math.Floor(c.Max/c.Quantum+slack)
	}
}

// offset returns the angle of ray j of k from the middle of a cone; the outermost
// two lie on its rim, and the sides are exact negatives of each other.
func offset(j, k int, cone float64) float64 {
	if k < 2 {
		return 0
	}
	return float64(cone * (float64(2*j-(k-1)) / float64(2*(k-1))))
}

// CopyFrom makes r the same as src, in the memory it has.
func (r *Ring) CopyFrom(src *Ring) {
	r.cfg = src.cfg
	r.scan.copyFrom(&src.scan)
	r.phase = append(r.phase[:0], src.phase...)
	r.dirs = append(r.dirs[:0], src.dirs...)
	r.beams = append(r.beams[:0], src.beams...)
	r.due = sized(r.due, len(src.phase))
	r.rays = sized(r.rays, len(src.dirs))
	r.cast = sized(r.cast, len(src.dirs))
	r.kLow, r.kHigh = src.kLow, src.kHigh
}

// SetNoise changes the noise and the dropout of a running ring.
func (r *Ring) SetNoise(base, gain, dropout float64) {
	r.cfg.NoiseBase, r.cfg.NoiseGain, r.cfg.Dropout = base, gain, dropout
}

// Scan returns the readings; the same memory at every call.
func (r *Ring) Scan() *Scan { return &r.scan }

// Sense reads the beams that are due at this tick from the true pose. At tick 0
// all beams are read. It does not allocate.
func (r *Ring) Sense(tick int64, pose geom.Pose, w World) {
	due := r.dueAt(tick)
	if len(due) == 0 {
		return
	}

	// All rays of all due beams go into one call: what the floor has to do
	// once for a place, it does once.
	sin, cos := geom.Sincos(pose.Theta)
	k := r.cfg.raysPerBeam()
	rays := r.rays[:0]
	for _, i := range due {
		bearing := r.scan.Dir[i].Rotate(sin, cos)
		at := pose.Pos.AddScaled(r.cfg.Mount, bearing)
		if k == 1 {
			rays = append(rays, floor.Ray{Origin: at, Dir: bearing})
			continue
		}
		for _, d := range r.dirs[i*k : i*k+k] {
			rays = append(rays, floor.Ray{Origin: at, Dir: d.Rotate(sin, cos)})
		}
	}
	cast := r.cast[:len(rays)]
	w.Cast(rays, r.cfg.Max, cast)

	for n, i := range due {
		distance := cast[n*k]
		for j := 1; j < k; j++ {
			distance = min(distance, cast[n*k+j])
		}
		r.scan.Range[i], r.scan.Hit[i] = r.read(&r.beams[i], distance)
		r.scan.Tick[i] = tick
	}
	if r.scan.Exact {
		r.look(pose.Pos, sin, cos, w)
	}
}

// dueAt returns the beams that are read at a tick.
func (r *Ring) dueAt(tick int64) []int {
	at := tick % r.cfg.period()
	if at != 0 && !r.cfg.InTurn {
		return nil
	}
	due := r.due[:0]
	for i, p := range r.phase {
		if p == at || tick == 0 {
			due = append(due, i)
		}
	}
	return due
}

// read turns the distance of an echo into a reading of one beam, in the order
// that the package comment gives.
func (r *Ring) read(s *sources, distance float64) (z float64, hit bool) {
	c := &r.cfg
	z, hit = distance, distance <= c.Max
	if c.Noiseless {
		if !hit {
			z = c.Max
		}
		return z, hit
	}

	noise := s.noise.Normal()
	lost := s.dropout.Uniform() < c.Dropout
	if hit {
		z += float64((c.NoiseBase + float64(c.NoiseGain*z)) * noise)
		hit = z <= c.Max && !lost
	}
	// Random cannot change in a running ring, so that numbers drawn without it
	// would never show.
	if c.Random > 0 {
		random, place := s.random.Uniform() < c.Random, s.random.Uniform()
		if random {
			z, hit = c.Min+float64(place*(c.Max-c.Min)), true
		}
	}
	if !hit {
		return c.Max, false
	}
	if z < c.Min {
		z = c.Min
	}
	if c.Quantum > 0 { // (the built-in min and max mind NaN, which costs more than all else here)
		k := math.Floor(z/c.Quantum + 0.5)
		if k < r.kLow {
			k = r.kLow
		}
		if k > r.kHigh {
			k = r.kHigh
		}
		if z = c.Quantum * k; z > c.Max { // by its rounding
			z = c.Max
		}
	}
	return z, true
}

// look fills in Gap and Toward of the noiseless all-round ideal.
func (r *Ring) look(center geom.Vec, sin, cos float64, w World) {
	s := &r.scan
	near, ok := w.Nearest(center, r.cfg.Mount+r.cfg.Max)
	if !ok {
		s.Gap, s.Toward = math.Inf(1), geom.Vec{}
		return
	}
	s.Gap, s.Toward = near.Distance, near.Point.Sub(center).Rotate(-sin, cos).Unit()
	if near.Distance < 0 {
		s.Toward = s.Toward.Scale(-1)
	}
}
