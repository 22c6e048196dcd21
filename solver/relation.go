package solver

import (
	"fmt"
	"math"
)

// Relation is a concave flow-density relation q(k), held as a continuous, piecewise quadratic curve
//
//	q(k) = qr + cr (k-kr) + d (k-kr)²/2,   d <= 0 on each piece,
//
// whose wave speed c(k) = dq/dk = cr + d (k-kr) never rises with density (Lighthill & Whitham 1955,
// Proc. R. Soc. A 229, 317-345). It is an immutable value; the zero Relation is not valid.
//
// Densities are in veh/m and flows in veh/s, of all lanes that the relation describes.
type Relation struct {
	diagram *diagram
}

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
	disc := math.Sqrt(math.Max(0, p.cr*p.cr+2*p.d*y))
	return p.kr + 2*y/(p.cr+math.Copysign(disc, p.cr))
}

// TriangularParams describes a triangular relation (Newell 1993, Transp. Res. B 27, 281-287): flow rises at
// FreeSpeed up to Capacity and falls with slope -WaveSpeed to zero at JamDensity. Any three of the four
// determine the fourth (Capacity = JamDensity / (1/FreeSpeed + 1/WaveSpeed)); give 0 for what is not known.
// All four must agree to six digits.
type TriangularParams struct {
	FreeSpeed  float64 // [m/s]
	Capacity   float64 // [veh/s]
	JamDensity float64 // [veh/m]
	WaveSpeed  float64 // size of the backward wave speed [m/s]
}

// Triangular returns the triangular relation of the given parameters, or an *[InvalidError].
func Triangular(p TriangularParams) (Relation, error) {
	var v violations
	given := 0
	for _, f := range []struct {
		name  string
		value float64
	}{{"FreeSpeed", p.FreeSpeed}, {"Capacity", p.Capacity}, {"JamDensity", p.JamDensity}, {"WaveSpeed", p.WaveSpeed}} {
		if f.value == 0 {
			continue
		}
		given++
		v.positive(f.name, f.value)
	}
	if given < 3 {
		v.add("", RuleRequired, given, "at least three of free-flow speed, capacity, jam density and backward wave speed")
	}
	if err := v.err(); err != nil {
		return Relation{}, err
	}
	complete, missing := p.complete()
	if missing != "" {
		v.add(missing, RuleRange, nil, "the other three leave no positive value for it")
		return Relation{}, v.err()
	}
	if given == 4 {
		implied := p.JamDensity / (1/p.FreeSpeed + 1/p.WaveSpeed)
		if math.Abs(implied-p.Capacity) > consistency*p.Capacity {
			v.add("Capacity", RuleConflict, p.Capacity, fmt.Sprintf("%g, which the other three imply", implied))
			return Relation{}, v.err()
		}
	}
	critical := complete.Capacity / complete.FreeSpeed
	return build([]piece{
		{lo: 0, hi: critical, cr: complete.FreeSpeed},
		{lo: critical, hi: complete.JamDensity, kr: complete.JamDensity, cr: -complete.Capacity / (complete.JamDensity - critical)},
	}, complete.Capacity)
}

// complete fills in the one missing parameter; missing names it where it has no positive value.
func (p TriangularParams) complete() (full TriangularParams, missing string) {
	full = p
	name := ""
	switch 0.0 {
	case p.Capacity:
		name, full.Capacity = "Capacity", p.JamDensity/(1/p.FreeSpeed+1/p.WaveSpeed)
	case p.JamDensity:
		name, full.JamDensity = "JamDensity", p.Capacity/p.FreeSpeed+p.Capacity/p.WaveSpeed
	case p.WaveSpeed:
		name, full.WaveSpeed = "WaveSpeed", p.Capacity/(p.JamDensity-p.Capacity/p.FreeSpeed)
	case p.FreeSpeed:
		name, full.FreeSpeed = "FreeSpeed", p.Capacity/(p.JamDensity-p.Capacity/p.WaveSpeed)
	default:
		return full, ""
	}
	for _, x := range []float64{full.Capacity, full.JamDensity, full.WaveSpeed, full.FreeSpeed} {
		if !(x > 0) || math.IsInf(x, 0) {
			return full, name
		}
	}
	return full, ""
}

