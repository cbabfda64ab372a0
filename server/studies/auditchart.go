package studies

import (
	"fmt"
	"math"

	"leeway/sim/study"
)

// AuditChart draws what each assumption costs: bars from the ideal model down to the
// robot, each with its interval, a triangle for what it would have shown alone, and
// beside them what pairs cost only together.
func (s *Subject) AuditChart(a *study.Audit) []byte {
	const w = 1180
	h := 200 + 58*float64(len(a.Assumptions)+1)
	p := newPen(w, h, s.Scenario.Name+": audit of the assumptions")
	p.text(24, 32, 15, "start", 700, softColour, s.Scenario.Name+" · audit of the assumptions")
	y := p.wrapped(24, 62, 19, 25, 118, 700, inkColour, a.Sentence())
	p.text(24, y, 12.5, "start", 400, softColour, fmt.Sprintf("%d combinations of %d assumptions × %d trials on the same starts and seeds, %d runs · shares are Shapley values with %s bootstrap intervals and add up exactly",
		1<<len(a.Assumptions), len(a.Assumptions), a.N, a.Runs, percentText(a.Confidence)))
	if a.N == 0 {
		return p.bytes()
	}
	y += 34
	p.text(24, y, 14, "start", 700, inkColour, "What each assumption costs, in points of success")
	p.text(24, y+17, 11.5, "start", 400, softColour, "Bars: share of the loss. Red: interval. Triangle: what making it real alone would have shown.")
	y += 44

	// The scale runs from the ideal rate on the left downwards, over all that is drawn.
	least, most := min(a.Ideal.Value, a.Real.Value), max(a.Ideal.Value, a.Real.Value)
	at := a.Ideal.Value
	order := bySize(a.Success.Shares)
	for _, i := range order {
		sh := a.Success.Shares[i]
		for _, v := range []float64{at - sh.Value, at - sh.In.Low, at - sh.In.High, at - a.Success.Alone[i]} {
			least, most = min(least, v), max(most, v)
		}
		at -= sh.Value
	}
	pad := math.Max(0.02, (most-least)*0.04)
	least, most = least-pad, most+pad
	const x0, x1 = 210.0, 700.0
	x := func(v float64) float64 { return x0 + (x1-x0)*(most-v)/(most-least) }
	bottom := y + 50*float64(len(a.Assumptions)+1)
	for _, v := range ticks(least, most, 5) {
		p.line(x(v), y, x(v), bottom, gridColour, 1, "")
		p.text(x(v), y-5, 11, "middle", 400, softColour, percentText(v))
	}
	at = a.Ideal.Value
	for _, i := range order {
		sh := a.Success.Shares[i]
		to := at - sh.Value
		p.text(24, y+22, 14, "start", 700, inkColour, a.Assumptions[i].Name)
		p.text(24, y+37, 11, "start", 400, softColour, a.Assumptions[i].Real)
		fill := inkColour
		if sh.Value < 0 {
			fill = pineColour
		}
		p.line(x(at), y, x(at), y+12, softColour, 1, "")
		p.rect(min(x(at), x(to)), y+12, max(math.Abs(x(to)-x(at)), 1), 22, fill, `rx="2"`)
		low, high := x(at-sh.In.Low), x(at-sh.In.High)
		p.whisker(min(low, high), max(low, high), y+23)
		alone := x(at - a.Success.Alone[i])
		p.path(fmt.Sprintf("M%s %sl5 9h-10z", r1(alone), r1(y+36)), paperColour, softColour, 1.4, "")
		p.text(max(low, high, x(at), x(to))+8, y+28, 13, "start", 700, inkColour, signed(-sh.Value))
		at, y = to, y+50
	}
	p.text(24, y+24, 14, "start", 700, inkColour, "the robot")
	p.rect(min(x(a.Ideal.Value), x(a.Real.Value)), y+12, max(math.Abs(x(a.Real.Value)-x(a.Ideal.Value)), 1), 20, "none", `stroke="`+inkColour+`" stroke-width="1.8" rx="2"`)
	p.text(max(x(a.Ideal.Value), x(a.Real.Value))+8, y+27, 13, "start", 700, inkColour,
		fmt.Sprintf("%s (%s – %s)", percentText(math.Round(100*a.Real.Value)/100), percentText(math.Round(100*a.Real.In.Low)/100), percentText(math.Round(100*a.Real.In.High)/100)))
	p.text(24, y+50, 12, "start", 400, softColour, fmt.Sprintf("One at a time, the assumptions explain %s of %s points; %s are left unexplained.",
		points(a.Success.Whole-a.Success.Rest), points(a.Success.Whole), points(a.Success.Rest)))
	s.pairs(p, a, order, 800, bottom-50*float64(len(a.Assumptions)+1)-44)
	return p.bytes()
}

// pairs draws what pairs cost together.
func (s *Subject) pairs(p *pen, a *study.Audit, order []int, x0, y0 float64) {
	p.text(x0, y0, 14, "start", 700, inkColour, "What costs only together")
	p.text(x0, y0+17, 11.5, "start", 400, softColour, "Points a pair loses beyond what each does, averaged over what else is real.")
	const cell = 44
	left := x0 + 96
	largest := 0.01
	for i := range a.Success.Pairs {
		for _, v := range a.Success.Pairs[i] {
			largest = max(largest, math.Abs(v))
		}
	}
	for r, i := range order {
		y := y0 + 40 + cell*float64(r)
		p.text(left-8, y+cell/2+4, 11.5, "end", 700, inkColour, a.Assumptions[i].Name)
		if r < len(order)-1 { // the last has no column
			fmt.Fprintf(&p.b, `<g transform="translate(%s %s) rotate(-40)">`, r1(left+cell*(float64(r)+0.6)), r1(y0+54+cell*float64(len(order))))
			p.text(0, 0, 11.5, "end", 700, inkColour, a.Assumptions[i].Name)
			p.b.WriteString("</g>\n")
		}
		for c, j := range order[:r] {
			v := a.Success.Pairs[max(i, j)][min(i, j)]
			u := math.Abs(v) / largest
			p.rect(left+cell*float64(c), y+1, cell-2, cell-2, shade(0.06+0.9*u), `rx="2"`)
			colour := inkColour
			if u > 0.5 {
				colour = paperColour
			}
			p.text(left+cell*(float64(c)+0.5)-1, y+cell/2+4, 11.5, "middle", 400, colour, points(v))
		}
	}
}

// bySize orders shares, the largest loss first.
func bySize(shares []study.Bounded) []int {
	order := make([]int, len(shares))
	for i := range order {
		order[i] = i
		for k := i; k > 0 && shares[order[k]].Value > shares[order[k-1]].Value; k-- {
			order[k], order[k-1] = order[k-1], order[k]
		}
	}
	return order
}

// points writes a share in points, to a tenth.
func points(v float64) string { return fmt.Sprintf("%.1f", 100*v+0) }

// signed is points with a sign that type sets as a minus.
func signed(v float64) string {
	switch s := fmt.Sprintf("%.1f", 100*math.Abs(v)); {
	case s == "0.0":
		return s
	case v < 0:
		return "−" + s
	default:
		return "+" + s
	}
}
