package gen

// lattice is a grid of cells, some of them open to their neighbours. Cell (i, j)
// has the number j·nx + i.
type lattice struct {
	nx, ny int
	right  []bool // cell is open to the next one in x
	up     []bool // cell is open to the next one in y
}

// step calls f for every neighbour of cell c, with the place that says whether the two are open to each other.
func (l *lattice) step(c int, f func(next int, open *bool)) {
	i, j := c%l.nx, c/l.nx
	if i > 0 {
		f(c-1, &l.right[c-1])
	}
	if i+1 < l.nx {
		f(c+1, &l.right[c])
	}
	if j > 0 {
		f(c-l.nx, &l.up[c-l.nx])
	}
	if j+1 < l.ny {
		f(c+l.nx, &l.up[c])
	}
}

// carve joins all cells but the closed ones by a random tree, grown at random
// places all over so that it stays shallow (Prim's method with random weights),
// and opens each other wall between two of them with the probability loops. It
// reports false when the closed cells cut the others apart.
func (d *draft) carve(nx, ny int, closed []bool, loops float64) (*lattice, bool) {
	l := &lattice{nx: nx, ny: ny, right: make([]bool, nx*ny), up: make([]bool, nx*ny)}
	type door struct {
		to   int
		open *bool
	}
	var doors []door
	joined := make([]bool, nx*ny)
	left := 0
	for _, c := range closed {
		if !c {
			left++
		}
	}
	join := func(c int) {
		joined[c] = true
		left--
		l.step(c, func(next int, open *bool) {
			if !closed[next] {
				doors = append(doors, door{next, open})
			}
		})
	}
	first := d.below(nx * ny)
	for closed[first] {
		first = d.below(nx * ny)
	}
	join(first)
	for len(doors) > 0 {
		k := d.below(len(doors))
		next := doors[k]
		doors[k] = doors[len(doors)-1]
		doors = doors[:len(doors)-1]
		if !joined[next.to] {
			*next.open = true
			join(next.to)
		}
	}
	for c := range closed {
		l.step(c, func(next int, open *bool) {
			if next > c && !closed[c] && !closed[next] && !*open && d.chance(loops) {
				*open = true
			}
		})
	}
	return l, left == 0
}

// depths returns how many cells away every cell is from one, −1 when there is no way.
func (l *lattice) depths(from int) []int {
	depth := make([]int, l.nx*l.ny)
	for i := range depth {
		depth[i] = -1
	}
	depth[from] = 0
	queue := []int{from}
	for len(queue) > 0 {
		c := queue[0]
		queue = queue[1:]
		l.step(c, func(next int, open *bool) {
			if *open && depth[next] < 0 {
				depth[next] = depth[c] + 1
				queue = append(queue, next)
			}
		})
	}
	return depth
}

// lines returns n + 1 coordinates from 0 to size that part it into n; each but the outer two is off its even place by up to jitter.
func (d *draft) lines(n int, size, jitter float64) []float64 {
	at := make([]float64, n+1)
	for i := 1; i < n; i++ {
		at[i] = size*float64(i)/float64(n) + d.between(-jitter, jitter)
	}
	at[n] = size
	return at
}
