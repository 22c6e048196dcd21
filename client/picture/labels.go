package picture

import (
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// labels writes what each restriction is beside its bar.
type labels struct{ items []bar }

const (
	labelGap   = 2.0 // between bar and label, pt
	labelPad   = 1.5 // of pale ground around the letters, pt
	labelTries = 12  // rows tried, alternately above and below, before a label may overlap
)

// labelLayers returns the labels of all visible restrictions.
func (d Diagram) labelLayers(w window) []layer {
	var named []bar
	for _, r := range d.Restrictions {
		if r.Label != "" {
			named = w.add(named, r.Place, r.Start, r.End, r.Label)
		}
	}
	return []layer{labels{named}}
}

// Plot gives each label the first free row next to its bar.
func (l labels) Plot(c draw.Canvas, p *plot.Plot) {
	pl := planeOf(c, p)
	style := sans(nameSize, ink)
	var taken []vg.Rectangle
	for _, b := range l.items {
		taken = append(taken, b.box(pl, restrictionThick))
	}
	for _, b := range l.items {
		words := fit(style, b.label, c.Size().X/2)
		size := vg.Point{X: style.Width(words) + 2*labelPad, Y: style.Height(words) + labelPad}
		box := b.room(pl, size, taken)
		fillBox(c, box, labelBack)
		write(c, style, vg.Point{X: box.Min.X + labelPad, Y: (box.Min.Y + box.Max.Y) / 2}, words)
		taken = append(taken, box)
	}
}

func (l labels) entry() string      { return "" }
func (l labels) swatch(draw.Canvas) {}

// room finds a box of the given size near the bar, inside the plane and clear of the
// taken ones; failing that, the first one above the bar.
func (b bar) room(p plane, size vg.Point, taken []vg.Rectangle) vg.Rectangle {
	self := b.box(p, restrictionThick)
	left := max(p.Min.X, min(self.Min.X, p.Max.X-size.X))
	first := boxAt(left, self.Max.Y+labelGap, size)
	for try := range labelTries {
		step := vg.Length(try/2) * (size.Y + labelGap)
		low := self.Max.Y + labelGap + step
		if try%2 == 1 {
			low = self.Min.Y - labelGap - size.Y - step
		}
		box := boxAt(left, low, size)
		if low >= p.Min.Y && low+size.Y <= p.Max.Y && !meetsAny(box, taken) {
			return box
		}
	}
	return first
}

func boxAt(x, y vg.Length, size vg.Point) vg.Rectangle {
	return vg.Rectangle{Min: vg.Point{X: x, Y: y}, Max: vg.Point{X: x + size.X, Y: y + size.Y}}
}

func meetsAny(box vg.Rectangle, others []vg.Rectangle) bool {
	for _, o := range others {
		apart := box.Max.X <= o.Min.X || o.Max.X <= box.Min.X || box.Max.Y <= o.Min.Y || o.Max.Y <= box.Min.Y
		if !apart {
			return true
		}
	}
	return false
}
