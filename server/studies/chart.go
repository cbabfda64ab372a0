package studies

import (
	"fmt"
	"math"
	"strings"

	"leeway/sim/floor"
	"leeway/sim/geom"
	"leeway/sim/study"
)

// plot is a field with two axes.
type plot struct {
	*pen
	x0, y0, w, h           float64 // of the field, drawing units
	low, high, bottom, top float64 // of the numbers
}

func (p *plot) x(v float64) float64 { return p.x0 + p.w*(v-p.low)/(p.high-p.low) }
func (p *plot) y(v float64) float64 { return p.y0 + p.h*(1-(v-p.bottom)/(p.top-p.bottom)) }

func (p *plot) frame(xLabel string) {
	for _, v := range ticks(p.bottom, p.top, 5) {
		p.line(p.x0, p.y(v), p.x0+p.w, p.y(v), gridColour, 1, "")
		p.text(p.x0-8, p.y(v)+4, 12, "end", 400, softColour, percentText(v))
	}
	for _, v := range ticks(p.low, p.high, 8) {
		p.line(p.x(v), p.y0+p.h, p.x(v), p.y0+p.h+5, softColour, 1, "")
		p.text(p.x(v), p.y0+p.h+20, 12, "middle", 400, softColour, trimmed(v, 6))
	}
	p.line(p.x0, p.y0+p.h, p.x0+p.w, p.y0+p.h, inkColour, 1.2, "")
	p.text(p.x0+p.w/2, p.y0+p.h+40, 13, "middle", 700, inkColour, xLabel)
}

// curve is one value and its share of success.
type curve struct {
	x, share, low, high float64
	good                bool
}

func chartOf(title, note, label string, points []curve, target, mark float64) []byte {
	p := &plot{pen: newPen(760, 440, title), x0: 70, y0: 84, w: 660, h: 280, bottom: 0, top: 1}
	p.text(24, 34, 18, "start", 700, inkColour, title)
	p.wrapped(24, 56, 12.5, 16, 112, 400, softColour, note)
	p.low, p.high = 0, 1
	if n := len(points); n > 0 {
		p.low, p.high = points[0].x, points[n-1].x
	}
	if p.low == p.high {
		p.low, p.high = p.low-0.5, p.high+0.5
	}
	p.frame(label)
	if target > 0 {
		p.line(p.x0, p.y(target), p.x0+p.w, p.y(target), pineColour, 1.5, `stroke-dasharray="6 4"`)
		p.text(p.x0+p.w, p.y(target)-6, 12, "end", 400, pineColour, "asked: "+percentText(target))
	}
	if !math.IsNaN(mark) {
		p.line(p.x(mark), p.y0, p.x(mark), p.y0+p.h, inkColour, 1.2, `stroke-dasharray="2 3"`)
		p.text(p.x(mark)+6, p.y0+p.h-8, 12, "start", 700, inkColour, trimmed(mark, 6))
	}
	var d strings.Builder
	for i, c := range points {
		fmt.Fprintf(&d, "%s%s %s", map[bool]string{true: "M", false: "L"}[i == 0], r1(p.x(c.x)), r1(p.y(c.share)))
	}
	p.path(d.String(), "none", inkColour, 2, "")
	for _, c := range points {
		p.upright(p.x(c.x), p.y(c.high), p.y(c.low))
		fill := inkColour
		if !c.good {
			fill = paperColour
		}
		p.path(circlePath(p.x(c.x), p.y(c.share), 4.5), fill, inkColour, 1.8, "")
	}
	return p.bytes()
}

func circlePath(x, y, r float64) string {
	return fmt.Sprintf("M%s %sa%s %s 0 1 0 %s 0a%s %s 0 1 0 %s 0", r1(x-r), r1(y), r1(r), r1(r), r1(2*r), r1(r), r1(r), r1(-2*r))
}

// LimitChart draws the curve that a limit has sampled.
func (s *Subject) LimitChart(l *study.Limit) []byte {
	var points []curve
	for _, c := range l.Curve {
		points = append(points, curve{c.Value, share(c.Successes, c.N), c.Share.Low, c.Share.High, c.Meets})
	}
	return chartOf(s.Scenario.Name+" · limit", l.Text+" Filled: shown to meet the target. Red: "+percentText(l.Plan.Confidence)+" intervals of the runs made.",
		s.label(l.Plan.Axis.Path), points, l.Plan.Target, l.Value)
}

func (s *Subject) label(path string) string {
	f, _, _, err := s.Scenario.Number(path)
	if err != nil {
		return path
	}
	if f.Unit == "" || f.Unit == f.Label {
		return f.Label
	}
	return f.Label + " (" + f.Unit + ")"
}

