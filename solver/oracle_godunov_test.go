package solver_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver/internal/reference"
)

// convergence is one corner of what the solver takes, to be tried on random corridors of its own.
type convergence struct {
	name  string
	order float64 // at which the reference must be seen to approach the exact count
	features
}

// The order at which a Godunov scheme approaches the exact solution is known. It is one half wherever a contact
// moves along a straight piece of the relation, which the scheme smears over the root of the time (Kuznetsov 1976,
// USSR Comput. Math. Math. Phys. 16(6), 105-119), and bottlenecks and signals pass that on to the counts. On curved
// relations there are no contacts; it is one but for the logarithm of a fan (see reference.FanOrder), which takes
// up to 1/ln(cells crossed), about 0.3 on roads of this length.
const (
	orderStraight = 0.5
	orderCurved   = 0.7
)

// convergences go through the relations and the node kinds, alone and together.
func convergences() []convergence {
	straight, curved := straightKinds, []relationKind{linearSpeedKind}
	out := []convergence{
		{"joins", orderStraight, features{kinds: straightKinds, segments: 5, steps: true}},
		{"bottlenecks/straight", orderStraight, features{kinds: straight, segments: 1, bottlenecks: 3, steps: true, slopes: true}},
		{"bottlenecks/curved", orderCurved, features{kinds: curved, segments: 1, bottlenecks: 3, steps: true}},
		{"signals/straight", orderStraight, features{kinds: straight, segments: 1, signals: 3, steps: true}},
		{"signals/curved", orderCurved, features{kinds: curved, segments: 1, signals: 3, steps: true}},
		{"entry/straight", orderStraight, features{kinds: straight, segments: 1, steps: true, slopes: true, refuse: true, profile: true}},
		{"entry/curved", orderCurved, features{kinds: curved, segments: 1, steps: true, refuse: true, profile: true}},
		{"exit/straight", orderStraight, features{kinds: straight, segments: 2, exit: true, steps: true, slopes: true}},
		{"exit/curved", orderCurved, features{kinds: curved, segments: 2, exit: true, steps: true}},
		{"standing queues", orderStraight, features{kinds: allKinds, segments: 1, signals: 2, bottlenecks: 2, queues: true}},
		{"nodes at the ends", orderStraight, features{kinds: allKinds, segments: 1, signals: 6, bottlenecks: 6, atEnds: true, steps: true}},
		{"everything", orderStraight, anything},
	}
	for _, kind := range allKinds {
		order := orderStraight
		if kind == linearSpeedKind {
			order = orderCurved
		}
		out = append(out, convergence{"profile/" + kind.String(), order, features{kinds: []relationKind{kind}, segments: 1, profile: true, steps: true}})
	}
	return out
}

// refinements of the cells, each half of the one before: the finest are 1.6 m wide.
var refinements = []int{4, 8, 16, 32}

// TestGodunovConvergesToTheExactCount: a finite-volume scheme that shares nothing with the solver approaches
// its answers at the order known for it as its cells shrink, in every part of what the solver takes. A wrong answer of
// the solver would leave a difference that does not shrink.
func TestGodunovConvergesToTheExactCount(t *testing.T) {
	for _, v := range convergences() {
		t.Run(v.name, func(t *testing.T) {
			t.Parallel()
			corridors := 12
			if testing.Short() {
				corridors = 3
			}
			sums := make([]float64, len(refinements))
			for seed := range uint64(corridors) {
				onCorridor(t, drawCorridor(seedsOf(v.name)+seed, v.features), func(t testing.TB, s *solved) {
					s.approached(t, sums, v.order)
				})
			}
			t.Logf("mean error of the count %.3v of the vehicles, order %.2f", sums, reference.Order(sums))
			if order := reference.Order(sums); sums[0] > agreed && order < v.order {
				t.Errorf("differences %.3v shrink at order %.2f only", sums, order)
			}
		})
	}
}

// agreed is a mean difference of counts, relative to all vehicles, below which only roundings are left to shrink.
const agreed = 1e-9

// approached adds the distances between the reference and the exact count, refined step by step, relative to
// the vehicles and the length of the road. Of a single corridor it asks half of the order: single events fall on
// single cells differently each time.
func (s *solved) approached(t testing.TB, sums []float64, order float64) {
	t.Helper()
	exact := func(x float64) float64 { return s.n(t, x, s.scenario.Horizon) }
	scale := s.corridor.vehicles() * (s.exit() - s.scenario.Origin)
	var errors []float64
	for i, refine := range refinements {
		r := reference.Godunov(s.scenario, reference.Options{Cell: 50, Refine: refine})
		e := r.CountDistance(r.Last(), exact) / scale
		errors = append(errors, e)
		sums[i] += e
	}
	if errors[0] > agreed && reference.Order(errors) < order/2 {
		t.Errorf("seed %d: differences %.3g shrink at order %.2f only; the last one by place:\n%s",
			s.seed, errors, reference.Order(errors), s.differences(t))
	}
}

// differences shows where the exact count and the reference part.
func (s *solved) differences(t testing.TB) string {
	r := reference.Godunov(s.scenario, reference.Options{Cell: 50, Refine: 8})
	counts, out := r.Counts(r.Last()), ""
	for i := 0; i < len(counts); i += max(1, len(counts)/20) {
		exact := s.n(t, r.Edges[i], s.scenario.Horizon)
		out += fmt.Sprintf("%10.1f m: exact %12.5f, reference %12.5f, differ %10.5f\n", r.Edges[i], exact, counts[i], exact-counts[i])
	}
	for i, place := range r.Gates {
		exact := s.n(t, place, s.scenario.Horizon) - s.n(t, place, 0)
		out += fmt.Sprintf("passed %10.1f m: exact %12.5f, reference %12.5f, differ %10.5f\n", place, exact, r.Last().Passed[i], exact-r.Last().Passed[i])
	}
	return out
}

// TestGodunovConvergesAtTheEntry: the vehicles that wait or are turned away agree too.
func TestGodunovConvergesAtTheEntry(t *testing.T) {
	f := features{kinds: allKinds, segments: 1, bottlenecks: 1, steps: true, refuse: true, queues: true}
	onRandomCorridors(t, f, func(t testing.TB, s *solved) {
		if s.seed%16 != 0 {
			return
		}
		total := s.totalsAt(t, s.scenario.Horizon)
		var errors []float64
		for _, refine := range refinements {
			last := reference.Godunov(s.scenario, reference.Options{Cell: 50, Refine: refine}).Last()
			errors = append(errors, math.Abs(last.Waiting-total.Waiting)+math.Abs(last.TurnedAway-total.TurnedAway))
		}
		if errors[0] > s.count && errors[len(errors)-1] > s.count && reference.Order(errors) < orderStraight/2 {
			t.Errorf("seed %d: differences in vehicles outside %.3g shrink at order %.2f only", s.seed, errors, reference.Order(errors))
		}
	})
}
