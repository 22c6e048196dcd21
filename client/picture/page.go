package picture

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// The sheet fits across an A4 page in landscape.
const (
	sheetWidth  = 24 * vg.Centimeter
	sheetHeight = 15 * vg.Centimeter
	sheetMargin = 14 // pt, on all sides
)

const quarterTurn = math.Pi / 2 // reads from bottom to top

// footnote stands on every picture.
const footnote = "Advisory forecast by roadswell from a kinematic-wave model. " +
	"It informs decisions; it must not drive signals, signs or barriers directly."

// draw lays out the whole sheet: titles on top, the footnote and the legend at the bottom,
// the plane in the middle with node names and the colour bar to its right.
func (d Diagram) draw(c draw.Canvas) {
	fillBox(c, c.Rectangle, paper)
	w := d.window()
	visible := d.visibleNodes(w)
	layers := d.layers(w, visible)

	rest := draw.Crop(c, sheetMargin, -sheetMargin, sheetMargin, -sheetMargin)
	rest = d.drawTitles(rest)
	rest = drawFootnote(rest)
	rest = drawLegend(rest, layers)
	d.drawPlane(rest, layers, visible)
}

// layers lists everything on the plane, bottom first. The legend reads from the top down.
func (d Diagram) layers(w window, visible []Node) []layer {
	list := d.fieldLayers(w)
	list = append(list, nodeLayers(visible)...)
	list = append(list, d.lineLayers(w)...)
	list = append(list, d.barLayers(w)...)
	return append(list, d.labelLayers(w)...)
}

func (d Diagram) drawTitles(c draw.Canvas) draw.Canvas {
	c = drawHeading(c, aligned(bold(titleSize, ink), draw.XLeft, draw.YTop), d.Title)
	return drawHeading(c, aligned(sans(subSize, softInk), draw.XLeft, draw.YTop), d.Subtitle)
}

// drawHeading writes one line at the top of c and returns what is left below it.
func drawHeading(c draw.Canvas, style draw.TextStyle, words string) draw.Canvas {
	if words == "" {
		return c
	}
	words = fit(style, words, c.Size().X)
	write(c, style, vg.Point{X: c.Min.X, Y: c.Max.Y}, words)
	return draw.Crop(c, 0, 0, 0, -style.Height(words)-4)
}

func drawFootnote(c draw.Canvas) draw.Canvas {
	style := aligned(sans(noteSize, softInk), draw.XLeft, draw.YBottom)
	write(c, style, c.Min, fit(style, footnote, c.Size().X))
	return draw.Crop(c, 0, 0, style.Height(footnote)+8, 0)
}

// drawPlane draws axes and layers and what stands to the right of them.
func (d Diagram) drawPlane(c draw.Canvas, layers []layer, visible []Node) {
	names, scale := nameColumn(visible), vg.Length(0)
	if len(d.Density.Times) > 0 {
		scale = scaleSpace
	}
	p := d.axes()
	for _, l := range layers {
		p.Add(l)
	}
	c = draw.Crop(c, 0, 0, 0, -4)
	left := draw.Crop(c, 0, -names-scale-10, 0, 0)
	p.Draw(left)
	data := p.DataCanvas(left)
	frame(data)
	drawNames(planeOf(data, p), visible)
	if scale > 0 {
		column := data.Rectangle
		column.Min.X, column.Max.X = c.Max.X-scale, c.Max.X
		d.Density.drawScale(draw.Canvas{Canvas: c, Rectangle: column})
	}
}

// axes returns an empty plot with the two axes; its coordinates are s and m.
func (d Diagram) axes() *plot.Plot {
	p := plot.New()
	p.BackgroundColor = nil
	p.X.Min, p.X.Max = 0, d.Horizon
	p.Y.Min, p.Y.Max = d.Entry, d.Exit
	ticks, caption := timeAxis(d.Horizon)
	letter(&p.X, ticks, caption)
	ticks, caption = placeAxis(d.Entry, d.Exit)
	letter(&p.Y, ticks, caption)
	return p
}

// letter sets the captions, marks and faces of an axis, keeping gonum's alignments.
func letter(a *plot.Axis, ticks []plot.Tick, caption string) {
	a.Padding = 0
	a.LineStyle.Width = 0 // the frame stands for it
	a.Label.Text = caption
	a.Label.Padding = 4
	a.Label.TextStyle.Font = sans(axisSize, ink).Font
	a.Label.TextStyle.Color = ink
	a.Tick.Marker = plot.ConstantTicks(ticks)
	a.Tick.Length = majorTick
	a.Tick.LineStyle = frameStroke.LineStyle
	a.Tick.Label.Font = sans(tickSize, ink).Font
	a.Tick.Label.Color = ink
}
