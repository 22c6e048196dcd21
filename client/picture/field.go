package picture

import (
	"image"
	"sort"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg/draw"
)

// The field is painted at this resolution whatever the grid, so that its size in the file is
// bounded and its pixels are those of the printed picture.
const (
	fieldColumns = 1400
	fieldRows    = 760
)

// field paints the density.
type field struct {
	Field
	window
	image *image.Paletted
}

// fieldLayers returns the colour field, or nothing when there are no samples.
func (d Diagram) fieldLayers(w window) []layer {
	if len(d.Density.Times) == 0 {
		return nil
	}
	return []layer{field{d.Density, w, d.Density.raster(w)}}
}

// Plot stretches the raster over the whole window.
func (f field) Plot(c draw.Canvas, _ *plot.Plot) { c.DrawImage(c.Rectangle, f.image) }

func (f field) entry() string      { return "" }
func (f field) swatch(draw.Canvas) {}

// raster paints each pixel of the window with the colour of its nearest sample.
func (g Field) raster(w window) *image.Paletted {
	columns := nearest(g.Times, centres(w.t0, w.t1, fieldColumns))
	rows := nearest(g.Places, centres(w.x0, w.x1, fieldRows))
	img := image.NewPaletted(image.Rect(0, 0, fieldColumns, fieldRows), ramp())
	top := g.top()
	for r, i := range rows {
		line := img.Pix[(fieldRows-1-r)*img.Stride:]
		for c, j := range columns {
			line[c] = g.shade(i, j, top)
		}
	}
	return img
}

// outside marks pixels that no sample reaches; they stay as light as an empty road.
const outside = -1

func (g Field) shade(i, j int, top float64) uint8 {
	if i == outside || j == outside {
		return 0
	}
	return rampIndex(g.Values[i][j] / top)
}

// nearest gives for each position the index of its nearest sample, or outside when that
// lies more than half a grid step beyond the ends. One sample reaches everywhere.
func nearest(samples, positions []float64) []int {
	index := make([]int, len(positions))
	for k, x := range positions {
		index[k] = nearestOne(samples, x)
	}
	return index
}

func nearestOne(s []float64, x float64) int {
	last := len(s) - 1
	switch {
	case last == 0:
		return 0
	case x < s[0]-(s[1]-s[0])/2 || x > s[last]+(s[last]-s[last-1])/2:
		return outside
	}
	i := min(sort.SearchFloat64s(s, x), last)
	if i > 0 && x-s[i-1] < s[i]-x {
		i--
	}
	return i
}

// top is the density of the darkest colour in veh/km; never 0.
func (g Field) top() float64 {
	if g.Maximum > 0 {
		return g.Maximum
	}
	if most := g.largest(); most > 0 {
		return most
	}
	return 1
}

func (g Field) largest() float64 {
	most := 0.0
	for _, row := range g.Values {
		for _, v := range row {
			most = max(most, v)
		}
	}
	return most
}
