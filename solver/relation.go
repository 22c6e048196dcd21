package solver

import "math"

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
func (r Relation) Curved() bool { return r.diagram.curved() }

// ShockSpeed returns the speed of a shock between two states (Rankine-Hugoniot): the slope of the chord
// between them [m/s]; between equal densities, the wave speed.
func (r Relation) ShockSpeed(kUp, kDown float64) float64 {
	return r.diagram.secant(r.diagram.pieceBelow(kUp), kUp, r.diagram.pieceBelow(kDown), kDown)
}
