package solver_test

import (
	"math"
	"math/rand/v2"
	"testing"
)

// A shock beside a ramp bends. Beside a ramp whose characteristics meet (or met) at (xf, tf) the wave speed is
// c = (x-xf)/(t-tf). With a constant wave speed c0 on the other side the shock moves at
//
//	dx/dt = (c0 + (x-xf)/(t-tf)) / 2,
//
// and Y = x - xf - c0 (t-tf), its distance from the characteristic of c0 through the focus, obeys
//
//	dY/dt = Y / (2 (t-tf)),  so  Y = Y1 sqrt((t-tf)/(t1-tf)):
//
// a square-root law about the focus. All closed forms below are this line with the first point put in. (c0 and c as
// in Whitham 1974, Linear and Nonlinear Waves, sections 2.3-2.4; derived here.)

// rampFocus is the point where the characteristics of a ramp meet: in the past for an opening one.
type rampFocus struct{ place, time float64 }

// focusOf is the focus of a ramp that starts at x with wave speed c and ends after width with wave speed d.
func focusOf(x, width, c, d float64) rampFocus {
	time := width / (c - d)
	return rampFocus{x + c*time, time}
}

// bent is the place at time t of a shock that was at (x1, t1), between the ramp and a uniform side of wave speed c0.
func (f rampFocus) bent(c0, x1, t1, t float64) float64 {
	y1 := x1 - f.place - c0*(t1-f.time)
	return f.place + c0*(t-f.time) + y1*math.Sqrt((t-f.time)/(t1-f.time))
}

// usedUp is when that shock reaches the ramp's characteristic of wave speed d (a focusing ramp's far end).
func (f rampFocus) usedUp(c0, x1, t1, d float64) float64 {
	y1 := x1 - f.place - c0*(t1-f.time)
	share := y1 / (d - c0) / (t1 - f.time)
	return f.time + (t1-f.time)*share*share
}

// twoSlopes is a rising profile of two ramps that adjoin, from density a over b to c, starting at place 0.
type twoSlopes struct {
	vf, kj, a, b, c float64
	first, second   float64 // widths
}

func (p twoSlopes) wave(k float64) float64 { return p.vf * (1 - 2*k/p.kj) }

// shock is the path: where and when it is born, when it has used up the gentler ramp, and its place in between
// and afterwards.
func (p twoSlopes) shock() (born rampFocus, end float64, place func(t float64) float64) {
	cA, cB, cC := p.wave(p.a), p.wave(p.b), p.wave(p.c)
	one, two := focusOf(0, p.first, cA, cB), focusOf(p.first, p.second, cB, cC)
	whole := rise{p.a, p.b, p.first / 2}.and(rise{p.b, p.c, p.first + p.second/2})
	bending, uniform, far := two, cA, cC
	born = one
	if two.time < one.time {
		born, bending, uniform, far = two, one, cC, cA
	}
	end = bending.usedUp(uniform, born.place, born.time, far)
	return born, end, func(t float64) float64 {
		if t < end {
			return bending.bent(uniform, born.place, born.time, t)
		}
		return whole.place(p.vf, p.kj, t)
	}
}

// check compares the solver with the closed form, before and after the gentler ramp is used up.
func (p twoSlopes) check(t *testing.T) {
	t.Helper()
	born, end, place := p.shock()
	horizon, reach := 2*end, 3*p.vf*end
	width := p.first + p.second
	s := answerOf(t, openRoad(greenshields(t, p.vf, p.kj), horizon, flat(-reach, 0, p.a), ramp(0, p.first, p.a, p.b),
		ramp(p.first, width, p.b, p.c), flat(width, width+reach, p.c)))
	length := width + p.vf*born.time
	shockBorn(t, s, born.place, born.time, length, born.time)
	agreeOn(t, "the two closed forms join", place(end*(1-1e-15)), place(end), length)
	for _, u := range []float64{0.001, 0.25, 0.5, 0.9, 1} {
		time := born.time + u*(end-born.time)
		agreeOn(t, "while it bends", jumpNear(t, s, place(time), time).Position(time), place(time), length)
		time = end + u*(horizon-end)
		agreeOn(t, "when it is straight", jumpNear(t, s, place(time), time).Position(time), place(time), length)
	}
	if n := countShocks(s, 0.5*(born.time+end)); n != 1 {
		t.Errorf("%d shocks, want 1", n)
	}
}

