package solver

import "math"

// crossing returns the first time from now on at which the shock meets a straight line that lies to one side of
// it, up to limit; +Inf where it does not. x0, t0 is the shock's birth; direction is 1 where the line lies
// downstream of it and -1 where it lies upstream; slack is how far before now a meeting may be found and still
// count as now. along says which side of the shock, if any, the line is a characteristic of: there the count is
// linear in time.
//
// On the line the difference of the two sides' counts is a rational function of time, zero where the shock
// is on the line. It is also zero where the other root of the path's quadratic is: there the difference falls
// in place, that is, the upstream side, continued, is the denser one.
func (p *path) crossing(x0, t0 float64, l line, along side, direction, now, limit, slack float64) float64 {
	e := l.at(t0) - x0
	if l.t0 == t0 {
		e = l.x0 - x0
	}
	if now == t0 && p.passed(e, l.speed, direction) {
		return now
	}
	var c cubic
	if p.oneCurve {
		c = p.onCurve(e, l.speed, along)
	} else {
		c = p.differenceAlong(e, l.speed, along)
	}
	for c[0] == 0 && (c[1] != 0 || c[2] != 0 || c[3] != 0) {
		c = cubic{c[1], c[2], c[3], 0}
	}
	// That they start at one point is no meeting, unless the shock sets out across the line.
	if e == 0 && slack > 0 && now == t0 && p.setsOut(l.speed, direction) {
		return now
	}
	roots, n := c.roots(max(0, now-t0-slack), min(p.until, limit-t0))
	for _, T := range roots[:n] {
		if p.isShock(e, l.speed, T) {
			if p.oneCurve && along == neither {
				T = p.refined(e, l.speed, T)
			}
			return max(now, t0+T)
		}
	}
	return max(now, t0+p.overlooked(e, l.speed, along, direction, max(0, now-t0), limit-t0))
}

// passed reports whether the shock is born beyond a line at distance e and still leaving it behind: a rounding
// has hidden that they meet right here.
func (p *path) passed(e, speed, direction float64) bool {
	return e*direction < 0 && p.up.k != p.down.k && (speed-p.birthSpeed())*direction < 0
}

// setsOut reports whether the shock, born on a line, goes to that side of it on which it may not be: by its speed,
// or where that is the line's, by its acceleration
//
//	dv/dt = (mU (cU-v)² - mD (v-cD)²)/(kD-kU),
//
// which follows from the chord slope and the rate (v-c) m at which the density beside it changes. A shock that
// grows from nothing has no say: it runs between the waves of its two sides, which leave the line as they must.
func (p *path) setsOut(speed, direction float64) bool {
	jump := p.down.k - p.up.k
	if jump <= closeness*(p.down.k+p.up.k) {
		return false
	}
	v := p.birthSpeed()
	if d := v - speed; math.Abs(d) > closeness*(math.Abs(p.up.c)+math.Abs(p.down.c)+math.Abs(v)) {
		return d*direction > 0
	}
	up, down := p.up.gradient(0)*square(p.up.c-v), p.down.gradient(0)*square(v-p.down.c)
	return (up-down)*direction > closeness*(math.Abs(up)+math.Abs(down))
}

func square(x float64) float64 { return x * x }

// birthSpeed of a shock that is born with a jump: the chord slope.
func (p *path) birthSpeed() float64 {
	if p.oneCurve {
		return p.upWave + 0.5*p.waveGap
	}
	return p.jumpFlow() / (p.up.k - p.down.k)
}

// isShock reports whether the shock is on the line at distance e at birth with that speed, at a time T at which one of the
// two roots of the path is.
func (p *path) isShock(e, speed, T float64) bool {
	if p.oneCurve {
		return ((speed-p.upWave)*T+e)*((p.upWave-speed+p.waveGap)*T-e) > 0
	}
	X := e + speed*T
	return p.down.density(X, T)-p.up.density(X, T) > closeness*(p.down.k+p.up.k)
}

// refined takes one Newton's step towards where a shock on one curve is on the line. Of a weak shock the root of the path
// is nearly double, good to half the digits only; its place is free of that.
func (p *path) refined(e, speed, T float64) float64 {
	X, v := p.onward(T)
	if step := (e + speed*T - X) / (speed - v); math.Abs(step) <= halfDigits*T {
		return T - step
	}
	return T
}