// SweepChart draws a sweep: a curve of one number, a map of two on a grid, and for
// more the indices of each.
func (s *Subject) SweepChart(x *study.Sweep) []byte {
	target, _ := s.Success()
	switch {
	case x.Success != nil:
		return s.indexChart(x)
	case len(x.Plan.Axes) == 1:
		var points []curve
		for _, c := range x.Cells {
			points = append(points, curve{c.Values[0], share(c.Successes, c.N), c.Share.Low, c.Share.High, c.Share.Low >= target})
		}
		return chartOf(s.Scenario.Name+" · sweep", fmt.Sprintf("Share of %d trials that do what is asked, the same trials at every value. Red: %s intervals.", x.Plan.N, percentText(x.Plan.Confidence)),
			s.label(x.Plan.Axes[0].Path), points, target, math.NaN())
	case len(x.Plan.Axes) == 2 && x.Plan.Layout == study.OnGrid:
		return s.heatMap(x)
	}
	return s.scatter(x)
}

func (s *Subject) heatMap(x *study.Sweep) []byte {
	var xs, ys []float64
	add := func(list []float64, v float64) []float64 {
		for _, w := range list {
			if w == v {
				return list
			}
		}
		return append(list, v)
	}
	for _, c := range x.Cells {
		xs, ys = add(xs, c.Values[0]), add(ys, c.Values[1])
	}
	const x0, y0, w, h = 90, 90, 560, 380
	p := newPen(700, 560, s.Scenario.Name)
	p.text(24, 34, 18, "start", 700, inkColour, s.Scenario.Name+" · sweep")
	p.wrapped(24, 56, 12.5, 16, 100, 400, softColour, fmt.Sprintf("Share of %d trials that do what is asked, the same trials in every cell, with its %s interval.", x.Plan.N, percentText(x.Plan.Confidence)))
	cw, ch := w/float64(max(len(xs), 1)), h/float64(max(len(ys), 1))
	at := func(list []float64, v float64) int {
		for i, u := range list {
			if u == v {
				return i
			}
		}
		return 0
	}
	for _, c := range x.Cells {
		i, j := at(xs, c.Values[0]), at(ys, c.Values[1])
		u := share(c.Successes, c.N)
		left, top := x0+float64(i)*cw, y0+h-float64(j+1)*ch
		p.rect(left, top, cw, ch, shade(u), `shape-rendering="crispEdges"`)
		colour := inkColour
		if u > 0.5 {
			colour = paperColour
		}
		p.text(left+cw/2, top+ch/2+2, 13, "middle", 700, colour, percentText(u))
		p.text(left+cw/2, top+ch/2+16, 10, "middle", 400, colour, percentText(math.Round(100*c.Share.Low)/100)+" – "+percentText(math.Round(100*c.Share.High)/100))
	}
	for i, v := range xs {
		p.text(x0+(float64(i)+0.5)*cw, y0+h+18, 12, "middle", 400, softColour, trimmed(v, 6))
	}
	for j, v := range ys {
		p.text(x0-8, y0+h-(float64(j)+0.5)*ch+4, 12, "end", 400, softColour, trimmed(v, 6))
	}
	p.text(x0+w/2, y0+h+42, 13, "middle", 700, inkColour, s.label(x.Plan.Axes[0].Path))
	fmt.Fprintf(&p.b, `<g transform="translate(28 %s) rotate(-90)">`, r1(y0+h/2))
	p.text(0, 0, 13, "middle", 700, inkColour, s.label(x.Plan.Axes[1].Path))
	p.b.WriteString("</g>\n")
	return p.bytes()
}

// scatter draws each axis of a hypercube against success.
func (s *Subject) scatter(x *study.Sweep) []byte {
	n := len(x.Plan.Axes)
	p := newPen(760, 70+200*float64(n), s.Scenario.Name)
	p.text(24, 34, 18, "start", 700, inkColour, s.Scenario.Name+" · sweep")
	for k, a := range x.Plan.Axes {
		q := &plot{pen: p, x0: 70, y0: 60 + 200*float64(k), w: 660, h: 130, low: a.Low, high: a.High, top: 1}
		q.frame(s.label(a.Path))
		for _, c := range x.Cells {
			p.dot(q.x(c.Values[k]), q.y(share(c.Successes, c.N)), 3, inkColour)
		}
	}
	return p.bytes()
}

