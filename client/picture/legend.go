package picture

import (
	"slices"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Measures of the legend in points.
const (
	keySwatch = 26.0 // width of a sample
	keyGap    = 5.0  // from sample to words
	keyApart  = 18.0 // between entries
	keyRow    = 13.0 // height of a row
)

// key is one entry of the legend with its place on the sheet, from the top left corner.
type key struct {
	layer
	words   string
	x, down vg.Length
}

// arrange sets the entries, topmost layer first, in rows of the given width and returns the height they need.
func arrange(layers []layer, width vg.Length) (keys []key, height vg.Length) {
	style := sans(keySize, ink)
	var x, down vg.Length
	for _, l := range slices.Backward(layers) {
		if l.entry() == "" {
			continue
		}
		words := fit(style, l.entry(), width-keySwatch-keyGap)
		size := keySwatch + keyGap + style.Width(words)
		if x > 0 && x+size > width {
			x, down = 0, down+keyRow
		}
		keys = append(keys, key{l, words, x, down})
		x += size + keyApart
	}
	if keys == nil {
		return nil, 0
	}
	return keys, down + keyRow
}

// drawLegend letters the entries at the bottom of c and returns what is left above them.
func drawLegend(c draw.Canvas, layers []layer) draw.Canvas {
	keys, height := arrange(layers, c.Size().X)
	if height == 0 {
		return c
	}
	for _, k := range keys {
		k.draw(c, vg.Point{X: c.Min.X + k.x, Y: c.Min.Y + height - k.down - keyRow})
	}
	return draw.Crop(c, 0, 0, height+keyRow/2, 0)
}

// draw puts the sample and its words into the row whose lower left corner is p.
func (k key) draw(c draw.Canvas, p vg.Point) {
	sample := vg.Rectangle{Min: p, Max: vg.Point{X: p.X + keySwatch, Y: p.Y + keyRow}}
	k.swatch(draw.Canvas{Canvas: c, Rectangle: sample})
	at := vg.Point{X: sample.Max.X + keyGap, Y: p.Y + keyRow/2}
	write(c, sans(keySize, ink), at, k.words)
}