// TrapezoidalParams describes a trapezoidal relation: flow rises at FreeSpeed to Capacity, stays there, and
// falls with slope -WaveSpeed to zero at JamDensity. All four are needed.
type TrapezoidalParams struct {
	FreeSpeed  float64 // [m/s]
	Capacity   float64 // [veh/s], at most that of the triangle that the other three span
	JamDensity float64 // [veh/m]
	WaveSpeed  float64 // size of the backward wave speed [m/s]
}

// Trapezoidal returns the trapezoidal relation of the given parameters, or an *[InvalidError]. With the
// capacity of the whole triangle (to six digits) it is the triangular relation.
func Trapezoidal(p TrapezoidalParams) (Relation, error) {
	var v violations
	v.positive("FreeSpeed", p.FreeSpeed)
	v.positive("Capacity", p.Capacity)
	v.positive("JamDensity", p.JamDensity)
	v.positive("WaveSpeed", p.WaveSpeed)
	if err := v.err(); err != nil {
		return Relation{}, err
	}
	apex := p.JamDensity / (1/p.FreeSpeed + 1/p.WaveSpeed)
	if p.Capacity > apex*(1+consistency) {
		v.add("Capacity", RuleRange, p.Capacity, fmt.Sprintf("at most %g, the apex of the triangle that the other three span", apex))
		return Relation{}, v.err()
	}
	if p.Capacity >= apex*(1-consistency) {
		return Triangular(TriangularParams{FreeSpeed: p.FreeSpeed, Capacity: p.Capacity, JamDensity: p.JamDensity})
	}
	lo, hi := p.Capacity/p.FreeSpeed, p.JamDensity-p.Capacity/p.WaveSpeed
	return build([]piece{
		{lo: 0, hi: lo, cr: p.FreeSpeed},
		{lo: lo, hi: hi, kr: lo, qr: p.Capacity},
		{lo: hi, hi: p.JamDensity, kr: p.JamDensity, cr: -p.WaveSpeed},
	}, p.Capacity)
}

// Greenshields returns the relation whose speed falls linearly from freeSpeed [m/s] at density zero to zero
// at jamDensity [veh/m]: q = vf k (1 - k/kj) (Greenshields 1935, Proc. Highway Research Board 14, 448-477).
func Greenshields(freeSpeed, jamDensity float64) (Relation, error) {
	var v violations
	v.positive("FreeSpeed", freeSpeed)
	v.positive("JamDensity", jamDensity)
	if err := v.err(); err != nil {
		return Relation{}, err
	}
	critical := jamDensity / 2
	d := -2 * freeSpeed / jamDensity
	return build([]piece{
		{lo: 0, hi: critical, cr: freeSpeed, d: d},
		{lo: critical, hi: jamDensity, kr: jamDensity, cr: -freeSpeed, d: d},
	}, freeSpeed*jamDensity/4)
}

