package solver_test

import (
	"fmt"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// relationKind is one of the five kinds of relation that a user can give.
type relationKind int

const (
	triangularKind relationKind = iota
	trapezoidalKind
	brokenLineKind
	linearSpeedKind
	quadraticFreeKind
)

var (
	straightKinds = []relationKind{triangularKind, trapezoidalKind, brokenLineKind}
	curvedKinds   = []relationKind{linearSpeedKind, quadraticFreeKind}
	allKinds      = append(append([]relationKind{}, straightKinds...), curvedKinds...)
)

func (k relationKind) String() string {
	return [...]string{"triangular", "trapezoidal", "piecewise linear", "Greenshields", "quadratic free branch"}[k]
}

func (k relationKind) curved() bool { return k == linearSpeedKind || k == quadraticFreeKind }

// relationSpec is a relation by the numbers of one lane, so that it can be made in other units and be written
// down by the reference too.
type relationSpec struct {
	kind            relationKind
	vf, w, kj       float64
	capacity        float64 // trapezoidal
	kc, vc          float64 // quadratic free branch
	densities, flow []float64
	lanes           float64
}

// units are the sizes of the metre and the second in other units.
type units struct{ metre, second float64 }

var si = units{1, 1}

// in returns the same relation in other units.
func (s relationSpec) in(u units) relationSpec {
	speed, density, flow := u.metre/u.second, 1/u.metre, 1/u.second
	s.vf, s.w, s.vc = s.vf*speed, s.w*speed, s.vc*speed
	s.kj, s.kc, s.capacity = s.kj*density, s.kc*density, s.capacity*flow
	s.densities, s.flow = scaledBy(s.densities, density), scaledBy(s.flow, flow)
	return s
}

func scaledBy(x []float64, factor float64) []float64 {
	out := make([]float64, len(x))
	for i := range x {
		out[i] = x[i] * factor
	}
	return out
}

// relation makes the solver's relation; the numbers that are drawn are always valid.
func (s relationSpec) relation() solver.Relation {
	r, err := s.oneLane()
	if err != nil {
		panic(fmt.Sprintf("drawn relation %+v is refused: %v", s, err))
	}
	return r.Lanes(s.lanes)
}

func (s relationSpec) oneLane() (solver.Relation, error) {
	switch s.kind {
	case triangularKind:
		return solver.Triangular(solver.TriangularParams{FreeSpeed: s.vf, WaveSpeed: s.w, JamDensity: s.kj})
	case trapezoidalKind:
		return solver.Trapezoidal(solver.TrapezoidalParams{FreeSpeed: s.vf, WaveSpeed: s.w, JamDensity: s.kj, Capacity: s.capacity})
	case linearSpeedKind:
		return solver.Greenshields(s.vf, s.kj)
	case quadraticFreeKind:
		return solver.QuadraticFree(s.vf, s.vc, s.kc, s.kj)
	}
	var corners []solver.FlowPoint
	for i := range s.densities {
		corners = append(corners, solver.FlowPoint{Density: s.densities[i], Flow: s.flow[i]})
	}
	return solver.PiecewiseLinear(corners)
}

// law writes the same relation down without the solver.
func (s relationSpec) law() reference.Law {
	return map[relationKind]func() reference.Law{
		triangularKind:    func() reference.Law { return reference.TriangularLaw(s.vf, s.w, s.kj) },
		trapezoidalKind:   func() reference.Law { return reference.TrapezoidalLaw(s.vf, s.w, s.kj, s.capacity) },
		brokenLineKind:    func() reference.Law { return reference.PiecewiseLinearLaw(s.densities, s.flow) },
		linearSpeedKind:   func() reference.Law { return reference.GreenshieldsLaw(s.vf, s.kj) },
		quadraticFreeKind: func() reference.Law { return reference.QuadraticFreeLaw(s.vf, s.vc, s.kc, s.kj) },
	}[s.kind]().Lanes(s.lanes)
}

// relation draws the numbers of one kind: speeds of 8 to 35 m/s, 0.1 to 0.2 veh/m in a lane, 1 to 4 lanes.
func (d *dice) relation(kind relationKind) relationSpec {
	s := relationSpec{kind: kind, vf: d.in(8, 35), w: d.in(3, 7), kj: d.in(0.1, 0.2), lanes: float64(1 + d.IntN(4))}
	switch kind {
	case trapezoidalKind:
		s.capacity = d.in(0.5, 0.95) * s.kj * s.vf * s.w / (s.vf + s.w)
	case quadraticFreeKind:
		s.kc = d.in(0.15, 0.4) * s.kj
		s.vc = d.in(0.55, 0.95) * s.vf
	case brokenLineKind:
		s.densities, s.flow = d.brokenLine(s.vf, s.kj)
	}
	return s
}

// brokenLine draws a concave chain of three to five straight lines: slopes that fall, the last one such that
// the flow ends at zero; drawn again until that one is the steepest.
func (d *dice) brokenLine(vf, kj float64) (densities, flow []float64) {
	for {
		densities, flow = []float64{0}, []float64{0}
		slope, k, q := vf, 0.0, 0.0
		for range 2 + d.IntN(3) {
			width := d.in(0.03, 0.12) * kj
			k, q = k+width, q+slope*width
			densities, flow = append(densities, k), append(flow, q)
			slope -= d.in(0.2, 0.5) * vf
		}
		before := len(flow) - 2
		last := (flow[before+1] - flow[before]) / (densities[before+1] - densities[before])
		if q > 0 && -q/(kj-k) < last-0.02*vf {
			return append(densities, kj), append(flow, 0)
		}
	}
}
