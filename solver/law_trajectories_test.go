package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// drive asks for the trajectory of a vehicle that must be answered.
func (s *solved) drive(t testing.TB, x, time float64) solver.Trajectory {
	t.Helper()
	tr, err := s.Trajectory(x, time)
	if err != nil {
		t.Fatalf("Trajectory(%g, %g): %v", x, time, err)
	}
	return tr
}

// places are n places of a trajectory at even times from its start to its end.
func places(tr solver.Trajectory, start float64, n int) (times, at []float64) {
	for i := range n + 1 {
		time := start + (tr.End.Time-start)*float64(i)/float64(n)
		times, at = append(times, time), append(at, tr.Position(time))
	}
	return times, at
}

// TestTrajectoriesAreLevelCurvesOfN: a vehicle keeps its number.
func TestTrajectoriesAreLevelCurvesOfN(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for range 3 {
			x, time := s.somewhere(), s.sometime()
			n := s.n(t, x, time)
			times, at := places(s.drive(t, x, time), time, 20)
			for i := range times {
				if now := s.n(t, at[i], times[i]); math.Abs(now-n) > 2*s.count {
					t.Errorf("vehicle %.12g from (%g, %g) is at %.12g by %g s, where N is %.12g, off by %.2g", n, x, time, at[i], times[i], now, now-n)
				}
			}
		}
	})
}

// TestTrajectoriesNeverGoBackward, nor faster than the free speed.
func TestTrajectoriesNeverGoBackward(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		near := promised * (s.exit() - s.scenario.Origin)
		x, time := s.somewhere(), s.sometime()
		times, at := places(s.drive(t, x, time), time, 50)
		within(t, "where it starts", at[0], x, near)
		for i := 1; i < len(at); i++ {
			way, span := at[i]-at[i-1], times[i]-times[i-1]
			if way < -near || way > s.fastest()*span+near {
				t.Errorf("from (%g, %g): %g m in %g s at %g s", x, time, way, span, times[i])
			}
		}
	})
}

// TestTrajectoriesNeverCross: who starts later from the same place stays behind.
func TestTrajectoriesNeverCross(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		near := promised * (s.exit() - s.scenario.Origin)
		x, first, second := s.somewhere(), s.sometime(), s.sometime()
		first, second = math.Min(first, second), math.Max(first, second)
		leader, follower := s.drive(t, x, first), s.drive(t, x, second)
		end := math.Min(leader.End.Time, follower.End.Time)
		for i := range 41 {
			time := second + (end-second)*float64(i)/40
			if end < second {
				break
			}
			if gap := leader.Position(time) - follower.Position(time); gap < -2*near {
				t.Errorf("from %g m at %g and %g s: at %g s the follower is %g m ahead", x, first, second, time, -gap)
			}
		}
	})
}

// TestPassingTimesBelongToPositions: a vehicle is where it passes when it passes there, and its travel time is
// the difference of passing times, never below that at free speed.
func TestPassingTimesBelongToPositions(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		x, to, time := s.somewhere(), s.somewhere(), s.sometime()
		x, to = math.Min(x, to), math.Max(x, to)
		tr := s.drive(t, x, time)
		passing, ok := tr.PassingTime(to)
		trip, err := s.TravelTime(x, to, time)
		if err != nil || trip.Arrived != ok {
			t.Fatalf("TravelTime(%g, %g, %g): arrived %v, the trajectory says %v, error %v", x, to, time, trip.Arrived, ok, err)
		}
		if !ok {
			if tr.Left || tr.End.Place > to {
				t.Errorf("ends at %g m, yet never passed %g m", tr.End.Place, to)
			}
			return
		}
		brief := promised * s.scenario.Horizon
		within(t, "place at the passing time", tr.Position(passing), to, promised*(s.exit()-s.scenario.Origin)+s.fastest()*brief)
		within(t, "arrival and passing time", trip.Arrival, passing, brief)
		within(t, "duration", trip.Duration, passing-time, brief)
		within(t, "delay", trip.Delay, trip.Duration-trip.FreeFlow, brief)
		if trip.Delay < -brief {
			t.Errorf("faster than free flow: %+v", trip)
		}
	})
}