// QuadraticFree returns the relation whose speed falls linearly from freeSpeed [m/s] at density zero to
// criticalSpeed [m/s] at criticalDensity [veh/m], and whose flow then falls linearly to zero at jamDensity
// [veh/m]. The capacity is criticalSpeed*criticalDensity, so criticalSpeed must be at least half of
// freeSpeed (else the flow would already fall before criticalDensity) and less than freeSpeed.
func QuadraticFree(freeSpeed, criticalSpeed, criticalDensity, jamDensity float64) (Relation, error) {
	var v violations
	v.positive("FreeSpeed", freeSpeed)
	v.positive("CriticalSpeed", criticalSpeed)
	v.positive("CriticalDensity", criticalDensity)
	v.positive("JamDensity", jamDensity)
	if err := v.err(); err != nil {
		return Relation{}, err
	}
	if criticalSpeed < freeSpeed/2 {
		v.add("CriticalSpeed", RuleConcave, criticalSpeed, fmt.Sprintf("at least half of the free-flow speed (%g), so that the flow rises up to the critical density", freeSpeed/2))
	}
	if criticalSpeed >= freeSpeed {
		v.add("CriticalSpeed", RuleRange, criticalSpeed, fmt.Sprintf("less than the free-flow speed %g (equal speeds are the triangular relation)", freeSpeed))
	}
	if jamDensity <= criticalDensity {
		v.add("JamDensity", RuleRange, jamDensity, fmt.Sprintf("more than the critical density %g", criticalDensity))
	}
	if err := v.err(); err != nil {
		return Relation{}, err
	}
	capacity := criticalSpeed * criticalDensity
	return build([]piece{
		{lo: 0, hi: criticalDensity, cr: freeSpeed, d: -2 * (freeSpeed - criticalSpeed) / criticalDensity},
		{lo: criticalDensity, hi: jamDensity, kr: jamDensity, cr: -capacity / (jamDensity - criticalDensity)},
	}, capacity)
}

// FlowPoint is a corner of a piecewise linear relation.
type FlowPoint struct {
	Density float64 // [veh/m]
	Flow    float64 // [veh/s]
}

// PiecewiseLinear returns the relation through the given corners, joined by straight lines: the first at
// density and flow zero, the last at jam density and flow zero, densities rising, slopes falling.
func PiecewiseLinear(corners []FlowPoint) (Relation, error) {
	var v violations
	checkCorners(corners, &v)
	if err := v.err(); err != nil {
		return Relation{}, err
	}
	capacity := 0.0
	for _, c := range corners {
		capacity = math.Max(capacity, c.Flow)
	}
	pieces := make([]piece, 0, len(corners)-1)
	for i := 1; i < len(corners); i++ {
		a, b := corners[i-1], corners[i]
		p := piece{lo: a.Density, hi: b.Density, kr: a.Density, qr: a.Flow, cr: (b.Flow - a.Flow) / (b.Density - a.Density)}
		if p.cr < 0 {
			p.kr, p.qr = b.Density, b.Flow
		}
		pieces = append(pieces, p)
	}
	// What rounds to one straight line is one straight line: a kink of 1e-16 would only breed waves.
	merged := pieces[:1]
	for _, p := range pieces[1:] {
		last := &merged[len(merged)-1]
		if math.Abs(p.cr-last.cr) > closeness*corners[1].Flow/corners[1].Density {
			merged = append(merged, p)
			continue
		}
		last.hi = p.hi
		if last.cr < 0 {
			last.kr, last.qr = p.kr, p.qr
		}
	}
	return build(merged, capacity)
}

