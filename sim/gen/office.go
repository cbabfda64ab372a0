package gen

import (
	"fmt"
	"math"

	"leeway/sim/chance"
	"leeway/sim/floor"
	"leeway/sim/geom"
)

// The office floor's measures, m.
const (
	roomWide     = 3.5
	roomDeep     = 4.0
	corridorWide = 2.0
)

// MinOffice is the smallest number of wall segments Office takes.
const MinOffice = 50

// Office draws a long office floor of exactly the given number of segments, walls
// and sides of furniture together: corridors one above the other with rooms on both
// sides, joined at both ends by cross corridors, every room with one door and some with
// a desk or a shelf. The start is in the first corridor at the left, the goal in
// a room of the last one at the right. Gaps are as for Floor, and there is
// always a way. Options give hull, margin and goal radius; the size follows from the number.
func Office(seed uint64, segments int, o Options) (Scene, error) {
	o = o.withDefaults()
	if err := o.check(); err != nil {
		return Scene{}, err
	}
	if segments < MinOffice {
		return Scene{}, fmt.Errorf("an office floor of %d segments is none: at least %d", segments, MinOffice)
	}
	if o.clear() > 1 {
		return Scene{}, fmt.Errorf("a hull of radius %g m with a margin of %g m does not fit through the doors", o.Hull, o.Margin)
	}
	d := &draft{dice: dice{chance.New(seed, "office", 0)}, Options: o}
	f := officeFor(segments)
	d.Width = 2*corridorWide + float64(float64(f.bays)*roomWide)
	d.Height = float64(f.corridors) * f.pitch()
	d.border()
	left := segments - 4
	for k := range f.corridors {
		left -= d.corridor(&f, k)
	}
	d.furnishOffice(&f, left)

	d.start = geom.Vec{X: corridorWide / 2, Y: roomDeep + corridorWide/2}
	d.goal = f.middle(room{f.corridors - 1, f.bays - 1, true})
	s := d.scene(fmt.Sprintf("office %d of %d segments", seed, segments))
	s.Start.Theta = 0
	return s, nil
}

// office is the plan: how many corridors, and bays along each, with a room on either side.
type office struct{ corridors, bays int }

// room names a room: its corridor, its bay along it, and whether it lies above.
type room struct {
	corridor, bay int
	above         bool
}

func (f *office) pitch() float64 { return 2*roomDeep + corridorWide }

// segments counts what the bare plan takes: the border, for each corridor the
// sides of its rooms and two pieces of front for each, and the back walls between corridors.
func (f *office) segments() int {
	return 4 + f.corridors*(2*(f.bays+1)+4*f.bays) + f.corridors - 1
}

// officeFor plans a floor about three times as long as it is deep whose bare
// plan takes up to seven tenths of the segments; the rest is furniture.
func officeFor(segments int) office {
	bare := 7 * segments / 10
	// segments ≈ 6·corridors·bays, and 3.5·bays ≈ 3·10·corridors.
	f := office{corridors: max(1, int(math.Sqrt(float64(bare)/51))), bays: 1}
	for next := f; next.segments() <= bare; next.bays++ {
		f = next
	}
	return f
}

// corner returns the corner at the back of a room, toward the left.
func (f *office) corner(r room) geom.Vec {
	p := geom.Vec{X: corridorWide + float64(float64(r.bay)*roomWide), Y: float64(float64(r.corridor) * f.pitch())}
	if r.above {
		p.Y = float64(float64(r.corridor+1) * f.pitch())
	}
	return p
}

// in is the direction (±1) from the back of a room to its front.
func (r room) in() float64 {
	if r.above {
		return -1
	}
	return 1
}

func (f *office) middle(r room) geom.Vec {
	return f.corner(r).Add(geom.Vec{X: roomWide / 2, Y: float64(r.in() * roomDeep / 2)})
}

// corridor puts up the rooms along one corridor, and the wall at their backs; it returns the number of segments.
func (d *draft) corridor(f *office, k int) (segments int) {
	wall := func(a, b geom.Vec) {
		d.add(floor.Wall, "wall", 0, a, b)
		segments++
	}
	for _, above := range [2]bool{false, true} {
		for b := range f.bays + 1 {
			r := room{k, b, above}
			back := f.corner(r)
			front := back.Add(geom.Vec{Y: float64(r.in() * roomDeep)})
			wall(back, front)
			if b == f.bays {
				break
			}
			end := f.corner(room{k, b + 1, above}).Add(geom.Vec{Y: float64(r.in() * roomDeep)})
			door := d.between(1, 1.3)
			from := d.between(0.3, roomWide-door-0.3)
			wall(front, front.Add(geom.Vec{X: from}))
			wall(front.Add(geom.Vec{X: from + door}), end)
		}
	}
	if k > 0 {
		wall(f.corner(room{k, 0, false}), f.corner(room{k, f.bays, false}))
	}
	return segments
}

// furnishOffice spends the segments that are left: on desks of four, and on a
// shelf each for the last one to three. All stand at the left walls of their rooms, where
// they keep clear of each other.
func (d *draft) furnishOffice(f *office, left int) {
	goal := room{f.corridors - 1, f.bays - 1, true}
	var rooms []room
	for k := range f.corridors {
		for b := range f.bays {
			for _, r := range [2]room{{k, b, false}, {k, b, true}} {
				if r != goal {
					rooms = append(rooms, r)
				}
			}
		}
	}
	d.shuffle(len(rooms), func(i, j int) { rooms[i], rooms[j] = rooms[j], rooms[i] })
	for i := 0; left > 0; i++ {
		p, in := f.corner(rooms[i]), rooms[i].in()
		if left < 4 {
			p.Y += float64(in * roomDeep / 2)
			d.add(floor.Wall, "shelf", 0, p, p.Add(geom.Vec{X: d.between(0.3, 0.8)}))
			left--
			continue
		}
		if d.chance(0.5) { // out of the corner
			p.Y += float64(in * d.between(1, 1.6))
		}
		end := p.Y + float64(in*d.between(0.6, 0.8))
		d.add(floor.Polygon, "desk", 0, rectangle(p.X, math.Min(p.Y, end), p.X+d.between(1, 1.2), math.Max(p.Y, end))...)
		left -= 4
	}
}
