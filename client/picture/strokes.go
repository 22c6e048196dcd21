package picture

import (
	"slices"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// layer is one kind of mark on the time-space plane.
type layer interface {
	plot.Plotter
	// entry is its line in the legend; empty keeps it out of the legend.
	entry() string
	// swatch draws a sample of the mark into a small box.
	swatch(draw.Canvas)
}

// plane turns seconds and metres into places on the sheet.
type plane struct {
	draw.Canvas
	x, y func(float64) vg.Length
}

func planeOf(c draw.Canvas, p *plot.Plot) plane {
	x, y := p.Transforms(&c)
	return plane{c, x, y}
}

func (p plane) at(e Point) vg.Point { return vg.Point{X: p.x(e.Time), Y: p.y(e.Place)} }

func (p plane) line(path Path) []vg.Point {
	pts := make([]vg.Point, len(path))
	for i, e := range path {
		pts[i] = p.at(e)
	}
	return pts
}

// strokes draws polylines of one kind.
type strokes struct {
	name  string
	style stroke
	paths []Path
}

// Plot draws the lines without their casings.
func (s strokes) Plot(c draw.Canvas, p *plot.Plot) {
	pl := planeOf(c, p)
	style := s.style.faded(len(s.paths))
	for i, path := range s.paths {
		c.StrokeLines(style.shifted(i).LineStyle, pl.line(path))
	}
}

func (s strokes) entry() string { return s.name }

func (s strokes) swatch(c draw.Canvas) {
	y := c.Center().Y
	s.style.faded(len(s.paths)).draw(c, []vg.Point{{X: c.Min.X, Y: y}, {X: c.Max.X, Y: y}})
}

// casings draws what lies under lines. It is a layer of its own below all of them, so that
// no casing hides a neighbour: where a tail runs along a shock, the dark line shows in
// the gaps of the dashes.
type casings struct{ strokes }

// Plot draws the casings without their lines.
func (s casings) Plot(c draw.Canvas, p *plot.Plot) {
	pl := planeOf(c, p)
	style := s.style.faded(len(s.paths))
	for _, path := range s.paths {
		style.under(c, pl.line(path))
	}
}

func (s casings) entry() string { return "" }

// lineLayers returns the casings and then the lines of each kind that is visible, least
// weighty first.
func (d Diagram) lineLayers(w window) (list []layer) {
	kinds := []strokes{
		{"Fan edge", edgeStroke, w.clipAll(d.fronts(Edge))},
		{"Contact", contactStroke, w.clipAll(d.fronts(Contact))},
		{"Vehicle trajectory", pathStroke, w.clipAll(d.Trajectories)},
		{"Shock", shockStroke, w.clipAll(d.fronts(Shock))},
		{d.tailName(), tailStroke, w.clipAll(d.tails())},
	}
	kinds = slices.DeleteFunc(kinds, func(s strokes) bool { return len(s.paths) == 0 })
	for _, s := range kinds {
		list = append(list, casings{s})
	}
	for _, s := range kinds {
		list = append(list, s)
	}
	return list
}

func (d Diagram) fronts(kind FrontKind) []Path {
	var paths []Path
	for _, f := range d.Fronts {
		if f.Kind == kind {
			paths = append(paths, f.Path)
		}
	}
	return paths
}

func (d Diagram) tails() []Path {
	var paths []Path
	for _, t := range d.Tails {
		paths = append(paths, t.Path)
	}
	return paths
}

// tailName names the node in the legend when all the tails belong to one.
func (d Diagram) tailName() string {
	for _, t := range d.Tails {
		if t.Node == "" || t.Node != d.Tails[0].Node {
			return "Tail of queue"
		}
	}
	if len(d.Tails) == 0 {
		return "Tail of queue"
	}
	return "Tail of queue at " + d.Tails[0].Node
}