func TestTwoSlopeRamp(t *testing.T) {
	t.Run("steep first", twoSlopes{100 * kmh, 150 * perKm, 20 * perKm, 80 * perKm, 110 * perKm, 300, 700}.check)
	t.Run("steep last", twoSlopes{100 * kmh, 150 * perKm, 20 * perKm, 50 * perKm, 140 * perKm, 700, 300}.check)
	t.Run("from empty to full", twoSlopes{60 * kmh, 120 * perKm, 0, 90 * perKm, 120 * perKm, 100, 2000}.check)
}

func TestTwoSlopeRampAtRandom(t *testing.T) {
	const seed = 20261203
	random := rand.New(rand.NewPCG(seed, 3))
	for i := range 300 {
		p := twoSlopes{vf: 10 + 30*random.Float64(), kj: 0.1 + 0.4*random.Float64()}
		p.a = 0.5 * p.kj * random.Float64()
		p.b = p.a + (p.kj-p.a)*(0.05+0.6*random.Float64())
		p.c = p.b + (p.kj-p.b)*(0.05+0.95*random.Float64())
		p.first, p.second = 50+1000*random.Float64(), 50+1000*random.Float64()
		p.check(t)
		if t.Failed() {
			t.Fatalf("seed %d, profile %d: %+v", seed, i, p)
		}
	}
}

// notch is a background density that changes linearly to another over first metres from place 0 and back over
// second metres: a V-shaped dip where it thins out, a hump where it thickens.
type notch struct {
	vf, kj, background, tip float64
	first, second           float64
}

// check follows the shock, which the compressive half makes and the opening half eats up for ever: its strength
// falls as 1/sqrt(t).
func (n notch) check(t *testing.T) {
	t.Helper()
	c0, c1 := n.vf*(1-2*n.background/n.kj), n.vf*(1-2*n.tip/n.kj)
	born, opening := focusOf(n.first, n.second, c1, c0), focusOf(0, n.first, c0, c1)
	if n.tip > n.background {
		born, opening = opening, born
	}
	horizon := 20 * born.time
	reach := 2*n.vf*horizon + n.first + n.second
	s := answerOf(t, openRoad(greenshields(t, n.vf, n.kj), horizon, flat(-reach, 0, n.background),
		ramp(0, n.first, n.background, n.tip), ramp(n.first, n.first+n.second, n.tip, n.background),
		flat(n.first+n.second, reach, n.background)))
	length := n.first + n.second + n.vf*born.time
	shockBorn(t, s, born.place, born.time, length, born.time)
	for _, u := range []float64{1.001, 1.5, 4, 20} {
		time := born.time * u
		x := opening.bent(c0, born.place, born.time, time)
		f := jumpNear(t, s, x, time)
		agreeOn(t, "path", f.Position(time), x, length)
		inside := (x - opening.place) / (time - opening.time)
		up, down := f.Sides(time)
		if n.tip > n.background {
			up, down = down, up
		}
		agreeOn(t, "density inside", up.Density, n.kj/2*(1-inside/n.vf), n.kj)
		agreeOn(t, "density outside", down.Density, n.background, n.kj)
	}
	t.Logf("width of the notch grows as sqrt(t): %g m at the end", opening.bent(c0, born.place, born.time, horizon)-c0*horizon)
}

func TestVShapedDip(t *testing.T) {
	t.Run("even", notch{100 * kmh, 150 * perKm, 100 * perKm, 40 * perKm, 500, 500}.check)
	t.Run("slow fall, sharp rise", notch{100 * kmh, 150 * perKm, 60 * perKm, 5 * perKm, 2000, 100}.check)
	t.Run("sharp fall, slow rise", notch{100 * kmh, 150 * perKm, 150 * perKm, 0, 100, 2000}.check)
}

func TestHump(t *testing.T) {
	t.Run("even", notch{100 * kmh, 150 * perKm, 40 * perKm, 100 * perKm, 500, 500}.check)
	t.Run("in light traffic", notch{100 * kmh, 150 * perKm, 10 * perKm, 70 * perKm, 100, 900}.check)
}

func TestNotchAtRandom(t *testing.T) {
	const seed = 20261204
	random := rand.New(rand.NewPCG(seed, 4))
	for i := range 300 {
		n := notch{vf: 10 + 30*random.Float64(), kj: 0.1 + 0.4*random.Float64()}
		n.background, n.tip = n.kj*random.Float64(), n.kj*random.Float64()
		if math.Abs(n.background-n.tip) < 0.02*n.kj {
			continue
		}
		n.first, n.second = 50+1000*random.Float64(), 50+1000*random.Float64()
		n.check(t)
		if t.Failed() {
			t.Fatalf("seed %d, profile %d: %+v", seed, i, n)
		}
	}
}
