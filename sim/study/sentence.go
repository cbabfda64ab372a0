package study

import (
	"fmt"
	"math"
	"math/bits"
	"strings"

	"leeway/sim/study/stat"
)

// Sentence says what an audit found, in points of success.
func (a *Audit) Sentence() string {
	if a.N == 0 {
		return "Nothing is known yet."
	}
	l := &a.Success
	s := fmt.Sprintf("On the ideal model this design does what is asked in %s of runs; on the robot, in %s. ", percent(a.Ideal.Value), percent(a.Real.Value))
	lost := points(l.Whole)
	switch {
	case l.Whole < -0.005:
		return s + fmt.Sprintf("The robot does better by %d %s: what the model leaves out helps here.", -lost, plural(-lost))
	case l.Whole < 0.005:
		for i, x := range l.Shares {
			if math.Abs(x.Value) >= 0.02 {
				return s + fmt.Sprintf("Nothing is lost in all, but only because losses and gains cancel out: %s by itself stands for %+d %s.", a.Assumptions[i].Real, -points(x.Value), plural(points(x.Value)))
			}
		}
		return s + "Nothing is lost: as far as success goes, the simple model tells the truth."
	}
	order := bySize(l.Shares)
	top := order[0]
	s += fmt.Sprintf("Of the %d %s lost, %d %s from %s", lost, plural(lost), points(l.Shares[top].Value), verb(points(l.Shares[top].Value), "comes", "come"), a.Assumptions[top].Real)
	if other, part := a.partner(top); part >= 0.005 {
		of := fmt.Sprintf("%d of %s", points(part), verb(points(l.Shares[top].Value), "it", "them"))
		if points(part) == points(l.Shares[top].Value) {
			of = "all"
		}
		s += fmt.Sprintf(", %s only together with %s", of, a.Assumptions[other].Real)
	}
	var more []string
	for _, i := range order[1:] {
		if v := l.Shares[i].Value; v >= 0.005 && len(more) < 2 {
			more = append(more, fmt.Sprintf("%d from %s", points(v), a.Assumptions[i].Real))
		}
	}
	if len(more) > 0 {
		s += "; " + strings.Join(more, " and ")
	}
	s += "."
	for _, i := range order[:1] {
		if in := l.Shares[i].In; in.Low <= 0 {
			s += " That is within what chance does with so few runs."
		}
	}
	return s
}

// partner returns with which other assumption i shares the largest loss that
// neither has alone, and how much of that is in i's share: of every set that holds
// both, i's even part.
func (a *Audit) partner(i int) (other int, part float64) {
	d := stat.Dividends(len(a.Assumptions), a.Rates)
	for j := range a.Assumptions {
		sum := 0.0
		for s, x := range d {
			if j != i && s>>i&1 == 1 && s>>j&1 == 1 {
				sum -= x / float64(bits.OnesCount(uint(s)))
			}
		}
		if sum > part {
			other, part = j, sum
		}
	}
	return other, min(part, a.Success.Shares[i].Value)
}

func bySize(shares []Bounded) []int {
	order := make([]int, len(shares))
	for i := range order {
		order[i] = i
		for k := i; k > 0 && shares[order[k]].Value > shares[order[k-1]].Value; k-- {
			order[k], order[k-1] = order[k-1], order[k]
		}
	}
	return order
}

func percent(share float64) string { return fmt.Sprintf("%.0f %%", 100*share) }

func points(share float64) int { return int(math.Round(100 * share)) }

func plural(n int) string { return verb(n, "point", "points") }

func verb(n int, one, many string) string {
	if n == 1 || n == -1 {
		return one
	}
	return many
}
