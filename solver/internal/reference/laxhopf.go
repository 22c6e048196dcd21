package reference

import (
	"math"

	"github.com/roadswell/roadswell/solver"
)

// LaxHopf is the least-count solution on an endless homogeneous road:
//
//	N(x,t) = min over y of N0(y) + t L((x-y)/t),
//
// where N0 is the count at time 0 (falling with the density as slope, zero at the profile's start) and L the
// law's Legendre transform. Beyond its ends the profile continues at its end densities.
type LaxHopf struct {
	Law     Law
	Profile []solver.ProfilePiece
}

// Count is N(x,t) for t >= 0.
func (h LaxHopf) Count(x, t float64) float64 {
	if t == 0 {
		return h.initialCount(x)
	}
	cost := func(y float64) float64 { return h.initialCount(y) + t*h.Law.Transform((x-y)/t) }
	cuts := h.cuts(x, t)
	best := math.Inf(1)
	for i := 1; i < len(cuts); i++ {
		best = math.Min(best, leastBetween(cost, cuts[i-1], cuts[i]))
	}
	return best
}

// Range is the stretch of road whose state at time 0 decides N(x,t).
func (h LaxHopf) Range(x, t float64) (from, to float64) {
	kinks := h.Law.Kinks()
	return x - kinks[0]*t, x - kinks[len(kinks)-1]*t
}

// cuts are the places between which the cost is one quadratic: where the profile's pieces meet and where the
// transform changes its formula.
func (h LaxHopf) cuts(x, t float64) []float64 {
	var out []float64
	for _, v := range h.Law.Kinks() {
		out = append(out, x-v*t)
	}
	from, to := h.Range(x, t)
	for _, p := range h.Profile {
		for _, y := range []float64{p.Start, p.End} {
			if y > from && y < to {
				out = append(out, y)
			}
		}
	}
	return sorted(out)
}

// initialCount is N0(y), minus the integral of the density from the profile's start to y.
func (h LaxHopf) initialCount(y float64) float64 {
	first, last := h.Profile[0], h.Profile[len(h.Profile)-1]
	if y < first.Start {
		return (first.Start - y) * first.StartDensity
	}
	n := 0.0
	for _, p := range h.Profile {
		if y <= p.Start {
			break
		}
		n -= vehiclesIn(p, p.Start, math.Min(y, p.End))
	}
	if y > last.End {
		n -= (y - last.End) * last.EndDensity
	}
	return n
}

// vehiclesIn is the number of vehicles between a and b, both within the piece.
func vehiclesIn(p solver.ProfilePiece, a, b float64) float64 {
	return (b - a) * (densityIn(p, a) + densityIn(p, b)) / 2
}

func densityIn(p solver.ProfilePiece, x float64) float64 {
	share := (x - p.Start) / (p.End - p.Start)
	return p.StartDensity*(1-share) + p.EndDensity*share
}

// goldenSteps shrink a bracket by 0.618 each: 0.618^80 is 2e-17, all the digits a double has.
const goldenSteps = 80

// leastBetween is the least value on [a,b] of a function that is convex or concave there: golden section
// finds it in the first case, the ends have it in the second.
func leastBetween(f func(float64) float64, a, b float64) float64 {
	best := math.Min(f(a), f(b))
	share := (math.Sqrt(5) - 1) / 2
	c, d := b-share*(b-a), a+share*(b-a)
	fc, fd := f(c), f(d)
	for range goldenSteps {
		if fc < fd {
			b, d, fd = d, c, fc
			c = b - share*(b-a)
			fc = f(c)
		} else {
			a, c, fc = c, d, fd
			d = a + share*(b-a)
			fd = f(d)
		}
	}
	return math.Min(best, math.Min(fc, fd))
}