// onCurve is zero where a shock on one curve, or the other root of its path, is on the line. With A = v-cU and B = cD-v
// that is where h/g, the square of 1/w-1 (see path.weight), is ((B T-e)/(A T+e))²; with its denominators, a common
// factor T and that of a side along which the line runs taken out, it is at most quadratic.
func (p *path) onCurve(e, v float64, along side) cubic {
	a := v - p.upWave
	b := p.waveGap - a
	faster := a - b // twice by how much the line is faster than the shock at birth
	if e == 0 && math.Abs(faster) <= closeness*(math.Abs(a)+math.Abs(b)) {
		faster = 0
	}
	up, down := p.up.s, p.down.s
	d := p.up.d + p.down.d // of the profile, where one side is uniform
	switch {
	case p.up.uniform():
		if along == downSide {
			return cubic{e * (2*down*a - e*d), down * a * a}
		}
		return cubic{e * (2*down*p.waveGap + e*d), down*p.waveGap*faster + 2*d*e*a, d * a * a}
	case p.down.uniform():
		if along == upSide {
			return cubic{-e * (2*up*b + e*d), up * b * b}
		}
		return cubic{e * (2*up*p.waveGap - e*d), up*p.waveGap*faster + 2*d*e*b, -d * b * b}
	}
	d = p.up.d
	switch along {
	case downSide:
		return cubic{e * (2*up*down*a - e*d*(up+down)), up*down*a*a - d*d*e*e}
	case upSide:
		return cubic{-e * (2*up*down*b + e*d*(up+down)), up*down*b*b - d*d*e*e}
	}
	return cubic{
		e * (2*up*down*p.waveGap + d*e*(up-down)),
		up*down*p.waveGap*faster + 2*d*e*(up*a+down*b),
		d * (up*p.waveGap*faster + (up-down)*b*b),
	}
}

// differenceAlong is the difference of the counts of the two sides along a line, times its denominators.
func (p *path) differenceAlong(e, v float64, along side) cubic {
	c := cubic{(p.down.k - p.up.k) * e, p.jumpFlow() - v*(p.up.k-p.down.k)}
	up, down := !p.up.uniform(), !p.down.uniform()
	if up && along == upSide {
		p.up.ride(e, &c, 1)
		up = false
	}
	if down && along == downSide {
		p.down.ride(e, &c, -1)
		down = false
	}
	switch {
	case up && down:
		u, d := p.up.bulge(e, v), p.down.bulge(e, v)
		return combineBoth(&c, &u, &d)
	case up:
		r := p.up.bulge(e, v)
		return combineOne(&c, &r, -1)
	case down:
		r := p.down.bulge(e, v)
		return combineOne(&c, &r, 1)
	}
	return c
}

// side names one side of a front or node.
type side int8

const (
	upSide side = iota
	downSide
	neither
)

// rational is the term (u0 + u1 T)²/(2 (s0 + s1 T)) by which the count of a linear profile along a line falls
// short of a linear function.
type rational struct {
	u0, u1, s0, s1 float64
}

// bulge is that term of a profile along the line at distance e at birth with speed v.
func (l *local) bulge(e, v float64) rational {
	return rational{u0: e, u1: v - l.c, s0: l.s, s1: l.d}
}

// ride adds to c the count of a profile along one of its own characteristics, beyond the linear part that all
// lines have: (k'-k)²/2 (s + d T), where k' is the characteristic's density.
func (l *local) ride(e float64, c *cubic, sign float64) {
	dk := e / l.s
	c[0] -= sign * 0.5 * dk * dk * l.s
	c[1] -= sign * 0.5 * dk * dk * l.d
}

// sign of the denominator soon after the birth.
func (r *rational) sign() float64 {
	if r.s0 == 0 {
		return math.Copysign(1, r.s1)
	}
	return math.Copysign(1, r.s0)
}

// combineOne returns the linear function in c[0], c[1] plus sign times r, times the denominator of r, so that the
// sign of the result is that of the sum.
func combineOne(c *cubic, r *rational, sign float64) cubic {
	w := r.sign()
	sign *= w
	w *= 2
	return cubic{
		w*c[0]*r.s0 + sign*r.u0*r.u0,
		w*(c[0]*r.s1+c[1]*r.s0) + 2*sign*r.u0*r.u1,
		w*c[1]*r.s1 + sign*r.u1*r.u1,
		0,
	}
}

// combineBoth returns the linear function in c[0], c[1] less up plus down, times the denominators of both, so that
// the sign of the result is that of the sum.
func combineBoth(c *cubic, up, down *rational) cubic {
	w := math.Copysign(1, up.s0) * math.Copysign(1, down.s0)
	// s = sU sD, and each bulge times the other's spread.
	s0, s1, s2 := up.s0*down.s0, up.s0*down.s1+up.s1*down.s0, up.s1*down.s1
	uu, dd := up.squared(), down.squared()
	return cubic{
		w * (2*c[0]*s0 - uu[0]*down.s0 + dd[0]*up.s0),
		w * (2*(c[0]*s1+c[1]*s0) - uu[1]*down.s0 - uu[0]*down.s1 + dd[1]*up.s0 + dd[0]*up.s1),
		w * (2*(c[0]*s2+c[1]*s1) - uu[2]*down.s0 - uu[1]*down.s1 + dd[2]*up.s0 + dd[1]*up.s1),
		w * (2*c[1]*s2 - uu[2]*down.s1 + dd[2]*up.s1),
	}
}

// squared returns the coefficients of (u0 + u1 T)².
func (r *rational) squared() [3]float64 { return [3]float64{r.u0 * r.u0, 2 * r.u0 * r.u1, r.u1 * r.u1} }
