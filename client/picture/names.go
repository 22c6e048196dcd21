package picture

import (
	"fmt"
	"slices"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

const (
	nameStub   = 4.0                      // straight start of a leader, pt
	nameSlope  = 9.0                      // its slanted part, pt
	nameLead   = nameStub + nameSlope + 3 // from the frame to the first letter, pt
	nameWidest = 112                      // of a name, pt; longer ones are cut
	namePitch  = nameSize * 1.15          // least distance of two names, pt
)

// nodes draws a fine line across the plane at each node.
type nodes struct{ places []float64 }

// Plot draws the lines from border to border.
func (n nodes) Plot(c draw.Canvas, p *plot.Plot) {
	pl := planeOf(c, p)
	for _, x := range n.places {
		nodeStroke.draw(c, []vg.Point{{X: c.Min.X, Y: pl.y(x)}, {X: c.Max.X, Y: pl.y(x)}})
	}
}

func (n nodes) entry() string      { return "" }
func (n nodes) swatch(draw.Canvas) {}

func nodeLayers(visible []Node) []layer {
	var places []float64
	for _, n := range visible {
		places = append(places, n.Place)
	}
	return []layer{nodes{places}}
}

// visibleNodes are those inside the window, upstream first.
func (d Diagram) visibleNodes(w window) []Node {
	var list []Node
	for _, n := range d.Nodes {
		if w.holds(n.Place) {
			list = append(list, n)
		}
	}
	slices.SortStableFunc(list, func(a, b Node) int {
		switch {
		case a.Place < b.Place:
			return -1
		case a.Place > b.Place:
			return 1
		}
		return 0
	})
	return list
}

// nameColumn is the width that the names need at the right margin.
func nameColumn(list []Node) vg.Length {
	style := sans(nameSize, ink)
	widest := vg.Length(0)
	for _, n := range list {
		widest = max(widest, style.Width(fit(style, n.Name, nameWidest)))
	}
	if widest == 0 {
		return 0
	}
	return nameLead + widest
}

// drawNames letters the nodes along the right-hand border of the data and leads from each
// place to its name.
func drawNames(data plane, list []Node) {
	list, left := thin(list, int(data.Size().Y/namePitch))
	wanted := make([]vg.Length, len(list))
	for i, n := range list {
		wanted[i] = data.y(n.Place)
	}
	given := spread(wanted, namePitch, data.Min.Y, data.Max.Y)
	for i, n := range list {
		drawName(data, n.Name, wanted[i], given[i])
	}
	if left > 0 {
		note := fmt.Sprintf("%d more nodes", left)
		write(data.Canvas, sans(noteSize, softInk), vg.Point{X: data.Max.X + nameLead, Y: data.Max.Y + namePitch}, note)
	}
}

// drawName draws a leader from the border at height from to the name at height to.
func drawName(data plane, name string, from, to vg.Length) {
	x := data.Max.X
	leaderStroke.draw(data.Canvas, []vg.Point{
		{X: x, Y: from}, {X: x + nameStub, Y: from}, {X: x + nameStub + nameSlope, Y: to},
	})
	style := sans(nameSize, ink)
	write(data.Canvas, style, vg.Point{X: x + nameLead, Y: to}, fit(style, name, nameWidest))
}

// thin keeps at most room nodes that have a name, evenly chosen, and counts those left out.
func thin(list []Node, room int) (kept []Node, left int) {
	named := slices.DeleteFunc(slices.Clone(list), func(n Node) bool { return n.Name == "" })
	if len(named) <= room {
		return named, 0
	}
	for i := range room {
		kept = append(kept, named[i*len(named)/room])
	}
	return kept, len(named) - room
}

// spread moves rising positions apart to at least the pitch, each as little as possible in
// the sum of squares, and keeps them within [low, high] when there is room. Method: pool
// neighbours that are too close and centre each pool on the mean of what its members want.
func spread(wanted []vg.Length, pitch, low, high vg.Length) []vg.Length {
	var pools []pool
	for i, y := range wanted {
		p := pool{sum: y - vg.Length(i)*pitch, n: 1}
		for len(pools) > 0 && pools[len(pools)-1].mean() >= p.mean() {
			last := pools[len(pools)-1]
			p = pool{p.sum + last.sum, p.n + last.n}
			pools = pools[:len(pools)-1]
		}
		pools = append(pools, p)
	}
	var given []vg.Length
	ceiling := high - vg.Length(len(wanted)-1)*pitch
	for _, p := range pools {
		base := max(low, min(p.mean(), ceiling))
		for range p.n {
			given = append(given, base+vg.Length(len(given))*pitch)
		}
	}
	return given
}

// pool is a run of names set at the pitch; its members want sum/n in coordinates from
// which the pitch has been taken out.
type pool struct {
	sum vg.Length
	n   int
}

func (p pool) mean() vg.Length { return p.sum / vg.Length(p.n) }
