package solver_test

import (
	"context"
	"math"
	"slices"
	"testing"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// alike solves another scenario and compares the counts of the same vehicles: N of the first at (x, t) and N
// of the other where the point went. It also compares vehicle time, so that no corner goes unseen.
func alike(t testing.TB, s *solved, other solver.Scenario, point func(x, t float64) (float64, float64), shift float64, u units) {
	t.Helper()
	o, err := solver.Solve(context.Background(), other, solver.Budget{})
	if err != nil {
		t.Fatalf("the other scenario: %v", err)
	}
	for range 30 {
		x, time := s.somewhere(), s.sometime()
		x2, time2 := point(x, time)
		a, err := o.At(x2, time2)
		if err != nil {
			t.Fatalf("At(%g, %g) of the other: %v", x2, time2, err)
		}
		if n := s.n(t, x, time); math.Abs(a.Count-shift-n) > 2*s.count {
			t.Errorf("N(%g, %g) = %.15g; in the other %.15g, off by %.2g", x, time, n, a.Count-shift, a.Count-shift-n)
		}
	}
	if shift != 0 {
		return
	}
	total, err := o.Totals(other.Horizon)
	if err != nil {
		t.Fatal(err)
	}
	ours := s.totalsAt(t, s.scenario.Horizon)
	within(t, "vehicle time", total.VehicleTime, ours.VehicleTime*u.second, 2*s.count*s.scenario.Horizon*u.second)
	within(t, "vehicle distance", total.VehicleDistance, ours.VehicleDistance*u.metre, 2*s.count*(s.exit()-s.scenario.Origin)*u.metre)
}

func asIs(x, t float64) (float64, float64) { return x, t }

// TestShiftOfPlace: a corridor that begins elsewhere has the same traffic there.
func TestShiftOfPlace(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		by := 7000.0
		alike(t, s, movedBy(s.scenario, by), func(x, t float64) (float64, float64) { return x + by, t }, 0, si)
	})
}

func movedBy(s solver.Scenario, by float64) solver.Scenario {
	s.Origin += by
	s.Bottlenecks, s.Signals, s.Initial.Profile = slices.Clone(s.Bottlenecks), slices.Clone(s.Signals), slices.Clone(s.Initial.Profile)
	for i := range s.Bottlenecks {
		s.Bottlenecks[i].Place += by
	}
	for i := range s.Signals {
		s.Signals[i].Place += by
	}
	for i := range s.Initial.Profile {
		s.Initial.Profile[i].Start += by
		s.Initial.Profile[i].End += by
	}
	return s
}

// TestUnitsOfMeasureDoNotMatter: the same corridor in other units of length and time. With length and time
// multiplied alike, this is the scaling of x and t together.
func TestUnitsOfMeasureDoNotMatter(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for _, u := range []units{{3.7, 3.7}, {3.28, 1}, {0.25, 1.0 / 60}} {
			there := func(x, t float64) (float64, float64) { return x * u.metre, t * u.second }
			alike(t, s, s.in(u), there, 0, u)
		}
	})
}

// TestACorridorCutByANodeThatDoesNothing: a bottleneck of unlimited capacity, and a join of equal segments,
// change nothing.
func TestACorridorCutByANodeThatDoesNothing(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		idle := s.scenario
		idle.Bottlenecks = append(slices.Clone(idle.Bottlenecks), solver.Bottleneck{
			Name: "idle", Place: s.free(), Capacity: solver.Schedule{{Rate: math.Inf(1)}}})
		alike(t, s, idle, asIs, 0, si)

		cut, i := s.scenario, s.d.IntN(len(s.specs))
		share := 0.2 + 0.6*s.d.Float64()
		first, second := cut.Segments[i], cut.Segments[i]
		first.Length, second.Length, second.Name = share*first.Length, (1-share)*first.Length, "second part"
		cut.Segments = slices.Concat(cut.Segments[:i], []solver.Segment{first, second}, cut.Segments[i+1:])
		alike(t, s, cut, asIs, 0, si)
	})
}

// free is a place where nothing stands.
func (s *solved) free() float64 {
	for {
		x := s.somewhere()
		if !slices.ContainsFunc(append(s.placed(), s.edges()...), func(y float64) bool { return math.Abs(x-y) < 1 }) {
			return x
		}
	}
}

// TestACycleIsItsWindows: a plan by cycle and offset, and the same greens as explicit times, are one plan.
func TestACycleIsItsWindows(t *testing.T) {
	f := anything
	f.signals = 4
	onRandomCorridors(t, f, func(t testing.TB, s *solved) {
		other := s.scenario
		other.Signals = slices.Clone(other.Signals)
		for i := range other.Signals {
			other.Signals[i].Plan = solver.Plan{Greens: reference.Greens(other.Signals[i].Plan, other.Horizon)}
		}
		alike(t, s, other, asIs, 0, si)
	})
}

// TestShiftInTime: a corridor in steady free flow to which everything happens later. The flow that it starts
// with passes everywhere until the shift is over, so N only grows by it.
func TestShiftInTime(t *testing.T) {
	f := anything
	f.profile, f.queues, f.atEnds = false, false, false
	onRandomCorridors(t, f, func(t testing.TB, s *solved) {
		const later = 137.5
		early := fromSteadyFlow(s.scenario)
		base, err := solveCorridor(corridor{seed: s.seed, specs: s.specs, scenario: early})
		if err != nil {
			t.Fatal(err)
		}
		after := func(x, t float64) (float64, float64) { return x, t + later }
		alike(t, base, delayed(early, later), after, early.Initial.BackgroundFlow*later, si)
	})
}
