package picture

import (
	"image/color"
	"math"
	"sync"
)

// rampSteps is the number of colours of the ramp: as many as one byte of a palette can name.
const rampSteps = 256

// lab is a colour in CIE L*a*b* (D65): lightness 0-100 and two opponent axes. Equal
// distances in it look about equally different.
type lab struct{ l, a, b float64 }

// rampCourse is the course of the ramp: lightness falls all the way from paper white to a
// deep blue, and the hue passes from warm white through sea green. The
// dark end stays light enough for black lines to stand out on it.
var rampCourse = []lab{
	{97.5, -1, 5},
	{89, -16, 10},
	{79, -24, -2},
	{68, -18, -18},
	{56, -2, -34},
	{45, 14, -46},
}

// ramp holds the colours of [Ramp], worked out once.
var ramp = sync.OnceValue(func() color.Palette {
	course := evenSteps(smooth(rampCourse, 4000), rampSteps)
	colours := make(color.Palette, len(course))
	for i, c := range course {
		colours[i] = c.rgb()
	}
	return colours
})

// Ramp returns the colour of a density given as a share of the darkest one: 0 is the
// empty road and nearly white, 1 is the darkest. Shares outside [0, 1] get the nearer end.
//
// Equal steps of share are equal steps of colour difference (CIE 1976), and lightness falls
// with every step, so that the order of densities survives colour blindness and grey print.
func Ramp(share float64) color.Color { return ramp()[rampIndex(share)] }

func rampIndex(share float64) uint8 {
	if !(share > 0) {
		return 0
	}
	return uint8(math.Round(math.Min(share, 1) * (rampSteps - 1)))
}

// smooth runs a uniform Catmull-Rom curve through the knots and returns n points of it.
func smooth(knots []lab, n int) []lab {
	last := len(knots) - 1
	at := func(i int) lab { return knots[min(max(i, 0), last)] }
	curve := make([]lab, n)
	for i := range curve {
		u := float64(i) / float64(n-1) * float64(last)
		k := min(int(u), last-1)
		curve[i] = catmullRom(at(k-1), at(k), at(k+1), at(k+2), u-float64(k))
	}
	return curve
}

func catmullRom(p, q, r, s lab, u float64) lab {
	one := func(p, q, r, s float64) float64 {
		return q + u/2*(r-p+u*(2*p-5*q+4*r-s+u*(3*(q-r)+s-p)))
	}
	return lab{one(p.l, q.l, r.l, s.l), one(p.a, q.a, r.a, s.a), one(p.b, q.b, r.b, s.b)}
}

// evenSteps picks n points of the curve at equal distances along it.
func evenSteps(curve []lab, n int) []lab {
	along := make([]float64, len(curve))
	for i := 1; i < len(curve); i++ {
		along[i] = along[i-1] + curve[i].distance(curve[i-1])
	}
	picked := make([]lab, n)
	j := 0
	for i := range picked {
		want := along[len(along)-1] * float64(i) / float64(n-1)
		for j < len(curve)-1 && along[j] < want {
			j++
		}
		picked[i] = curve[j]
	}
	return picked
}

// distance is the CIE 1976 colour difference.
func (c lab) distance(d lab) float64 {
	return math.Hypot(math.Hypot(c.l-d.l, c.a-d.a), c.b-d.b)
}

// rgb converts to sRGB. Formula: IEC 61966-2-1 for the D65 white point.
func (c lab) rgb() color.NRGBA {
	fy := (c.l + 16) / 116
	x := 0.95047 * labInverse(fy+c.a/500)
	y := labInverse(fy)
	z := 1.08883 * labInverse(fy-c.b/200)
	return color.NRGBA{
		R: channel(3.2404542*x - 1.5371385*y - 0.4985314*z),
		G: channel(-0.9692660*x + 1.8760108*y + 0.0415560*z),
		B: channel(0.0556434*x - 0.2040259*y + 1.0572252*z),
		A: 255,
	}
}

func labInverse(f float64) float64 {
	if f > 6.0/29 {
		return f * f * f
	}
	return 3 * (6.0 / 29) * (6.0 / 29) * (f - 4.0/29)
}

// channel applies the sRGB transfer function to a linear value and rounds to a byte.
func channel(v float64) uint8 {
	v = math.Min(math.Max(v, 0), 1)
	if v <= 0.0031308 {
		return uint8(math.Round(255 * 12.92 * v))
	}
	return uint8(math.Round(255 * (1.055*math.Pow(v, 1/2.4) - 0.055)))
}
