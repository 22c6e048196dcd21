package solver

import "math"

// diagram is the content of a Relation. It is never changed after it was made.
type diagram struct {
	pieces []piece
	// first index of a congested piece: pieces from here on lie wholly above criticalHi.
	congested int
	capacity  float64
	// criticalLo and criticalHi bound the densities at which the flow is the capacity.
	criticalLo, criticalHi float64
	jam                    float64
	freeSpeed              float64
}

// piece is one quadratic stretch of a curve on [lo, hi], anchored at its reference density: the origin for
// free pieces and jam density for congested ones, so that q(0) and q(jam) are exactly zero.
type piece struct {
	lo, hi     float64
	kr, qr, cr float64
	d          float64
}

func (p *piece) flow(k float64) float64 {
	x := k - p.kr
	return p.qr + x*(p.cr+0.5*p.d*x)
}

func (p *piece) waveSpeed(k float64) float64 { return p.cr + p.d*(k-p.kr) }

// density inverts flow on the piece. The flow must be one that the piece reaches.
func (p *piece) density(q float64) float64 {
	y := q - p.qr
	if p.d == 0 {
		return p.kr + y/p.cr
	}
	// cr x + d x²/2 = y, the root on the side of the anchor; the larger term is kept out of differences.
	disc := math.Sqrt(max(0, p.cr*p.cr+2*p.d*y))
	return p.kr + 2*y/(p.cr+math.Copysign(disc, p.cr))
}

// build makes the relation of pieces that are known to be continuous and concave.
func build(pieces []piece, capacity float64) (Relation, error) {
	c := &diagram{pieces: pieces, capacity: capacity, jam: pieces[len(pieces)-1].hi, freeSpeed: pieces[0].cr, congested: len(pieces)}
	for i := range pieces {
		p := &pieces[i]
		if p.cr > 0 {
			c.criticalLo = p.hi
		}
		if p.cr < 0 && c.congested == len(pieces) {
			c.congested = i
			c.criticalHi = p.lo
		}
	}
	return Relation{diagram: c}, nil
}

// pieceBelow is the index of the piece that holds k; a corner belongs to the piece below it.
func (d *diagram) pieceBelow(k float64) int {
	for i := range d.pieces {
		if k <= d.pieces[i].hi {
			return i
		}
	}
	return len(d.pieces) - 1
}

// pieceAbove is the index of the piece that holds k; a corner belongs to the piece above it.
func (d *diagram) pieceAbove(k float64) int {
	for i := len(d.pieces) - 1; i > 0; i-- {
		if k >= d.pieces[i].lo {
			return i
		}
	}
	return 0
}

func (d *diagram) flow(k float64) float64 { return d.pieces[d.pieceBelow(k)].flow(k) }

func (d *diagram) speed(k float64) float64 {
	if k <= 0 {
		return d.freeSpeed
	}
	p := &d.pieces[0]
	if k <= p.hi {
		return p.cr + 0.5*p.d*k // q/k of the piece through the origin, without the quotient
	}
	return max(0, d.flow(k)) / k
}

// oneCurve reports whether two pieces are parts of one parabola or line.
func (d *diagram) oneCurve(i, j int) bool {
	a, b := &d.pieces[min(i, j)], &d.pieces[max(i, j)]
	if a == b {
		return true
	}
	return a.d == b.d && a.hi == b.lo && math.Abs(a.waveSpeed(a.hi)-b.waveSpeed(b.lo)) <= closeness*d.freeSpeed
}

func (d *diagram) curved() bool {
	for i := range d.pieces {
		if d.pieces[i].d != 0 {
			return true
		}
	}
	return false
}

func (d *diagram) freeDensity(q float64) float64 {
	if q >= d.capacity*(1-closeness) {
		return d.criticalLo
	}
	for i := range d.pieces {
		p := &d.pieces[i]
		if p.hi >= d.criticalLo || p.flow(p.hi) >= q {
			return min(p.hi, max(p.lo, p.density(q)))
		}
	}
	return d.criticalLo
}

func (d *diagram) congestedDensity(q float64) float64 {
	if q >= d.capacity*(1-closeness) {
		return d.criticalHi
	}
	for i := len(d.pieces) - 1; i >= d.congested; i-- {
		p := &d.pieces[i]
		if i == d.congested || p.flow(p.lo) >= q {
			return min(p.hi, max(p.lo, p.density(q)))
		}
	}
	return d.criticalHi
}

// secant is the chord slope between the states (pieceA, a) and (pieceB, b): within one piece the mean wave
// speed, which loses no digits however close the densities are.
func (d *diagram) secant(pieceA int, a float64, pieceB int, b float64) float64 {
	pa, pb := &d.pieces[pieceA], &d.pieces[pieceB]
	if pieceA == pieceB {
		return 0.5 * (pa.waveSpeed(a) + pa.waveSpeed(b))
	}
	if a == b {
		return 0.5 * (pa.waveSpeed(a) + pb.waveSpeed(b))
	}
	return (pb.flow(b) - pa.flow(a)) / (b - a)
}

// tangentGap is how far the state (pieceB, b) lies below the tangent at the state (pieceA, a): q(a)+c(a)(b-a)-q(b),
// summed piece by piece without a difference of like numbers.
func (d *diagram) tangentGap(pieceA int, a float64, pieceB int, b float64) float64 {
	c := d.pieces[pieceA].waveSpeed(a)
	gap := 0.0
	for i, k := pieceA, a; ; {
		p := &d.pieces[i]
		next, end := i, b
		switch {
		case i < pieceB:
			next, end = i+1, p.hi
		case i > pieceB:
			next, end = i-1, p.lo
		}
		gap += (end - k) * (c - p.waveSpeed(k) - 0.5*p.d*(end-k))
		if i == pieceB {
			return gap
		}
		i, k = next, end
	}
}

// same reports whether two curves are the same relation, number for number.
func (d *diagram) same(o *diagram) bool {
	if d == o {
		return true
	}
	if len(d.pieces) != len(o.pieces) {
		return false
	}
	for i := range d.pieces {
		if d.pieces[i] != o.pieces[i] {
			return false
		}
	}
	return true
}
