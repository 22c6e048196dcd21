package solver

import (
	"fmt"
	"math"
)

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
	var name string
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
		capacity = max(capacity, c.Flow)
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
		at := item("", i)
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
			v.add(item("", i-1), RuleConcave, corners[i-1], fmt.Sprintf("the slope must not rise with density; it rises here from %g to %g m/s", slope, next))
		}
		slope = next
	}
}
