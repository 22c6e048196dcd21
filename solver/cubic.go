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
		roots[n] = c.rootBetween(a, b, fa, fb)
		n++
	}
	return roots, n
}

// rootBetween returns the root between a and b, where the values are of different sign and there is no turn, to
// the last digit: by Newton's steps, halving the bracket where one leaves it or is no shorter than half of the last.
func (c *cubic) rootBetween(a, b, fa, fb float64) float64 {
	switch {
	case fa == 0:
		return a
	case fb == 0:
		return b
	}
	x, step := a+(b-a)*(fa/(fa-fb)), b-a
	for {
		v := c.at(x)
		if (v > 0) == (fa > 0) {
			a = x
		} else {
			b = x
		}
		last := step
		step = v / c.slope(x)
		next := x - step
		if math.Abs(next-x) <= 0x1p-52*math.Abs(x) {
			return next
		}
		if !(next > a && next < b) || 2*math.Abs(step) > math.Abs(last) {
			step = 0.5 * (b - a)
			next = a + step
			if next == a || next == b {
				return next
			}
		}
		x = next
	}
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

// fallingRoot returns the root of a continuous function with f(a) >= 0 >= f(b) to the last digit, by inverse
// quadratic interpolation where that is safe and bisection where it is not (Chandrupatla 1997, Adv. Eng. Softw. 28,
// 145-149). Of the last two places it is the one at which f is not positive.
func fallingRoot(f func(float64) float64, a, b float64) float64 {
	fa, fb := f(a), f(b)
	if fa <= 0 {
		return a
	}
	// x1 is the newest place, x2 the one on the other side of the root, x3 the one before.
	x1, f1, x2, f2 := b, fb, a, fa
	// The first step is that of the secant; a function far from straight is halved from then on.
	share := fb / (fb - fa)
	if !(share > 0 && share < 1) {
		share = 0.5
	}
	for i := 0; i < 200; i++ {
		x := x1 + share*(x2-x1)
		if x == x1 || x == x2 {
			// A step lost in rounding says nothing about the other side of a wide bracket.
			x = x1 + 0.5*(x2-x1)
		}
		if x == x1 || x == x2 {
			break
		}
		fx := f(x)
		x3, f3 := x1, f1
		if (fx > 0) == (f1 > 0) {
			x1, f1 = x, fx
		} else {
			x3, f3, x2, f2, x1, f1 = x2, f2, x1, f1, x, fx
		}
		if f1 == 0 {
			return x1
		}
		share = 0.5
		if least := 0x1p-52 * max(math.Abs(x1), math.Abs(x2)) / math.Abs(x2-x1); least < 0.5 {
			share = max(least, min(1-least, interpolate(x1, f1, x2, f2, x3, f3)))
		}
	}
	if f1 <= 0 {
		return x1
	}
	return x2
}

// interpolate returns where, between x1 (0) and x2 (1), the inverse quadratic through the three places has its
// root, or the middle where it is not monotone there.
func interpolate(x1, f1, x2, f2, x3, f3 float64) float64 {
	xi, phi := (x1-x2)/(x3-x2), (f1-f2)/(f3-f2)
	if phi*phi < xi && (1-phi)*(1-phi) < 1-xi {
		return f1/(f2-f1)*f3/(f2-f3) + (x3-x1)/(x2-x1)*f1/(f3-f1)*f2/(f3-f2)
	}
	return 0.5
}
