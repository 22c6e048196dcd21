package solver

import "math"

// cubic holds the coefficients of c[0] + c[1] T + c[2] T² + c[3] T³.
type cubic [4]float64

func (c *cubic) at(T float64) float64    { return c[0] + T*(c[1]+T*(c[2]+T*c[3])) }
func (c *cubic) slope(T float64) float64 { return c[1] + T*(2*c[2]+3*T*c[3]) }

// descent returns the first T in [from, to] at which the polynomial goes from positive to negative, +Inf
// where it does not. Where it is not positive at from and falling there, that is from itself: rounding has
// hidden the crossing. At from = 0 exact zero roots are taken out first, for curves that start together.
func (c cubic) descent(from, to float64) float64 {
	if from == 0 {
		for c[0] == 0 && (c[1] != 0 || c[2] != 0 || c[3] != 0) {
			c = cubic{c[1], c[2], c[3], 0}
			if c[0] < 0 {
				return 0
			}
		}
	}
	if c.at(from) <= 0 && c.slope(from) < 0 {
		return from
	}
	roots, n := c.roots(from, to)
	for _, T := range roots[:n] {
		if c.slope(T) < 0 {
			return T
		}
	}
	return math.Inf(1)
}

// roots returns the real roots in [from, to] in order, and their number. A double root may be left out.
func (c *cubic) roots(from, to float64) (roots [3]float64, n int) {
	if c[3] != 0 {
		return c.cubicRoots(from, to)
	}
	var all [2]float64
	switch {
	case c[2] != 0:
		disc := c[1]*c[1] - 4*c[2]*c[0]
		if disc < 0 {
			return roots, 0
		}
		w := -0.5 * (c[1] + math.Copysign(math.Sqrt(disc), c[1]))
		a, b := w/c[2], c[0]/w
		all = [2]float64{min(a, b), max(a, b)}
	case c[1] != 0:
		all = [2]float64{-c[0] / c[1], math.NaN()}
	default:
		return roots, 0
	}
	for _, T := range all {
		if T >= from && T <= to {
			roots[n] = T
			n++
		}
	}
	return roots, n
}

// cubicRoots looks at the three stretches of [from, to] between the turning points; each holds at most one.
func (c *cubic) cubicRoots(from, to float64) (roots [3]float64, n int) {
	lo, hi := c.turns()
	ends := [4]float64{from, max(from, min(to, lo)), max(from, min(to, hi)), to}
	for i := 0; i < 3; i++ {
		a, b := ends[i], ends[i+1]
		fa, fb := c.at(a), c.at(b)
		if a >= b || fa*fb > 0 {
			continue
		}
		roots[n] = newtonRoot(func(T float64) (value, slope float64) { return c.at(T), c.slope(T) }, a, b, fa, fb)
		n++
	}
	return roots, n
}

// turns returns the two places where the cubic's slope is zero, in order; +Inf where there are none.
func (c *cubic) turns() (lo, hi float64) {
	disc := c[2]*c[2] - 3*c[3]*c[1]
	if disc <= 0 {
		return math.Inf(1), math.Inf(1)
	}
	w := -(c[2] + math.Copysign(math.Sqrt(disc), c[2]))
	a, b := w/(3*c[3]), c[1]/w
	return min(a, b), max(a, b)
}
