package solver

import "math"

// region is a stretch of the time-space plane in which the density is a linear function of place at every
// time, held relative to one of its own characteristics. With tau = t - t0 and xi = x - x0 - c tau,
//
//	s(t) = s + d tau                 the spread: inverse of the density gradient
//	k    = k0 + xi/s                 density
//	N    = n + r tau - k0 xi - xi²/(2 s)   count, r = q(k0) - k0 c
//
// which solves k_t + q(k)_x = 0 on one quadratic piece of the relation (d is that piece's curvature). An
// infinite spread is a uniform state; a spread of 0 at t0 is a centred fan; a spread that falls to 0 is a
// profile whose characteristics meet. Holding it relative to a characteristic instead of to x = 0 keeps all
// differences small, however flat the profile and however large the counts.
type region struct {
	x0, t0 float64
	k, c   float64
	s, d   float64
	r, n   float64
	// upLabel and downLabel are the densities at the upstream and downstream edges at birth; every density in the
	// region's life lies between them, since shocks only consume characteristics.
	upLabel, downLabel float64
	seg                int32
	piece              int32
}

func (g *region) uniform() bool { return math.IsInf(g.s, 0) }

func (g *region) spread(t float64) float64 { return g.s + g.d*(t-g.t0) }

// gradient is dk/dx at time t.
func (g *region) gradient(t float64) float64 { return 1 / g.spread(t) }

// density at (x, t), within the labels of the region.
func (g *region) density(x, t float64) float64 {
	xi := x - g.x0 - g.c*(t-g.t0)
	if xi == 0 || g.uniform() {
		return g.k
	}
	k := g.k + xi/g.spread(t)
	lo, hi := min(g.upLabel, g.downLabel), max(g.upLabel, g.downLabel)
	return max(lo, min(hi, k))
}

// waveSpeed of the density k on the region's piece.
func (g *region) waveSpeed(k float64) float64 { return g.c + g.d*(k-g.k) }

// passing is q(k) - k c(k), the rate at which vehicles pass a characteristic of density k. Its derivative is
// -k d, so it follows from that of the reference characteristic.
func (g *region) passing(k float64) float64 { return g.r - 0.5*g.d*(k-g.k)*(k+g.k) }

// flow q(k) on the region's piece.
func (g *region) flow(k float64) float64 { return g.passing(k) + k*g.waveSpeed(k) }

// count N(x, t).
func (g *region) count(x, t float64) float64 {
	tau := t - g.t0
	xi := x - g.x0 - g.c*tau
	if g.uniform() {
		return g.n + g.r*tau - g.k*xi
	}
	return g.n + g.r*tau - 0.5*xi*(g.k+g.density(x, t))
}

// focus is the time at which the region's characteristics meet, +Inf where they do not.
func (g *region) focus() float64 {
	if g.d < 0 && g.s > 0 && !g.uniform() {
		return g.t0 - g.s/g.d
	}
	return math.Inf(1)
}

// arrival is the time at which the characteristic of density k is at place x.
func (g *region) arrival(x, k float64) float64 {
	dk := k - g.k
	return g.t0 + (x-g.x0-dk*g.s)/(g.c+dk*g.d)
}

// local is a region seen from a point of it: the same functions with the point as origin of place, time and
// count, relative to the characteristic through the point.
type local struct {
	k, c float64
	s, d float64
	r    float64
}

// apexAge [s] is the age at which a fan is looked at where something meets it at its very apex: at age 0 all its
// densities are at one place. Events that close are taken as one, so this is left to roundings; it moves the
// fan's waves by a hundred-thousandth of a millimetre.
const apexAge = 1e-9

// from returns the region as seen from (x, t).
func (g *region) from(x, t float64) local { return g.at(g.density(x, t), t) }

// at returns the region as seen from its point of density k at time t.
func (g *region) at(k, t float64) local {
	if g.uniform() {
		return local{k: g.k, s: g.s, r: g.r + g.k*g.c}
	}
	s := g.spread(t)
	if s == 0 {
		s = g.d * apexAge
	}
	return local{k: k, c: g.waveSpeed(k), s: s, d: g.d, r: g.passing(k)}
}

// gradient is dk/dx a time T after the point.
func (l *local) gradient(T float64) float64 { return 1 / (l.s + l.d*T) }

func (l *local) uniform() bool { return math.IsInf(l.s, 0) }

// flow q of the density at the point.
func (l *local) flow() float64 { return l.r + l.k*l.c }

// density a distance X and a time T from the point.
func (l *local) density(X, T float64) float64 { return l.k + (X-l.c*T)*l.gradient(T) }

// count of vehicles between the point and (X, T) from it: N(there) - N(point).
func (l *local) count(X, T float64) float64 {
	xi := X - l.c*T
	return l.r*T - xi*(l.k+0.5*xi*l.gradient(T))
}
