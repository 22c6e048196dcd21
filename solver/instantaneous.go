package solver

import "math"

// InstantaneousTravelTime returns what a trip from place from to place to would take if the speeds along the road at
// time t stayed as they are [s]: the integral of dx/v(x, t). It is what detectors along a road add up to, and no
// forecast of the trip (that is [Solution.TravelTime]). ok is false where traffic stands still somewhere on the way:
// the integral has no bound then. Waiting before the entry is not in it. Errors: *[InvalidError] for places outside the
// corridor or in the wrong order, and times outside the solved time.
func (s *Solution) InstantaneousTravelTime(from, to, t float64) (duration float64, ok bool, err error) {
	var v violations
	entry, exit := s.Extent()
	v.within("From", from, entry-samePlace, exit+samePlace)
	v.within("To", to, from, exit+samePlace)
	v.within("Time", t, 0, s.horizon*(1+closeness))
	if err := v.err(); err != nil {
		return 0, false, err
	}
	for i := range s.segments {
		if a, b := max(from, s.segments[i].start), min(to, s.segments[i].end); b > a {
			duration += s.passingTime(int32(i), a, b, t)
		}
	}
	if math.IsInf(duration, 1) {
		return 0, false, nil
	}
	return duration, true, nil
}

// passingTime is the integral of 1/v at time t from a to b on a segment.
func (s *Solution) passingTime(seg int32, a, b, t float64) float64 {
	x, g, sum := a, s.nodes[seg].at(t).down, 0.0
	for _, f := range s.frontsAt(seg, t) {
		if to := min(b, s.place(f, t)); to > x {
			sum += (to - x) * s.meanSlowness(g, x, to, t)
			x = to
		}
		g = f.down
	}
	if b > x {
		sum += (b - x) * s.meanSlowness(g, x, b, t)
	}
	return sum
}

// meanSlowness is the mean of 1/v over a region at time t from a to b; +Inf where traffic stands still there.
func (s *Solution) meanSlowness(g int32, a, b, t float64) float64 {
	r := &s.regions[g]
	ka, kb := r.density(a, t), r.density(b, t)
	p := &s.segments[r.seg].diagram.pieces[r.piece]
	if p.kr == 0 {
		return meanInverse(p.cr+0.5*p.d*ka, p.cr+0.5*p.d*kb) // the speed is linear in density
	}
	if p.d != 0 {
		return p.meanSlownessToJam(ka, kb)
	}
	return meanRatio(ka, kb, p.flow(ka), p.flow(kb))
}

// meanSlownessToJam is the mean of k/q over the densities from ka to kb on a curved piece that ends at jam density,
// where its flow is 0: with y = k - jam density and w = c + d y/2, q = y w, k/q falls into a term in 1/y and one in 1/w.
func (p *piece) meanSlownessToJam(ka, kb float64) float64 {
	ya, yb := ka-p.kr, kb-p.kr
	if ya >= 0 || yb >= 0 {
		return math.Inf(1)
	}
	share := p.kr / p.cr
	return share*meanInverse(ya, yb) + (1-0.5*p.d*share)*meanInverse(p.cr+0.5*p.d*ya, p.cr+0.5*p.d*yb)
}

// meanInverse is the mean of 1/u for u from a to b, which are of one sign: ln(b/a)/(b-a).
func meanInverse(a, b float64) float64 {
	z := (b - a) / a
	if math.Abs(z) < 0x1p-26 {
		return (1 - 0.5*z) / a
	}
	return math.Log1p(z) / (z * a)
}

// meanRatio is the mean of k/q where both go linearly, from ka and qa to kb and qb: +Inf where the flow ends or begins
// at 0. With z = (qb-qa)/qa it is (ka ln(1+z)/z + (kb-ka) (z - ln(1+z))/z²)/qa.
func meanRatio(ka, kb, qa, qb float64) float64 {
	if qa <= 0 || qb <= 0 {
		return math.Inf(1)
	}
	z := (qb - qa) / qa
	return ka*meanInverse(qa, qb) + (kb-ka)*(0.5-z*squareRatio(z))/qa
}
