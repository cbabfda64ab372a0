package study

import (
	"math"
	"slices"

	"leeway/sim/geom"
)

// Grid cuts a floor into square cells, row by row from its south-west corner.
type Grid struct {
	Cell   float64 // m
	NX, NY int
}

// NewGrid returns a grid over a floor of that size (m), with about so many cells
// along its longer side.
func NewGrid(width, height float64, along int) *Grid {
	cell := max(width, height) / float64(max(along, 1))
	return &Grid{Cell: cell, NX: max(1, int(math.Ceil(width/cell-1e-9))), NY: max(1, int(math.Ceil(height/cell-1e-9)))}
}

// at returns the cell that holds p, −1 off the grid.
func (g *Grid) at(p geom.Vec) int32 {
	x, y := math.Floor(p.X/g.Cell), math.Floor(p.Y/g.Cell)
	if !(x >= 0 && y >= 0 && x < float64(g.NX) && y < float64(g.NY)) {
		return -1
	}
	return int32(y)*int32(g.NX) + int32(x)
}

// Density returns how many of the runs went through each cell.
func (g *Grid) Density(results []Result) []int {
	n := make([]int, g.NX*g.NY)
	for i := range results {
		for _, c := range results[i].Cells {
			n[c]++
		}
	}
	return n
}

// marker notes the cells that one run goes through, each once.
type marker struct {
	been []bool
	list []int32
	last int32
}

func (m *marker) begin(g *Grid) {
	if len(m.been) != g.NX*g.NY {
		m.been = make([]bool, g.NX*g.NY)
	}
	for _, c := range m.list {
		m.been[c] = false
	}
	m.list, m.last = m.list[:0], -1
}

func (m *marker) note(g *Grid, p geom.Vec) {
	c := g.at(p)
	if c == m.last || c < 0 {
		return
	}
	m.last = c
	if !m.been[c] {
		m.been[c] = true
		m.list = append(m.list, c)
	}
}

func (m *marker) cells() []int32 { return slices.Clone(m.list) }
