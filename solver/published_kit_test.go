package solver_test

import (
	"context"
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// The published cases come in the trade's units; the solver speaks metres, seconds and vehicles. These are
// the sizes of the trade's units in the solver's.
const (
	kilometre = 1000.0
	mile      = 1609.344
	foot      = 0.3048
	minute    = 60.0
	hour      = 3600.0
	kmh       = kilometre / hour
	mph       = mile / hour
	perKm     = 1 / kilometre
	perMile   = 1 / mile
	perHour   = 1 / hour
	perMinute = 1 / minute
)

// exactness is the relative error that is allowed where input and theory are exact.
const exactness = 1e-9

// agree checks a value against the exact one.
func agree(t *testing.T, what string, got, want float64) {
	t.Helper()
	agreeWithin(t, what, got, want, exactness*math.Abs(want))
}

// agreeOn checks a value that may be zero against the exact one; scale is the size of what it is a part of.
func agreeOn(t *testing.T, what string, got, want, scale float64) {
	t.Helper()
	agreeWithin(t, what, got, want, exactness*scale)
}

// agreeWithin checks a value against one that is known to the given tolerance, such as half a unit of the
// last printed digit.
func agreeWithin(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %.12g, want %.12g (off by %.2g, allowed %.2g)", what, got, want, got-want, tolerance)
		return
	}
	t.Logf("%s = %.12g, off by %.1e", what, got, got-want)
}

// differ checks that a value is not the wrong one that was published.
func differ(t *testing.T, what string, got, wrong, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-wrong) > tolerance) {
		t.Errorf("%s = %.12g, which is the published error", what, got)
	}
}

// must passes on a value whose making must not fail.
func must[T any](value T, err error) func(t *testing.T) T {
	return func(t *testing.T) T {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return value
	}
}

// answerOf solves a scenario.
func answerOf(t *testing.T, s solver.Scenario) *solver.Solution {
	t.Helper()
	return must(solver.Solve(context.Background(), s, solver.Budget{}))(t)
}

// greenshields is the linear speed-density law.
func greenshields(t *testing.T, freeSpeed, jam float64) solver.Relation {
	t.Helper()
	return must(solver.Greenshields(freeSpeed, jam))(t)
}

// triangle is the triangular relation of any three of its four parameters.
func triangle(t *testing.T, p solver.TriangularParams) solver.Relation {
	t.Helper()
	return must(solver.Triangular(p))(t)
}

// throughStates is the piecewise linear relation through measured states (which must make it concave).
func throughStates(t *testing.T, jam float64, states ...solver.FlowPoint) solver.Relation {
	t.Helper()
	corners := append([]solver.FlowPoint{{}}, states...)
	return must(solver.PiecewiseLinear(append(corners, solver.FlowPoint{Density: jam})))(t)
}

// flat is a stretch of uniform density.
func flat(start, end, density float64) solver.ProfilePiece {
	return ramp(start, end, density, density)
}

// ramp is a stretch over which the density changes linearly.
func ramp(start, end, startDensity, endDensity float64) solver.ProfilePiece {
	return solver.ProfilePiece{Start: start, End: end, StartDensity: startDensity, EndDensity: endDensity}
}

// openRoad is a piece of an endless homogeneous road: nothing happens but the given density profile, and its
// ends carry on with what the profile has there.
func openRoad(r solver.Relation, horizon float64, profile ...solver.ProfilePiece) solver.Scenario {
	first, last := profile[0], profile[len(profile)-1]
	s := solver.Scenario{
		Origin:   first.Start,
		Segments: []solver.Segment{{Name: "road", Length: last.End - first.Start, Relation: r}},
		Entry:    solver.Entry{Demand: always(r.Flow(first.StartDensity))},
		Initial:  solver.Initial{Profile: profile},
		Horizon:  horizon,
	}
	if _, critical := r.CriticalDensity(); last.EndDensity > critical {
		s.Exit.Capacity = always(r.Flow(last.EndDensity))
	}
	return s
}

// always is a schedule that never changes.
func always(rate float64) solver.Schedule { return solver.Schedule{{Rate: rate}} }

// from is a step of a schedule.
func from(start, rate float64) solver.SchedulePiece {
	return solver.SchedulePiece{Start: start, Rate: rate}
}

// at asks for the state at a point.
func at(t *testing.T, s *solver.Solution, x, time float64) solver.Sample {
	t.Helper()
	return must(s.At(x, time))(t)
}

// passed is the number of vehicles that crossed x from time a to time b.
func passed(t *testing.T, s *solver.Solution, x, a, b float64) float64 {
	t.Helper()
	return at(t, s, x, b).Count - at(t, s, x, a).Count
}

// totals asks for the totals over [0, time].
func totals(t *testing.T, s *solver.Solution, time float64) solver.CorridorTotals {
	t.Helper()
	return must(s.Totals(time))(t)
}

// tailOf is the place of the tail of a node's queue.
func tailOf(t *testing.T, s *solver.Solution, node string, time float64) float64 {
	t.Helper()
	q := must(s.QueueAt(node, time))(t)
	if !q.Present {
		t.Fatalf("no queue at %s at %g s", node, time)
	}
	return q.Tail
}

// onlyQueue is the one queue that a node has had.
func onlyQueue(t *testing.T, s *solver.Solution, node string) solver.Queue {
	t.Helper()
	queues := must(s.Queues(node))(t)
	if len(queues) != 1 {
		t.Fatalf("%d queues at %s, want 1: %+v", len(queues), node, queues)
	}
	return queues[0]
}

// trajectory follows the vehicle at a place and time.
func trajectory(t *testing.T, s *solver.Solution, x, time float64) solver.Trajectory {
	t.Helper()
	return must(s.Trajectory(x, time))(t)
}

// passes is the time at which a vehicle passes x.
func passes(t *testing.T, tr solver.Trajectory, x float64) float64 {
	t.Helper()
	time, ok := tr.PassingTime(x)
	if !ok {
		t.Fatalf("the vehicle never passes %g m", x)
	}
	return time
}