func checkCorners(corners []FlowPoint, v *violations) {
	if len(corners) < 3 {
		v.add("", RuleRequired, len(corners), "at least three corners: the origin, one at capacity, one at jam density")
		return
	}
	for i, c := range corners {
		at := fmt.Sprintf("[%d]", i)
		v.notNegative(at+".Density", c.Density)
		v.notNegative(at+".Flow", c.Flow)
		if i > 0 && !(c.Density > corners[i-1].Density) {
			v.add(at+".Density", RuleOrder, c.Density, fmt.Sprintf("more than the corner before it, %g", corners[i-1].Density))
		}
	}
	if len(v.list) > 0 {
		return
	}
	last := len(corners) - 1
	if corners[0] != (FlowPoint{}) {
		v.add("[0]", RuleRequired, corners[0], "the origin: density 0, flow 0")
	}
	if corners[last].Flow != 0 {
		v.add(fmt.Sprintf("[%d].Flow", last), RuleRequired, corners[last].Flow, "0: the last corner is the jam density")
	}
	slope := math.Inf(1)
	for i := 1; i <= last; i++ {
		next := (corners[i].Flow - corners[i-1].Flow) / (corners[i].Density - corners[i-1].Density)
		if next > slope+closeness*math.Abs(slope) {
			v.add(fmt.Sprintf("[%d]", i-1), RuleConcave, corners[i-1], fmt.Sprintf("the slope must not rise with density; it rises here from %g to %g m/s", slope, next))
		}
		slope = next
	}
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

// Lanes returns the relation of n lanes, each of which behaves like r: q_n(k) = n q(k/n). n may be any
// positive number (a narrow lane may count as less than one); Lanes panics on any other.
func (r Relation) Lanes(n float64) Relation {
	if !(n > 0) || math.IsInf(n, 0) {
		panic("solver: Relation.Lanes needs a positive, finite number")
	}
	scaled := *r.diagram
	scaled.capacity *= n
	scaled.criticalLo *= n
	scaled.criticalHi *= n
	scaled.jam *= n
	scaled.pieces = make([]piece, len(r.diagram.pieces))
	for i, p := range r.diagram.pieces {
		scaled.pieces[i] = piece{lo: n * p.lo, hi: n * p.hi, kr: n * p.kr, qr: n * p.qr, cr: p.cr, d: p.d / n}
	}
	return Relation{diagram: &scaled}
}

// Valid reports whether r was made by one of the constructors.
func (r Relation) Valid() bool { return r.diagram != nil }

// Capacity is the greatest flow [veh/s].
func (r Relation) Capacity() float64 { return r.diagram.capacity }

// JamDensity is the greatest density [veh/m], at which the flow is zero.
func (r Relation) JamDensity() float64 { return r.diagram.jam }

// FreeSpeed is the speed at density zero [m/s], the reference for delays.
func (r Relation) FreeSpeed() float64 { return r.diagram.freeSpeed }

// CriticalDensity returns the least and the greatest density at which the flow is the capacity [veh/m];
// they differ only where the relation has a plateau. Denser than the greatest is congested.
func (r Relation) CriticalDensity() (least, greatest float64) {
	return r.diagram.criticalLo, r.diagram.criticalHi
}

// Flow returns q(k) [veh/s] for a density in [0, jam density].
func (r Relation) Flow(k float64) float64 { return r.diagram.flow(k) }

// WaveSpeed returns dq/dk [m/s] for a density in [0, jam density]; at a corner, that of the piece below it.
func (r Relation) WaveSpeed(k float64) float64 {
	return r.diagram.pieces[r.diagram.pieceBelow(k)].waveSpeed(k)
}

// Speed returns the vehicle speed q/k [m/s]; at density zero its limit, the free-flow speed.
func (r Relation) Speed(k float64) float64 { return r.diagram.speed(k) }

// Demand returns the most that can be sent on from a place of density k [veh/s] (Daganzo 1995, Transp. Res. B
// 29, 79-93; Lebacque 1996): q(k) up to the critical density, then the capacity.
func (r Relation) Demand(k float64) float64 {
	if k >= r.diagram.criticalLo {
		return r.diagram.capacity
	}
	return r.diagram.flow(k)
}

// Supply returns the most that a place of density k can take in [veh/s]: the capacity up to the critical
// density, then q(k).
func (r Relation) Supply(k float64) float64 {
	if k <= r.diagram.criticalHi {
		return r.diagram.capacity
	}
	return r.diagram.flow(k)
}

// FreeDensity returns the density of free flow at q [veh/m], for a flow in [0, capacity].
func (r Relation) FreeDensity(q float64) float64 { return r.diagram.freeDensity(q) }

// CongestedDensity returns the congested density whose flow is q [veh/m], for a flow in [0, capacity].
func (r Relation) CongestedDensity(q float64) float64 { return r.diagram.congestedDensity(q) }

// Curved reports whether the relation has a piece that is not a straight line.
func (r Relation) Curved() bool { return r.diagram.curved(0, r.diagram.jam) }

// ShockSpeed returns the speed of a shock between two states (Rankine-Hugoniot): the slope of the chord
// between them [m/s]; between equal densities, the wave speed.
func (r Relation) ShockSpeed(kUp, kDown float64) float64 {
	return r.diagram.secant(r.diagram.pieceBelow(kUp), kUp, r.diagram.pieceBelow(kDown), kDown)
}

// pieceBelow is the index of the piece that holds k; a corner belongs to the piece below it.
func (c *diagram) pieceBelow(k float64) int {
	for i := range c.pieces {
		if k <= c.pieces[i].hi {
			return i
		}
	}
	return len(c.pieces) - 1
}

// pieceAbove is the index of the piece that holds k; a corner belongs to the piece above it.
func (c *diagram) pieceAbove(k float64) int {
	for i := len(c.pieces) - 1; i > 0; i-- {
		if k >= c.pieces[i].lo {
			return i
		}
	}
	return 0
}

func (c *diagram) flow(k float64) float64 { return c.pieces[c.pieceBelow(k)].flow(k) }

func (c *diagram) speed(k float64) float64 {
	if k <= 0 {
		return c.freeSpeed
	}
	p := &c.pieces[0]
	if k <= p.hi {
		return p.cr + 0.5*p.d*k // q/k of the piece through the origin, without the quotient
	}
	return math.Max(0, c.flow(k)) / k
}

func (c *diagram) curved(from, to float64) bool {
	for i := range c.pieces {
		if p := &c.pieces[i]; p.d != 0 && p.hi > from && p.lo < to {
			return true
		}
	}
	return false
}

func (c *diagram) freeDensity(q float64) float64 {
	if q >= c.capacity*(1-closeness) {
		return c.criticalLo
	}
	for i := range c.pieces {
		p := &c.pieces[i]
		if p.hi >= c.criticalLo || p.flow(p.hi) >= q {
			return math.Min(p.hi, math.Max(p.lo, p.density(q)))
		}
	}
	return c.criticalLo
}

func (c *diagram) congestedDensity(q float64) float64 {
	if q >= c.capacity*(1-closeness) {
		return c.criticalHi
	}
	for i := len(c.pieces) - 1; i >= c.congested; i-- {
		p := &c.pieces[i]
		if i == c.congested || p.flow(p.lo) >= q {
			return math.Min(p.hi, math.Max(p.lo, p.density(q)))
		}
	}
	return c.criticalHi
}

// secant is the chord slope between the states (pieceA, a) and (pieceB, b): within one piece the mean wave
// speed, which loses no digits however close the densities are.
func (c *diagram) secant(pieceA int, a float64, pieceB int, b float64) float64 {
	pa, pb := &c.pieces[pieceA], &c.pieces[pieceB]
	if pieceA == pieceB {
		return 0.5 * (pa.waveSpeed(a) + pa.waveSpeed(b))
	}
	if a == b {
		return 0.5 * (pa.waveSpeed(a) + pb.waveSpeed(b))
	}
	return (pb.flow(b) - pa.flow(a)) / (b - a)
}

// same reports whether two curves are the same relation, number for number.
func (c *diagram) same(o *diagram) bool {
	if c == o {
		return true
	}
	if len(c.pieces) != len(o.pieces) {
		return false
	}
	for i := range c.pieces {
		if c.pieces[i] != o.pieces[i] {
			return false
		}
	}
	return true
}

func (v *violations) finite(field string, x float64) bool {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		v.add(field, RuleFinite, x, "a finite number")
		return false
	}
	return true
}

func (v *violations) positive(field string, x float64) {
	if v.finite(field, x) && x <= 0 {
		v.add(field, RulePositive, x, "more than 0")
	}
}

func (v *violations) notNegative(field string, x float64) {
	if v.finite(field, x) && x < 0 {
		v.add(field, RuleNotNegative, x, "0 or more")
	}
}
