package solver_test

import (
	"errors"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// Questions outside the corridor, outside the solved time or about no node are refused with the field, not answered.
func TestQuestionsOutsideAreRefused(t *testing.T) {
	s := answerOf(t, closedRoad(t, 300, solver.Bottleneck{Name: "works", Place: 1000, Capacity: rates(0, 0)}))
	for _, c := range []struct {
		what  string
		err   error
		field string
		rule  solver.Rule
	}{
		{"state upstream of the entry", second(s.At(-1, 0)), "Place", solver.RuleRange},
		{"state beyond the exit", second(s.At(2001, 0)), "Place", solver.RuleRange},
		{"state nowhere", second(s.At(nan, 0)), "Place", solver.RuleFinite},
		{"state before the start", second(s.At(0, -1)), "Time", solver.RuleRange},
		{"state after the horizon", second(s.At(0, 301)), "Time", solver.RuleRange},
		{"state at no time", second(s.At(0, nan)), "Time", solver.RuleFinite},
		{"trajectory beyond the exit", second(s.Trajectory(2001, 0)), "Place", solver.RuleRange},
		{"trajectory after the horizon", second(s.Trajectory(0, 301)), "Time", solver.RuleRange},
		{"totals before the start", second(s.Totals(-1)), "Time", solver.RuleRange},
		{"totals at no time", second(s.Totals(nan)), "Time", solver.RuleFinite},
		{"queues of no node", second(s.Queues("nowhere")), "Node", solver.RuleUnknown},
		{"queue of no node", second(s.QueueAt("nowhere", 0)), "Node", solver.RuleUnknown},
		{"queue after the horizon", second(s.QueueAt("works", 301)), "Time", solver.RuleRange},
		{"queue reaches a place beyond", third(s.QueueReaches("works", 2001)), "Place", solver.RuleRange},
		{"queue of no node reaches a place", third(s.QueueReaches("", 100)), "Node", solver.RuleUnknown},
		{"trip from upstream of the entry", second(s.TravelTime(-1, 100, 0)), "From", solver.RuleRange},
		{"trip to beyond the exit", second(s.TravelTime(0, 2001, 0)), "To", solver.RuleRange},
		{"trip upstream", second(s.TravelTime(500, 400, 0)), "To", solver.RuleRange},
		{"trip before the start", second(s.TravelTime(0, 100, -1)), "Departure", solver.RuleRange},
		{"trip at no time", second(s.TravelTime(0, 100, nan)), "Departure", solver.RuleFinite},
	} {
		var e *solver.InvalidError
		if !errors.As(c.err, &e) || len(e.Violations) != 1 {
			t.Errorf("%s: %v, want one violation", c.what, c.err)
			continue
		}
		if v := e.Violations[0]; v.Field != c.field || v.Rule != c.rule || v.Value == "" && c.field != "Node" || v.Allowed == "" {
			t.Errorf("%s: %+v, want %s of %s with what is allowed", c.what, v, c.rule, c.field)
		}
	}
}

func third[A, B any](_ A, _ B, err error) error { return err }

// The ends of the corridor and of the solved time belong to it.
func TestQuestionsAtTheEndsAreAnswered(t *testing.T) {
	s := answerOf(t, closedRoad(t, 300))
	if entry, exit := s.Extent(); entry != 0 || exit != 2000 || s.Horizon() != 300 {
		t.Errorf("from %g to %g m, up to %g s", entry, exit, s.Horizon())
	}
	for _, x := range []float64{0, 2000} {
		for _, time := range []float64{0, 300} {
			agree(t, "density", at(t, s, x, time).Up.Density, 0.025)
			agree(t, "count", at(t, s, x, time).Count+1000, 1000+0.25*time-0.025*x)
		}
	}
	agree(t, "left", totals(t, s, 300).Left, 75)
	trip := must(s.TravelTime(2000, 2000, 300))(t)
	if !trip.Arrived || trip.Arrival != 300 || trip.Duration != 0 || trip.Delay != 0 {
		t.Errorf("a trip from the exit to the exit: %+v", trip)
	}
}

// A passing time is of a place that the vehicle passes: not of one behind its start, ahead of its end, or no place.
func TestPassingTimesOfPlacesNotPassed(t *testing.T) {
	s := answerOf(t, closedRoad(t, 300, solver.Bottleneck{Name: "works", Place: 1000, Capacity: rates(0, 0)}))
	tr := trajectory(t, s, 500, 0) // stands where 10 t = 500 - 2 t, at 500/12 s
	agree(t, "where it stops, it is from then on", passes(t, tr, 500+5000.0/12), 500.0/12)
	for what, x := range map[string]float64{"behind": 499, "ahead of where it stands": 950, "nowhere": nan} {
		if time, ok := tr.PassingTime(x); ok {
			t.Errorf("it passes a place %s at %g s", what, time)
		}
	}
}

// The kinds have the names that answers are read by.
func TestKindsHaveNames(t *testing.T) {
	for got, want := range map[string]string{
		solver.Shock.String(): "shock", solver.Contact.String(): "contact", solver.Edge.String(): "edge",
		solver.AtHorizon.String(): "horizon", solver.Merged.String(): "merged", solver.AtNode.String(): "node",
		solver.EntryNode.String(): "entry", solver.JoinNode.String(): "join", solver.BottleneckNode.String(): "bottleneck",
		solver.SignalNode.String(): "signal", solver.ExitNode.String(): "exit",
		solver.ByDemand.String(): "demand", solver.ByCapacity.String(): "capacity", solver.BySupply.String(): "supply",
	} {
		if got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
}
