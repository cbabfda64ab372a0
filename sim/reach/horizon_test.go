package reach

import (
	"math"
	"math/rand/v2"
	"testing"

	"leeway/sim/floor"
	"leeway/sim/geom"
)

// Every bitangent between any two arcs that nothing stands in must be listed:
// the horizon may only hide what is blocked.
func TestHorizonHidesOnlyWhatIsBlocked(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 10))
	listed, open, all := 0, 0, 0
	for floorNumber := range 30 {
		var c floor.Config
		grid := floorNumber%3 == 0 // walls in line with each other and with the cells
		for range 5 + rng.IntN(40) {
			p := geom.Vec{X: 10 * rng.Float64(), Y: 10 * rng.Float64()}
			d := geom.Vec{X: rng.NormFloat64(), Y: rng.NormFloat64()}
			if grid {
				p = geom.Vec{X: math.Round(p.X), Y: math.Round(p.Y)}
				d = geom.Vec{X: math.Round(d.X), Y: math.Round(d.Y)}
			}
			if d == (geom.Vec{}) {
				d.X = 1
			}
			switch rng.IntN(3) {
			case 0:
				c.Solids = append(c.Solids, floor.Solid{Kind: floor.Disc, Points: []geom.Vec{p}, Radius: 0.01 + 0.6*rng.Float64()})
			case 1:
				c.Solids = append(c.Solids, floor.Solid{Kind: floor.Wall, Points: []geom.Vec{p, p.Add(d), p.Add(d).Add(d.Perp())}})
			default:
				c.Solids = append(c.Solids, floor.Solid{Kind: floor.Polygon, Points: []geom.Vec{p, p.Add(d), p.Add(d.Perp())}})
			}
		}
		y, err := New(c, 0.05+0.2*rng.Float64())
		if err != nil {
			t.Fatal(err)
		}
		for s := range int32(len(y.sides)) {
			y.list(s)
			has := make(map[[2]int32]bool)
			for i := y.sides[s].first; i < y.sides[s].last; i++ {
				e := &y.edges[i]
				has[[2]int32{e.to, int32(math.Round(e.leave * 1e6))}] = true
				listed++
			}
			a, s1 := &y.arcs[s/2], signOf(s)
			for to := range int32(len(y.sides)) {
				b, s2 := &y.arcs[to/2], signOf(to)
				u, _, ok := tangent(a.center, s1*a.radius, b.center, s2*b.radius)
				if !ok {
					continue
				}
				n1, n2 := u.Perp().Scale(-s1), u.Perp().Scale(-s2)
				if !a.has(n1) || !b.has(n2) {
					continue
				}
				all++
				if !y.clear(a.center.AddScaled(a.radius, n1), b.center.AddScaled(b.radius, n2)) {
					continue
				}
				open++
				if !has[[2]int32{to, int32(math.Round(a.along(n1, s1) * 1e6))}] {
					t.Fatalf("floor %d: the open bitangent from side %d to side %d is not listed", floorNumber, s, to)
				}
			}
		}
	}
	t.Logf("%d bitangents, %d open, %d listed", all, open, listed)
	if listed*2 > all {
		t.Errorf("%d of %d bitangents are listed: the horizon hides too little to be tested", listed, all)
	}
}
