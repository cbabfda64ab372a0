package floor

// The plain reference: every primitive is asked, one after the other, without
// index, bounding circles or lists. What is fast must give the same bits.

import (
	"math"

	"leeway/sim/geom"
)

// plain is a floor as a flat list of things, solids before movers.
type plain struct{ things []thing }

type thing struct {
	ref   Ref
	kind  Kind
	edges []geom.Segment
	disc  geom.Disc
}

// plainOf lists what stands where in w now, from what w tells about itself.
func plainOf(w *World) plain {
	var f plain
	for i := range w.m.solids {
		s := w.SolidAt(i)
		t := thing{ref: Ref{Index: i}, kind: s.Kind}
		switch s.Kind {
		case Disc:
			t.disc = geom.Disc{Center: s.Points[0], Radius: s.Radius}
		default:
			for k := range s.Points {
				if s.Kind == Polygon || k+1 < len(s.Points) {
					t.edges = append(t.edges, geom.Polygon(s.Points).Edge(k))
				}
			}
		}
		f.things = append(f.things, t)
	}
	for i := range w.m.movers {
		f.things = append(f.things, moverThing(w, i))
	}
	return f
}

func moverThing(w *World, i int) thing {
	mv, at := w.m.movers[i].Mover, w.MoverAt(i)
	t := thing{ref: Ref{Mover: true, Index: i}, kind: Polygon}
	if mv.Radius > 0 {
		t.kind, t.disc = Disc, geom.Disc{Center: at, Radius: mv.Radius}
		return t
	}
	sin, cos := geom.Sincos(math.Abs(mv.Heading))
	var g geom.Polygon
	for _, c := range []geom.Vec{{X: mv.Half.X, Y: mv.Half.Y}, {X: -mv.Half.X, Y: mv.Half.Y}, {X: -mv.Half.X, Y: -mv.Half.Y}, {X: mv.Half.X, Y: -mv.Half.Y}} {
		c = c.Rotate(sin, cos)
		if mv.Heading < 0 {
			c.Y = -c.Y
		}
		g = append(g, at.Add(c))
	}
	for k := range g {
		t.edges = append(t.edges, g.Edge(k))
	}
	return t
}

func (t *thing) inside(p geom.Vec) bool {
	in := false
	for _, e := range t.edges {
		if e.Crosses(p) {
			in = !in
		}
	}
	return in && t.kind == Polygon
}

func (f plain) cast(r Ray, reach float64) float64 {
	best := math.Inf(1)
	for i := range f.things {
		t := &f.things[i]
		if t.kind == Disc {
			if d, ok := geom.RayDisc(r.Origin, r.Dir, t.disc); ok {
				best = min(best, d)
			}
			continue
		}
		if t.inside(r.Origin) {
			return 0
		}
		for _, e := range t.edges {
			if d, ok := geom.SegmentRange(r.Origin, r.Dir, e); ok {
				best = min(best, d)
			}
		}
	}
	if best > reach {
		return math.Inf(1)
	}
	return best
}

// nearest: outside, the least of all; inside of something, the deepest of what holds p. Segments
// compare by squared distance.
func (f plain) nearest(p geom.Vec, within float64) (Near, bool) {
	best, ok := Near{Distance: math.Inf(1), Ref: Ref{Index: -1}}, false
	take := func(d float64, at geom.Vec, ref Ref) {
		if d < best.Distance {
			best, ok = Near{d, at, ref}, true
		}
	}
	squared := math.Inf(1)
	var segment Near
	for i := range f.things {
		t := &f.things[i]
		if t.kind == Disc {
			continue
		}
		least, at := math.Inf(1), geom.Vec{}
		for _, e := range t.edges {
			q, _ := geom.NearestOnSegment(p, e)
			if d := p.Sub(q).Norm2(); d < least {
				least, at = d, q
			}
		}
		if t.inside(p) && least > 0 {
			take(-math.Sqrt(least), at, t.ref)
		}
		if least < squared {
			squared, segment = least, Near{math.Sqrt(least), at, t.ref}
		}
	}
	if !ok && squared < math.Inf(1) {
		best, ok = segment, true
	}
	for i := range f.things {
		t := &f.things[i]
		if t.kind != Disc {
			continue
		}
		n := p.Sub(t.disc.Center).Unit()
		if n == (geom.Vec{}) {
			n.X = 1
		}
		d := geom.DistanceToDisc(p, t.disc)
		if d < best.Distance || d == best.Distance && before(t.ref, best.Ref) {
			best, ok = Near{d, t.disc.Center.AddScaled(t.disc.Radius, n), t.ref}, true
		}
	}
	if !ok || best.Distance >= 0 && best.Distance > within {
		return Near{Ref: Ref{Index: -1}}, false
	}
	return best, true
}

