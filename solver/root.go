package solver

import "math"

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

// newtonRoot returns the root of a function without a turn between a and b, where its values fa and fb are of
// different sign, to the last digit: by Newton's steps, or halving the bracket where one leaves it or is no shorter than
// half of the one before. f returns the value and the slope; at b it may have no value (NaN).
func newtonRoot(f func(float64) (value, slope float64), a, b, fa, fb float64) float64 {
	switch {
	case fa == 0:
		return a
	case fb == 0:
		return b
	}
	x := a + (b-a)*(fa/(fa-fb))
	if !(x > a && x < b) {
		x = 0.5 * (a + b) // also where one end has no value
	}
	for last := math.NaN(); ; {
		value, slope := f(x)
		if (value > 0) == (fa > 0) {
			a = x
		} else {
			b = x
		}
		step := value / slope
		next := x - step
		switch share := step / last; {
		case math.Abs(next-x) <= 0x1p-52*math.Abs(x):
			return next
		case math.Abs(step)*share*share <= 0x1p-54*math.Abs(x) && next > a && next < b:
			return next // steps shrink by squares: the one after would be lost in rounding
		case !(next > a && next < b) || math.Abs(share) > 0.5:
			next = a + 0.5*(b-a)
			if next == a || next == b {
				return next
			}
			last = math.NaN()
		default:
			last = step
		}
		x = next
	}
}
