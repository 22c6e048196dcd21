package picture

import (
	"image/color"
	"math"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// The inks of the sheet. Lines are dark or carry a pale casing, so that each stands out
// from both ends of the colour field.
var (
	ink       = color.NRGBA{R: 0x16, G: 0x18, B: 0x1d, A: 255} // shocks, axes, words
	softInk   = color.NRGBA{R: 0x55, G: 0x5b, B: 0x64, A: 255} // subtitle, footnote, leaders
	nodeInk   = color.NRGBA{R: 0x3d, G: 0x42, B: 0x4a, A: 150} // node places
	pathInk   = color.NRGBA{R: 0x2c, G: 0x2f, B: 0x36, A: 210} // trajectories
	waveInk   = color.NRGBA{R: 0x56, G: 0x5f, B: 0x6b, A: 225} // contacts, fan edges
	tailInk   = color.NRGBA{R: 0xd4, G: 0x45, B: 0x00, A: 255} // queue tails
	redInk    = color.NRGBA{R: 0xa5, G: 0x0f, B: 0x2d, A: 255} // reds
	closedInk = color.NRGBA{R: 0x4a, G: 0x4d, B: 0x52, A: 255} // closures, hatching
	paper     = color.NRGBA{R: 255, G: 255, B: 255, A: 255}
	casingInk = color.NRGBA{R: 255, G: 255, B: 255, A: 215}
	labelBack = color.NRGBA{R: 255, G: 255, B: 255, A: 205}
)

// stroke is a line with an optional pale casing beneath it.
type stroke struct {
	draw.LineStyle
	casing vg.Length // width of the casing, 0 for none
}

var (
	shockStroke   = solid(ink, 1.5, 2.9)
	tailStroke    = dashed(tailInk, 2.7, 4, 6.5, 4)
	pathStroke    = solid(pathInk, 0.55, 0)
	contactStroke = dashed(waveInk, 0.6, 1.5, 4, 1.4)
	edgeStroke    = dashed(waveInk, 0.5, 0, 1.2, 1.3)
	nodeStroke    = dashed(nodeInk, 0.45, 0, 5, 2, 1, 2)
	frameStroke   = solid(ink, 0.6, 0)
	leaderStroke  = solid(softInk, 0.45, 0)
	hatchStroke   = solid(closedInk, 0.7, 0)
)

func solid(c color.Color, width, casing vg.Length) stroke {
	return stroke{LineStyle: draw.LineStyle{Color: c, Width: width}, casing: casing}
}

func dashed(c color.Color, width, casing vg.Length, dashes ...vg.Length) stroke {
	s := solid(c, width, casing)
	s.Dashes = dashes
	return s
}

// faded returns s more transparent when it is drawn very often, so that a dense fan
// tints the field instead of hiding it.
func (s stroke) faded(times int) stroke {
	const crowd = 60 // lines that may be drawn at full strength
	if times <= crowd {
		return s
	}
	c := color.NRGBAModel.Convert(s.Color).(color.NRGBA)
	c.A = uint8(math.Max(70, float64(c.A)*math.Sqrt(crowd/float64(times))))
	s.Color = c
	return s
}

// shifted returns s with its dashes moved along by a share of their period that differs from
// line to line, so that the dashes of a fan do not line up into rings. Multiples of
// the golden section, without their whole part, fill a period most evenly.
func (s stroke) shifted(line int) stroke {
	period := vg.Length(0)
	for _, d := range s.Dashes {
		period += d
	}
	_, part := math.Modf(float64(line) / math.Phi)
	s.DashOffs = period * vg.Length(part)
	return s
}

// draw lays the line over its casing.
func (s stroke) draw(c draw.Canvas, line []vg.Point) {
	s.under(c, line)
	c.StrokeLines(s.LineStyle, line)
}

// under draws the casing alone.
func (s stroke) under(c draw.Canvas, line []vg.Point) {
	if s.casing > 0 {
		c.StrokeLines(draw.LineStyle{Color: casingInk, Width: s.casing}, line)
	}
}

// Sizes of lettering in points.
const (
	titleSize = 13
	subSize   = 9.5
	axisSize  = 9.5
	tickSize  = 8.5
	keySize   = 8.5
	nameSize  = 8.5
	noteSize  = 7.5
)

// sans is the upright face of the sheet, left-aligned on its vertical middle.
func sans(size vg.Length, c color.Color) text.Style {
	return text.Style{
		Color:   c,
		Font:    font.Font{Typeface: "Liberation", Variant: "Sans", Size: size},
		XAlign:  draw.XLeft,
		YAlign:  draw.YCenter,
		Handler: plot.DefaultTextHandler,
	}
}

func bold(size vg.Length, c color.Color) text.Style {
	s := sans(size, c)
	s.Font.Weight = xfont.WeightBold
	return s
}

func aligned(s text.Style, x draw.XAlignment, y draw.YAlignment) text.Style {
	s.XAlign, s.YAlign = x, y
	return s
}

// write puts one line of text with its middle (or top, or bottom, by the style) at p.
// gonum's anchor sits one descent below the box of the letters; write makes up for that.
func write(c draw.Canvas, s text.Style, p vg.Point, words string) {
	if s.Rotation == 0 {
		p.Y += s.FontExtents().Descent
	}
	c.FillText(s, p, words)
}

// fit cuts words to the width, ending in an ellipsis where something is left out.
func fit(s text.Style, words string, width vg.Length) string {
	if s.Width(words) <= width {
		return words
	}
	letters := []rune(words)
	for n := len(letters) - 1; n > 0; n-- {
		if cut := string(letters[:n]) + "…"; s.Width(cut) <= width {
			return cut
		}
	}
	return "…"
}
