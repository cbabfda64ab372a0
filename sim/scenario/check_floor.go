package scenario

import (
	"fmt"
	"math"
	"strings"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

// tiny is the length (m) below which a piece of wall counts as nothing.
const tiny = 1e-6

// floor checks the shapes of walls, solids and routes.
func (c checker) floor() {
	f := &c.s.Floor
	pieces := 0
	for i, w := range f.Walls {
		pieces += max(len(w.Points)-1, 0)
		at := fmt.Sprintf("floor.walls[%d]", i)
		if c.sound(at) {
			c.chain(at+".points_m", "point", w.Points, false)
			c.onFloor(at, w.Points, 0)
		}
	}
	for i, s := range f.Solids {
		pieces += len(s.Corners)
		at := fmt.Sprintf("floor.solids[%d]", i)
		if !c.sound(at) {
			continue
		}
		if s.form() == "disc" {
			c.onFloor(at, []Point{s.Center}, s.Radius)
			continue
		}
		if c.chain(at+".corners_m", "corner", s.Corners, true) {
			g := geom.Polygon(vecs(s.Corners))
			if a, b, crosses := crossing(g); crosses {
				c.say(at+".corners_m", "%s: the sides after corners %d and %d meet; the outline of a solid may not cross or touch itself", at, a+1, b+1)
			} else if math.Abs(g.Area()) < tiny {
				c.say(at+".corners_m", "%s has no area", at)
			} else if !g.Simple() {
				c.say(at+".corners_m", "%s: the outline of a solid may not run back along itself", at)
			}
		}
		c.onFloor(at, s.Corners, 0)
	}
	for i, m := range f.Movers {
		at := fmt.Sprintf("floor.movers[%d]", i)
		if c.sound(at) {
			c.chain(at+".route_m", "point", m.Route, m.Loop && len(m.Route) > 2)
			c.onFloor(at, m.Route, m.reach())
		}
	}
	if pieces > MaxPieces {
		c.say("floor", "the walls and solids have %d straight pieces; at most %d are allowed", pieces, MaxPieces)
	}
}

// reach is the radius (m) of the disc about its centre that a mover stays within.
func (m *Mover) reach() float64 {
	if m.form() == "disc" {
		return m.Radius
	}
	return geom.Vec{X: m.Box[0], Y: m.Box[1]}.Norm() / 2
}

// chain checks that no piece of a chain has no length.
func (c checker) chain(at, word string, p []Point, closed bool) bool {
	whole := true
	for i := 1; i < len(p); i++ {
		if apart(p[i-1], p[i]) < tiny {
			c.say(fmt.Sprintf("%s[%d]", at, i), "%s: %ss %d and %d are the same, so the piece between them has no length", at, word, i, i+1)
			whole = false
		}
	}
	if closed && len(p) > 1 && apart(p[0], p[len(p)-1]) < tiny {
		c.say(fmt.Sprintf("%s[%d]", at, len(p)-1), "%s: the last %s repeats the first; leave it out", at, word)
		whole = false
	}
	return whole
}

// onFloor checks that a thing lies at least partly on the floor.
func (c checker) onFloor(at string, p []Point, margin float64) {
	if len(p) == 0 || !c.sound("floor.width_m", "floor.height_m") {
		return
	}
	low, high := p[0], p[0]
	for _, q := range p {
		for k := range q {
			low[k], high[k] = min(low[k], q[k]-margin), max(high[k], q[k]+margin)
		}
	}
	if high[0] < 0 || high[1] < 0 || low[0] > c.s.Floor.Width || low[1] > c.s.Floor.Height {
		c.say(at, "%s lies wholly off the floor, which is %s m by %s m", at, short(c.s.Floor.Width), short(c.s.Floor.Height))
	}
}

func (s *Scenario) onFloor(x, y float64) bool {
	return x >= 0 && y >= 0 && x <= s.Floor.Width && y <= s.Floor.Height
}

func (s *Scenario) offFloor(x, y float64) string {
	return fmt.Sprintf("%s, %s on a floor of %s m by %s m", short(x), short(y), short(s.Floor.Width), short(s.Floor.Height))
}

// places checks that start and goal are on the floor and that the hull has room to start.
func (c checker) places() {
	s := c.s
	if !c.sound("floor.width_m", "floor.height_m") {
		return
	}
	if c.sound("goal") && !s.onFloor(s.Goal.X, s.Goal.Y) {
		c.say("goal", "the goal is not on the floor: %s", s.offFloor(s.Goal.X, s.Goal.Y))
	}
	if !c.sound("start") {
		return
	}
	if !s.onFloor(s.Start.X, s.Start.Y) {
		c.say("start", "the start is not on the floor: %s", s.offFloor(s.Start.X, s.Start.Y))
		return
	}
	if !c.sound("robot.radius_m") {
		return
	}
	for _, o := range s.overlaps(c.report) {
		c.say("start", "the start leaves the hull (radius %s m) no room: %s", short(s.Robot.Radius), o)
	}
}

// overlaps says what the hull would stand in at the start, the first few things at most.
func (s *Scenario) overlaps(r *report) []string {
	const few = 5
	var out []string
	at, hull := geom.Vec{X: s.Start.X, Y: s.Start.Y}, s.Robot.Radius
	add := func(what string, gap float64) {
		if gap < hull-tiny && len(out) < few {
			if gap <= 0 {
				out = append(out, "it lies inside "+what)
			} else {
				out = append(out, fmt.Sprintf("%s is %.2f m from its centre", what, gap))
			}
		}
	}
	wall := func(what string, p []Point) {
		least := math.Inf(1)
		for i := 1; i < len(p); i++ {
			least = min(least, geom.DistanceToSegment(at, geom.Segment{A: vec(p[i-1]), B: vec(p[i])}))
		}
		add(what, least)
	}
	if s.Floor.Enclosed {
		for _, b := range s.border() {
			wall("the border ("+strings.TrimPrefix(b.ID, borderPrefix)+")", b.Points)
		}
	}
	for i, w := range s.Floor.Walls {
		if r.sound(fmt.Sprintf("floor.walls[%d]", i)) {
			wall(fmt.Sprintf("wall %q", w.ID), w.Points)
		}
	}
	for i, o := range s.Floor.Solids {
		if !r.sound(fmt.Sprintf("floor.solids[%d]", i)) {
			continue
		}
		if o.form() == "polygon" {
			add(fmt.Sprintf("solid %q", o.ID), geom.Polygon(vecs(o.Corners)).Distance(at))
		} else {
			add(fmt.Sprintf("solid %q", o.ID), geom.DistanceToDisc(at, geom.Disc{Center: vec(o.Center), Radius: o.Radius}))
		}
	}
	for i := range s.Floor.Movers {
		if !r.sound(fmt.Sprintf("floor.movers[%d]", i)) {
			continue
		}
		m, err := floor.NewMap(floor.Config{Movers: []floor.Mover{s.Floor.Movers[i].config()}}, hull)
		if err != nil {
			continue // what is wrong with it has been said
		}
		if near, ok := m.NewWorld().Nearest(at, hull); ok {
			add(fmt.Sprintf("mover %q", s.Floor.Movers[i].ID), near.Distance)
		}
	}
	return out
}

func apart(a, b Point) float64 { return vec(b).Sub(vec(a)).Norm() }

// vec and vecs turn places of the file into those of the core.
func vec(p Point) geom.Vec { return geom.Vec{X: p[0], Y: p[1]} }

func vecs(p []Point) []geom.Vec {
	out := make([]geom.Vec, len(p))
	for i := range p {
		out[i] = vec(p[i])
	}
	return out
}

// crossing finds two sides of a polygon, no neighbours, that have a point in common.
// Each is named by the corner it starts at.
func crossing(g geom.Polygon) (a, b int, crosses bool) {
	for i := range g {
		for j := i + 2; j < len(g) && !(i == 0 && j == len(g)-1); j++ {
			if g.Edge(i).Cross(g.Edge(j)) {
				return i, j, true
			}
		}
	}
	return 0, 0, false
}
