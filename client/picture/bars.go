package picture

import (
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Thickness of the bars in points.
const (
	redThick         = 4.2
	restrictionThick = 7
	barCasing        = 0.8 // pale border on each side
	hatchPitch       = 3.2 // between hatching lines, along the bar
)

// bar is a period at one place, already cut to the window.
type bar struct {
	place, start, end float64 // m, s, s
	label             string
}

// box is the bar on the sheet, moved inward where it would cross the frame.
func (b bar) box(p plane, thick vg.Length) vg.Rectangle {
	low := p.y(b.place) - thick/2
	low = min(max(low, p.Min.Y), p.Max.Y-thick)
	return vg.Rectangle{
		Min: vg.Point{X: p.x(b.start), Y: low},
		Max: vg.Point{X: p.x(b.end), Y: low + thick},
	}
}

// bars draws periods of one kind.
type bars struct {
	name  string
	thick vg.Length
	fill  func(draw.Canvas)
	items []bar
}

// Plot fills one box for each period.
func (b bars) Plot(c draw.Canvas, p *plot.Plot) {
	pl := planeOf(c, p)
	for _, item := range b.items {
		b.fill(draw.Canvas{Canvas: c, Rectangle: item.box(pl, b.thick)})
	}
}

func (b bars) entry() string { return b.name }

func (b bars) swatch(c draw.Canvas) {
	mid := c.Center().Y
	c.Min.Y, c.Max.Y = mid-b.thick/2, mid+b.thick/2
	b.fill(c)
}

// barLayers returns one layer for each kind of bar that is visible.
func (d Diagram) barLayers(w window) []layer {
	kinds := []bars{
		{"Reduced capacity", restrictionThick, fillHatched, w.restrictions(d.Restrictions, false)},
		{"Closed", restrictionThick, fillClosed, w.restrictions(d.Restrictions, true)},
		{"Red at stop line", redThick, fillRed, w.reds(d.Reds)},
	}
	var list []layer
	for _, k := range kinds {
		if len(k.items) > 0 {
			list = append(list, k)
		}
	}
	return list
}

func (w window) reds(reds []Red) (items []bar) {
	for _, r := range reds {
		items = w.add(items, r.Place, r.Start, r.End, "")
	}
	return items
}

func (w window) restrictions(list []Restriction, closed bool) (items []bar) {
	for _, r := range list {
		if r.Closed == closed {
			items = w.add(items, r.Place, r.Start, r.End, r.Label)
		}
	}
	return items
}

// add appends the visible part of a period.
func (w window) add(items []bar, place, start, end float64, label string) []bar {
	start, end, visible := w.period(start, end)
	if !visible || !w.holds(place) {
		return items
	}
	return append(items, bar{place, start, end, label})
}

func fillRed(c draw.Canvas) {
	cased := c.Rectangle
	cased.Min.Y -= barCasing
	cased.Max.Y += barCasing
	fillBox(c, cased, casingInk)
	fillBox(c, c.Rectangle, redInk)
}

func fillClosed(c draw.Canvas) {
	fillBox(c, c.Rectangle, closedInk)
	frame(c)
}

// fillHatched draws a pale box with rising diagonals, all of them one path.
func fillHatched(c draw.Canvas) {
	fillBox(c, c.Rectangle, labelBack)
	height := c.Max.Y - c.Min.Y
	var hatch vg.Path
	for x := c.Min.X - height + hatchPitch/2; x < c.Max.X; x += hatchPitch {
		diagonal := []vg.Point{{X: x, Y: c.Min.Y}, {X: x + height, Y: c.Max.Y}}
		for _, part := range c.ClipLinesX(diagonal) {
			hatch.Move(part[0])
			hatch.Line(part[1])
		}
	}
	c.SetLineStyle(hatchStroke.LineStyle)
	c.Stroke(hatch)
	frame(c)
}

func fillBox(c draw.Canvas, box vg.Rectangle, ink interface {
	RGBA() (r, g, b, a uint32)
}) {
	c.SetColor(ink)
	c.Fill(box.Path())
}

// frame outlines the canvas.
func frame(c draw.Canvas) {
	c.SetLineStyle(frameStroke.LineStyle)
	c.Stroke(c.Rectangle.Path())
}