func (s *Subject) indexChart(x *study.Sweep) []byte {
	n := len(x.Plan.Axes)
	p := newPen(760, 110+56*float64(n), s.Scenario.Name)
	p.text(24, 34, 18, "start", 700, inkColour, s.Scenario.Name+" · what success depends on")
	p.wrapped(24, 56, 12.5, 16, 112, 400, softColour, "Shares of the variance of success over the settings. Dark: by the number itself; outline: with all it acts together with. Red: "+percentText(x.Plan.Confidence)+" intervals.")
	const x0, w = 270, 440
	at := func(v float64) float64 { return x0 + w*math.Max(0, math.Min(1.1, v))/1.1 }
	for k, a := range x.Plan.Axes {
		y := 96 + 56*float64(k)
		p.text(x0-14, y+20, 13, "end", 700, inkColour, s.label(a.Path))
		p.rect(x0, y, at(x.Success.Total[k])-x0, 16, "none", `stroke="`+inkColour+`" stroke-width="1.4"`)
		p.whisker(at(x.Success.TotalIn[k].Low), at(x.Success.TotalIn[k].High), y+8)
		p.rect(x0, y+19, at(x.Success.First[k])-x0, 16, inkColour, "")
		p.whisker(at(x.Success.FirstIn[k].Low), at(x.Success.FirstIn[k].High), y+27)
	}
	return p.bytes()
}

// TrialsChart draws where the trials went, over the floor: the darker, the more of
// them. Groups of those that missed are ringed in red.
func (s *Subject) TrialsChart(t *study.Trials, g *study.Grid) ([]byte, error) {
	c, err := s.Trials.Base().Config()
	if err != nil {
		return nil, err
	}
	width, height := s.Scenario.Floor.Width, s.Scenario.Floor.Height
	scale := 900 / math.Max(width, height)
	const left, top = 24, 78
	p := newPen(width*scale+2*left, height*scale+top+24, s.Scenario.Name)
	p.text(left, 34, 18, "start", 700, inkColour, s.Scenario.Name+" · trials")
	p.text(left, 58, 13, "start", 400, softColour, fmt.Sprintf("%d of %d trials do what is asked (%s to %s). Dark: where they went. Red: where they missed.",
		t.Successes, t.N, percentText(math.Round(100*t.Share.Low)/100), percentText(math.Round(100*t.Share.High)/100)))
	at := func(v geom.Vec) (x, y float64) { return left + v.X*scale, top + (height-v.Y)*scale }
	fmt.Fprintf(&p.b, `<clipPath id="f"><rect x="%d" y="%d" width="%s" height="%s"/></clipPath><g clip-path="url(#f)">`+"\n", left, top, r1(width*scale), r1(height*scale))
	density, most := g.Density(t.Results), 1
	for _, n := range density {
		most = max(most, n)
	}
	for i, n := range density {
		if n == 0 {
			continue
		}
		// Edges to whole units, so that translucent neighbours neither overlap nor gape.
		x, y := at(geom.Vec{X: float64(i%g.NX) * g.Cell, Y: float64(i/g.NX+1) * g.Cell})
		x2, y2 := at(geom.Vec{X: float64(i%g.NX+1) * g.Cell, Y: float64(i/g.NX) * g.Cell})
		x, y, x2, y2 = math.Round(x), math.Round(y), math.Round(x2), math.Round(y2)
		p.rect(x, y, x2-x, y2-y, blueColour, fmt.Sprintf(`fill-opacity="%s" shape-rendering="crispEdges"`, trimmed(0.08+0.8*math.Sqrt(float64(n)/float64(most)), 2)))
	}
	for _, o := range c.Floor.Solids {
		x, y := at(o.Points[0])
		if o.Kind == floor.Disc {
			p.dot(x, y, o.Radius*scale, "#2d3542")
			continue
		}
		d := fmt.Sprintf("M%s %s", r1(x), r1(y))
		for _, q := range o.Points[1:] {
			x, y := at(q)
			d += fmt.Sprintf("L%s %s", r1(x), r1(y))
		}
		if o.Kind == floor.Polygon {
			p.path(d+"Z", "#2d3542", "none", 0, "")
		} else {
			p.path(d, "none", "#2d3542", 3, `stroke-linecap="round"`)
		}
	}
	p.b.WriteString("</g>\n")
	for i, gr := range t.Groups {
		if i == 12 {
			break
		}
		x, y := at(gr.At)
		p.path(circlePath(x, y, 6+2*math.Sqrt(float64(gr.Count))), "none", redColour, 2, "")
		p.b.WriteString(`<g stroke="` + paperColour + `" stroke-width="3" paint-order="stroke" stroke-linejoin="round">`)
		p.text(x+10, y-8, 12, "start", 700, redColour, fmt.Sprintf("%d %s", gr.Count, gr.Why))
		p.b.WriteString("</g>\n")
	}
	p.rect(left, top, width*scale, height*scale, "none", `stroke="`+inkColour+`" stroke-width="1"`)
	return p.bytes(), nil
}
