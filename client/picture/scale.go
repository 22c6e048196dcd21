package picture

import (
	"fmt"
	"image"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// scaleName is the caption of the colour bar.
func (g Field) scaleName() string {
	const caption = "Density, all lanes (veh/km)"
	const slack = 1 + 1e-6 // rounding of unit conversions in the caller
	if g.largest() > g.top()*slack {
		return fmt.Sprintf("%s; darkest: %.4g and more", caption, g.top())
	}
	return caption
}

// The colour bar stands to the right of the node names.
const (
	scaleWidth = 11 // of the bar itself, pt
	scaleSpace = 58 // with its ticks and caption, pt
)

// drawScale draws the colour bar into the right part of the column, level with the data.
func (g Field) drawScale(c draw.Canvas) {
	bar := c
	bar.Max.X = bar.Min.X + scaleWidth
	bar.DrawImage(bar.Rectangle, rampImage())
	frame(bar)
	ruler := g.drawScaleTicks(bar)
	style := aligned(sans(axisSize, ink), draw.XCenter, draw.YTop)
	style.Rotation = quarterTurn
	at := vg.Point{X: ruler + 4, Y: bar.Center().Y}
	c.FillText(style, at, fit(style, g.scaleName(), bar.Size().Y))
}

// drawScaleTicks letters the bar and returns the right end of the widest number.
func (g Field) drawScaleTicks(bar draw.Canvas) (right vg.Length) {
	style := sans(tickSize, ink)
	right = bar.Max.X
	for _, t := range decimalTicks(0, g.top(), 1, 8) {
		if t.IsMinor() {
			continue
		}
		y := bar.Y(t.Value / g.top())
		bar.StrokeLine2(frameStroke.LineStyle, bar.Max.X, y, bar.Max.X+majorTick, y)
		write(bar, style, vg.Point{X: bar.Max.X + majorTick + 2, Y: y}, t.Label)
		right = max(right, bar.Max.X+majorTick+2+style.Width(t.Label))
	}
	return right
}

// rampImage is the whole ramp, lowest density at the bottom. It is several pixels wide
// because viewers blur the borders of a picture of one.
func rampImage() image.Image {
	const wide = 8
	img := image.NewPaletted(image.Rect(0, 0, wide, rampSteps), ramp())
	for i := range img.Pix {
		img.Pix[i] = uint8(rampSteps - 1 - i/wide)
	}
	return img
}
