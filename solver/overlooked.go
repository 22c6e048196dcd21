package solver

import "math"

// overlooked is the time of a meeting that the roots do not show, +Inf where there is none: where the shock is so
// weak that both roots of the path are nearly one, roundings hide or spoil them. The place of the shock, which is
// free of that, tells on which side of the line it is in the end.
func (p *path) overlooked(e, speed float64, along side, direction, from, limit float64) float64 {
	gap := func(T float64) float64 { return direction * (e + speed*T - p.offset(T)) }
	to := min(p.until, limit*(1-closeness)) // the limit may be a focus, where there is no place to compute
	if !p.connected(to) {
		return math.Inf(1)
	}
	switch last := gap(to); {
	case last < -p.near:
		return fallingRoot(gap, ahead(gap, from, to), to)
	case to == p.until && last <= p.reach(along):
		return to
	}
	return math.Inf(1)
}

// ahead is a time from which on a gap that is closed at the end is open: the start, or where that is a place at
// which both are, soon after; the start again where the gap never opens.
func ahead(gap func(float64) float64, from, to float64) float64 {
	if gap(from) > 0 {
		return from
	}
	for T := to; T > from+closeness*(to-from); T = 0.5 * (from + T) {
		if gap(T) > 0 {
			return T
		}
	}
	return from
}

// connected reports whether the path leads without a break to time T. Followed far beyond what its sides hold, it
// may run off to infinity when their gradients become equal.
func (p *path) connected(T float64) bool {
	alike := (p.down.s - p.up.s) / (p.up.d - p.down.d)
	return !(alike > 0 && alike < T) || p.down.k-p.up.k > alike*p.down.gradient(alike)*p.relSpeed
}

// reach is within what distance the shock is taken to have met a line where it vanishes. The time of that is a
// double root where both sides are used up at once, good to half the digits, and so is then the place among the
// characteristics of a side; what is taken with the line is a square of that.
func (p *path) reach(along side) float64 {
	jump := p.down.k - p.up.k
	switch along {
	case upSide:
		return p.near + halfDigits*math.Abs(jump/p.up.gradient(p.until))
	case downSide:
		return p.near + halfDigits*math.Abs(jump/p.down.gradient(p.until))
	}
	return p.near
}
