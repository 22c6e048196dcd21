package solver_test

import (
	"math"
	"slices"
	"testing"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// roundings is the relative error by which a state may miss the end of its range: 2^-40, which the solver
// states as the size below which it takes states for equal.
const roundings = 0x1p-40

// TestStatesStayInRange: densities in [0, kj], flows in [0, capacity], speeds in [0, vf], and each state on
// its relation; congested is denser than critical.
func TestStatesStayInRange(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for range 40 {
			x, time := s.somewhere(), s.sometime()
			a := s.sample(t, x, time)
			r := s.relationAt(x)
			inRange(t, r, a.Up)
			inRange(t, r, a.Down)
			if math.IsNaN(a.Count) {
				t.Errorf("N(%g, %g) is not a number", x, time)
			}
		}
	})
}

func inRange(t testing.TB, r solver.Relation, a solver.State) {
	t.Helper()
	kj, q, vf := r.JamDensity(), r.Capacity(), r.FreeSpeed()
	if !(a.Density >= 0 && a.Density <= kj*(1+roundings) && a.Flow >= 0 && a.Flow <= q*(1+roundings) && a.Speed >= 0 && a.Speed <= vf*(1+roundings)) {
		t.Errorf("out of range: %+v with jam density %g, capacity %g, free speed %g", a, kj, q, vf)
	}
	if want := r.Flow(math.Min(a.Density, kj)); math.Abs(a.Flow-want) > roundings*q {
		t.Errorf("flow %.17g at density %.17g, the relation says %.17g", a.Flow, a.Density, want)
	}
	if math.Abs(a.Speed*a.Density-a.Flow) > roundings*q {
		t.Errorf("speed times density is not the flow: %+v", a)
	}
	if _, critical := r.CriticalDensity(); math.Abs(a.Density-critical) > roundings*kj && a.Congested != (a.Density > critical) {
		t.Errorf("density %.17g, critical %.17g, congested %v", a.Density, critical, a.Congested)
	}
}

// TestNFallsDownstreamAndRisesInTime: its slopes are minus the density and the flow.
func TestNFallsDownstreamAndRisesInTime(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for range 20 {
			x, time := s.somewhere(), s.sometime()
			y, later := s.somewhere(), s.sometime()
			x, y, time, later = math.Min(x, y), math.Max(x, y), math.Min(time, later), math.Max(time, later)
			n := s.n(t, x, time)
			if fall := n - s.n(t, y, time); fall < -s.count || fall > s.densest()*(y-x)+s.count {
				t.Errorf("N falls by %g from %g to %g m at %g s", fall, x, y, time)
			}
			if rise := s.n(t, x, later) - n; rise < -s.count || rise > s.flowAtMost()*(later-time)+s.count {
				t.Errorf("N rises by %g from %g to %g s at %g m", rise, time, later, x)
			}
		}
	})
}

// switches cuts a span of time wherever a schedule or signal changes.
func (s *solved) switches(from, to float64) []float64 {
	cuts := []float64{from, to}
	add := func(x float64) {
		if x > from && x < to {
			cuts = append(cuts, x)
		}
	}
	for _, b := range s.scenario.Bottlenecks {
		for _, p := range b.Capacity {
			add(p.Start)
		}
	}
	for _, p := range s.scenario.Exit.Capacity {
		add(p.Start)
	}
	for _, g := range s.scenario.Signals {
		for _, w := range reference.Greens(g.Plan, s.scenario.Horizon) {
			add(w.Start)
			add(w.End)
		}
	}
	slices.Sort(cuts)
	return cuts
}

// mean is the greatest mean of what a place lets pass over a span without switches, during which it is linear.
func (s *solved) mean(place, from, to float64) float64 { return s.lets(place, (from+to)/2) }