// before is the order of things: solids first, then by number.
func before(a, b Ref) bool {
	if a.Mover != b.Mover {
		return b.Mover
	}
	return a.Index < b.Index
}

// sweep is the whole rule of contact over again: first touch, slide, and the way out from inside.
func (f plain) sweep(p, d geom.Vec, radius float64) (geom.Vec, Contact, bool) {
	path, c, touched := f.path(p, d, radius)
	return path[len(path)-1], c, touched
}

// path is sweep that tells every place where the way bends.
func (f plain) path(p, d geom.Vec, radius float64) ([]geom.Vec, Contact, bool) {
	path := []geom.Vec{p}
	c, touched := Contact{Ref: Ref{Index: -1}}, false
	if d == (geom.Vec{}) {
		return path, c, false
	}
	start := p
	depth := map[int]float64{}
	for i := range f.things {
		t := &f.things[i]
		if !t.inside(p) || len(depth) == 4 {
			continue
		}
		q, e := t.boundary(p)
		depth[i] = e
		n := q.Sub(p).Unit()
		if in := d.Dot(n); in < 0 {
			if !touched {
				c, touched = Contact{Point: q, Normal: n, Ref: t.ref}, true
			}
			d = d.AddScaled(-in, n)
		}
	}
	left, rest := d, d
	var lastCore geom.Segment
	var lastThick float64
	for i := range slides {
		at, near, best, core, thick := math.Inf(1), math.Inf(1), -1, geom.Segment{}, 0.0
		for i := range f.things {
			t := &f.things[i]
			if t.kind == Disc {
				if k, ok := geom.DiscTouchesDisc(p, rest, radius+Skin, t.disc); ok {
					if apart := geom.DistanceToDisc(p, t.disc); k < at || k == at && apart < near {
						at, near, best, core, thick = k, apart, i, geom.Segment{A: t.disc.Center, B: t.disc.Center}, t.disc.Radius
					}
				}
				continue
			}
			if _, in := depth[i]; in {
				continue
			}
			for _, e := range t.edges {
				if k, ok := geom.DiscTouchesSegment(p, rest, radius+Skin, e); ok {
					if apart := geom.FromSegment(p, e).Norm(); k < at || k == at && apart < near {
						at, near, best, core, thick = k, apart, i, e, 0
					}
				}
			}
		}
		if at > 1 {
			p = p.Add(rest)
			break
		}
		if at > 0 {
			p, left = p.AddScaled(at, rest), left.Scale(1-at)
			path = append(path, p)
		}
		v := geom.FromSegment(p, core)
		n := v.Unit()
		if !touched {
			q, _ := geom.NearestOnSegment(p, core)
			c, touched = Contact{at, q.AddScaled(thick, n), n, f.things[best].ref}, true
		}
		out := max(-left.Dot(n), 0) + min(float64(bias*left.Norm()), Skin)
		if gap := v.Norm() - thick - radius; gap >= 0 && gap < Skin {
			out += Skin - gap
		}
		rest = left.AddScaled(out, n)
		if v := geom.FromSegment(p, lastCore); i > 0 && v.Norm()-lastThick-radius <= 2*Skin && rest.Dot(v.Unit()) < -flat*rest.Norm() {
			break
		}
		lastCore, lastThick = core, thick
	}
	for i := range f.things {
		e, in := depth[i]
		if !in {
			continue
		}
		if _, now := f.things[i].boundary(p); now > e+Skin && f.things[i].inside(p) {
			p = start
			if q, _ := f.things[i].boundary(p); !touched {
				n := q.Sub(p).Unit()
				if n == (geom.Vec{}) {
					n = d.Unit().Scale(-1)
				}
				c, touched = Contact{Point: q, Normal: n, Ref: f.things[i].ref}, true
			}
			break
		}
	}
	return append(path, p), c, touched
}

// gap returns how far a hull at p is from t, negative when it overlaps.
func (t *thing) gap(p geom.Vec, radius float64) float64 {
	if t.kind == Disc {
		return geom.DistanceToDisc(p, t.disc) - radius
	}
	_, d := t.boundary(p)
	if t.inside(p) {
		d = -d
	}
	return d - radius
}

// gap returns the least over everything.
func (f plain) gap(p geom.Vec, radius float64) float64 {
	least := math.Inf(1)
	for i := range f.things {
		least = min(least, f.things[i].gap(p, radius))
	}
	return least
}

func (t *thing) boundary(p geom.Vec) (geom.Vec, float64) {
	sq, at := math.Inf(1), geom.Vec{}
	for _, e := range t.edges {
		q, _ := geom.NearestOnSegment(p, e)
		if d := p.Sub(q).Norm2(); d < sq {
			sq, at = d, q
		}
	}
	return at, math.Sqrt(sq)
}
