package scenario

import (
	"math"

	"leeway/sim"
	"leeway/sim/geom"
)

// WithEdits returns a copy whose Edits are those that a run of s recorded. What a
// file cannot say, a moved border, is left out.
func (s *Scenario) WithEdits(edits []sim.Edit) *Scenario {
	c := s.Clone()
	c.Edits = nil
	walls, solids := len(s.Floor.Walls), len(s.Floor.Solids)
	for _, e := range edits {
		if e.Kind == sim.MoveSolid && e.Index >= walls+solids {
			continue
		}
		f := Edit{Tick: e.Tick}
		if e.Kind != sim.SetNumber {
			f.To = Point{e.Pos.X + 0, e.Pos.Y + 0}
		}
		switch e.Kind {
		case sim.MoveGoal:
			f.What = "goal"
		case sim.MoveRobot:
			f.What = "robot"
		case sim.MoveSolid:
			f.What = "solid"
			if e.Index < walls {
				f.ID = s.Floor.Walls[e.Index].ID
			} else {
				f.ID = s.Floor.Solids[e.Index-walls].ID
			}
		case sim.MoveMover:
			f.What, f.ID = "mover", s.Floor.Movers[e.Index].ID
		case sim.SetNumber:
			f.What, f.Value = "number", e.Value+0
			for _, r := range rules() {
				if r.Live && r.Number == e.Number {
					f.Name = r.Path
				}
			}
		}
		c.Edits = append(c.Edits, f)
	}
	return c
}

// Folded returns a copy with the edits done for good (goal, walls, solids, movers and numbers where
// they end up; a carried robot is forgotten) and none left. Things may have ended up where
// a run cannot start, on the start for instance: Validate says so.
func (s *Scenario) Folded() *Scenario {
	c := s.Clone()
	c.Edits = nil
	solids := c.solidIndexes()
	for _, e := range s.Edits {
		switch e.What {
		case "goal":
			c.Goal.X, c.Goal.Y = e.To[0], e.To[1]
		case "solid":
			i, ok := solids[e.ID]
			if !ok {
				continue
			}
			if walls := len(c.Floor.Walls); i < walls {
				shift(c.Floor.Walls[i].Points, e.To)
			} else if o := &c.Floor.Solids[i-walls]; o.form() == "polygon" {
				shift(o.Corners, e.To)
			} else {
				o.Center = e.To
			}
		case "mover":
			if i, ok := c.MoverIndex(e.ID); ok {
				shift(c.Floor.Movers[i].Route, e.To)
			}
		case "number":
			if _, v, err := c.at(e.Name, false); err == nil {
				v.SetFloat(e.Value)
			}
		}
	}
	return c
}

// shift moves points so that the first comes to lie at to. The others are rounded to a
// micrometre, to keep files free of the dust of subtraction.
func shift(p []Point, to Point) {
	from := p[0]
	for i := range p {
		for k := range to {
			p[i][k] = math.Round((p[i][k]+(to[k]-from[k]))*1e6)/1e6 + 0
		}
	}
	p[0] = to
}

// border returns the walls round the floor.
func (s *Scenario) border() []Wall {
	w, h := s.Floor.Width, s.Floor.Height
	sw, se, ne, nw := Point{0, 0}, Point{w, 0}, Point{w, h}, Point{0, h}
	return []Wall{
		{borderPrefix + "south", []Point{sw, se}},
		{borderPrefix + "east", []Point{se, ne}},
		{borderPrefix + "north", []Point{ne, nw}},
		{borderPrefix + "west", []Point{nw, sw}},
	}
}

// solidIndexes returns SolidIndex of every wall and solid at once, without the border.
func (s *Scenario) solidIndexes() map[string]int {
	m := make(map[string]int, len(s.Floor.Walls)+len(s.Floor.Solids))
	for i, w := range s.Floor.Walls {
		m[w.ID] = i
	}
	for i, o := range s.Floor.Solids {
		m[o.ID] = len(s.Floor.Walls) + i
	}
	return m
}

// SolidIndex returns the place in sim's floor.Config of the wall or solid with this id: walls
// first, then solids, then the border of an enclosed floor; fixed says it is of the border.
func (s *Scenario) SolidIndex(id string) (i int, fixed, ok bool) {
	for i := range s.Floor.Walls {
		if s.Floor.Walls[i].ID == id {
			return i, false, true
		}
	}
	n := len(s.Floor.Walls)
	for i := range s.Floor.Solids {
		if s.Floor.Solids[i].ID == id {
			return n + i, false, true
		}
	}
	if n += len(s.Floor.Solids); s.Floor.Enclosed {
		for i, b := range s.border() {
			if b.ID == id {
				return n + i, true, true
			}
		}
	}
	return 0, false, false
}

// MoverIndex returns the place in sim's floor.Config of the mover with this id.
func (s *Scenario) MoverIndex(id string) (i int, ok bool) {
	for i := range s.Floor.Movers {
		if s.Floor.Movers[i].ID == id {
			return i, true
		}
	}
	return 0, false
}

// Bounds returns the south-west and the north-east corner of the floor.
func (s *Scenario) Bounds() (low, high geom.Vec) {
	return geom.Vec{}, geom.Vec{X: s.Floor.Width, Y: s.Floor.Height}
}
