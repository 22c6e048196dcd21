package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

func (s *solved) totalsAt(t testing.TB, time float64) solver.CorridorTotals {
	t.Helper()
	a, err := s.Totals(time)
	if err != nil {
		t.Fatalf("Totals(%g): %v", time, err)
	}
	return a
}

// same compares two counts of vehicles.
func (s *solved) same(t testing.TB, what string, time, a, b float64) {
	t.Helper()
	if !(math.Abs(a-b) <= s.count) {
		t.Errorf("at %g s: %s: %.15g and %.15g differ by %.2g, allowed %.2g", time, what, a, b, a-b, s.count)
	}
}

// TestVehiclesAreConserved: what was there and what came in is what left and what is there, on the corridor
// and on each segment; what leaves a segment enters the next.
func TestVehiclesAreConserved(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for _, time := range []float64{0, s.sometime(), s.scenario.Horizon} {
			total := s.totalsAt(t, time)
			s.same(t, "initial + entered, left + stored", time, total.Initial+total.Entered, total.Left+total.Stored)
			in, stored := total.Entered, 0.0
			for i, g := range total.Segments {
				s.same(t, "segment's initial + entered, left + stored", time, g.Initial+g.Entered, g.Left+g.Stored)
				s.same(t, "left the segment before, entered this one", time, in, g.Entered)
				in, stored = g.Left, stored+g.Stored
				if g.Stored < -s.count || g.Stored > s.scenario.Segments[i].Relation.JamDensity()*s.scenario.Segments[i].Length+s.count {
					t.Errorf("at %g s: %g vehicles stored on segment %d", time, g.Stored, i)
				}
			}
			s.same(t, "left the last segment, left the corridor", time, in, total.Left)
			s.same(t, "stored on the segments, on the corridor", time, stored, total.Stored)
		}
	})
}

// TestDemandEntersWaitsOrIsTurnedAway: every vehicle that wished to enter is accounted for.
func TestDemandEntersWaitsOrIsTurnedAway(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for _, time := range []float64{s.sometime(), s.sometime(), s.scenario.Horizon} {
			total := s.totalsAt(t, time)
			wished := wishing(s.scenario.Entry.Demand, time)
			s.same(t, "wished to enter; entered, waiting and turned away", time, wished, total.Entered+total.Waiting+total.TurnedAway)
			if total.Waiting < 0 || total.TurnedAway < 0 || total.Waiting > 0 && total.TurnedAway > 0 {
				t.Errorf("at %g s: waiting %g, turned away %g", time, total.Waiting, total.TurnedAway)
			}
			if kept := s.scenario.Entry.Excess == solver.Waits; kept && total.TurnedAway != 0 || !kept && total.Waiting != 0 {
				t.Errorf("at %g s: waiting %g, turned away %g, though excess demand is %v", time, total.Waiting, total.TurnedAway, s.scenario.Entry.Excess)
			}
		}
	})
}

// TestCountsAreTheTotals: N at the two ends says how many have entered and left, and N falls over each segment
// by the vehicles stored on it.
func TestCountsAreTheTotals(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		edges := s.edges()
		for _, time := range []float64{0, s.sometime(), s.scenario.Horizon} {
			total := s.totalsAt(t, time)
			s.same(t, "N at the entry, entered", time, s.n(t, edges[0], time), total.Entered)
			s.same(t, "N at the exit, left - initial", time, s.n(t, edges[len(edges)-1], time), total.Left-total.Initial)
			for i, g := range total.Segments {
				s.same(t, "N over the segment, stored", time, s.n(t, edges[i], time)-s.n(t, edges[i+1], time), g.Stored)
			}
		}
	})
}

// TestTotalsAddUp: the corridor's totals are the sums of its segments', and nothing that has been driven or
// spent is ever taken back.
func TestTotalsAddUp(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		h := s.scenario.Horizon
		var before solver.CorridorTotals
		for _, time := range []float64{0.2 * h, 0.5 * h, 0.9 * h, h} {
			total := s.totalsAt(t, time)
			var vt, vd, delay, free float64
			for i, g := range total.Segments {
				vt, vd, delay = vt+g.VehicleTime, vd+g.VehicleDistance, delay+g.Delay
				free += g.VehicleDistance / s.scenario.Segments[i].Relation.FreeSpeed()
			}
			spent := h * s.count
			within(t, "vehicle time by segments", vt, total.VehicleTime, spent)
			within(t, "delay by segments", delay, total.Delay, spent)
			within(t, "delay by its definition", total.VehicleTime-free, total.Delay, spent)
			within(t, "vehicle distance by segments", vd, total.VehicleDistance, spent*s.fastest())
			if total.VehicleTime < before.VehicleTime-spent || total.VehicleDistance < before.VehicleDistance-spent*s.fastest() ||
				total.Delay < before.Delay-spent || total.WaitingTime < before.WaitingTime-spent {
				t.Errorf("totals fell: %+v, then %+v", before, total)
			}
			before = total
		}
	})
}

// within compares two numbers with an absolute tolerance.
func within(t testing.TB, what string, a, b, tolerance float64) {
	t.Helper()
	if !(math.Abs(a-b) <= tolerance) {
		t.Errorf("%s: %.15g and %.15g differ by %.2g, allowed %.2g", what, a, b, a-b, tolerance)
	}
}
