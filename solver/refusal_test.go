package solver_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// Six faults in six parts of the scenario are six violations, by one call.
func TestAllFaultsAreReportedAtOnce(t *testing.T) {
	s := sound(t)
	s.Segments[1].Length = -1
	s.Bottlenecks[0].Capacity[1].Start = 0
	s.Signals[0].SaturationFlow = -0.5
	s.Entry.Demand[0].Start = nan
	s.Exit.Capacity[0].Slope = 1e5
	s.Initial.Queues[0] = solver.StandingQueue{Node: "works"}
	list := violationsOf(t, s.Validate())
	for _, want := range []solver.Violation{
		{Field: "Segments[1].Length", Rule: solver.RuleRange, Value: "-1"},
		{Field: "Bottlenecks[0].Capacity[1].Start", Rule: solver.RuleOrder, Value: "0"},
		{Field: "Signals[0].SaturationFlow", Rule: solver.RulePositive, Value: "-0.5"},
		{Field: "Entry.Demand[0].Start", Rule: solver.RuleFinite, Value: "NaN"},
		{Field: "Exit.Capacity[0].Slope", Rule: solver.RuleRange, Value: "100000"},
		{Field: "Initial.Queues[0]", Rule: solver.RuleRequired, Value: "{works 0 0}"},
	} {
		if !names(list, want.Field, want.Rule, want.Value) {
			t.Errorf("%s of %s is not reported", want.Rule, want.Field)
		}
	}
	if len(list) != 6 {
		t.Errorf("%d violations, want six: %+v", len(list), list)
	}
	for _, v := range list {
		if !strings.Contains(s.Validate().Error(), v.String()) {
			t.Errorf("the error's text leaves out %q", v)
		}
	}
}

// A wrong number in one part does not hide a wrong name, gap or place in another: these can be judged without it.
func TestAFaultDoesNotHideThoseOfAnotherKind(t *testing.T) {
	s := sound(t)
	s.Entry.Demand[0].Rate = -1
	s.Initial = solver.Initial{
		Profile: []solver.ProfilePiece{flat(0, 400, 0.01), flat(410, 1000, 0.01)},
		Queues:  []solver.StandingQueue{{Node: "nowhere", Length: 10}},
	}
	list := violationsOf(t, s.Validate())
	for _, want := range []solver.Violation{
		{Field: "Entry.Demand[0].Rate", Rule: solver.RuleNotNegative, Value: "-1"},
		{Field: "Initial.Profile[1].Start", Rule: solver.RuleCover, Value: "410"},
		{Field: "Initial.Queues[0].Node", Rule: solver.RuleUnknown, Value: "nowhere"},
	} {
		if !names(list, want.Field, want.Rule, want.Value) {
			t.Errorf("%s of %s is not reported; violations %+v", want.Rule, want.Field, list)
		}
	}
}

// The zero scenario has neither road nor time.
func TestTheZeroScenario(t *testing.T) {
	solution, err := solver.Solve(context.Background(), solver.Scenario{}, solver.Budget{})
	list := violationsOf(t, err)
	if solution != nil || len(list) != 2 || !names(list, "Segments", solver.RuleRequired, "0") || !names(list, "Horizon", solver.RulePositive, "0") {
		t.Errorf("solution %v, violations %+v, want that of the segments and that of the horizon", solution, list)
	}
}

// An invalid scenario is refused as such before anything else is looked at: no budget, no context.
func TestRefusalComesFirst(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	s := sound(t)
	s.Horizon = -1
	_, err := solver.Solve(ctx, s, solver.Budget{Interactions: 1, Memory: 1})
	if list := violationsOf(t, err); !names(list, "Horizon", solver.RulePositive, "-1") {
		t.Errorf("violations %+v", list)
	}
	if both := s.Validate(); both.Error() != err.Error() {
		t.Errorf("Validate says %v, Solve %v", both, err)
	}
}

// sloped is a rate that falls from 0.3 by 0.0001 a second.
func sloped() solver.Schedule { return solver.Schedule{{Rate: 0.3, Slope: -1e-4}} }

// Rates that change linearly in time are refused where a curved relation is next to them, and only there.
func TestSlopedSchedulesNextToCurves(t *testing.T) {
	straight, curve := exactRoad(t, 500), bentRoad(t, 500)
	works := func(place float64) []solver.Bottleneck {
		return []solver.Bottleneck{{Name: "works", Place: place, Capacity: sloped()}}
	}
	for _, c := range []struct {
		name     string
		roads    []solver.Segment
		scenario solver.Scenario
		field    string // empty: accepted
	}{
		{"demand into a curve", []solver.Segment{curve, straight}, solver.Scenario{Entry: solver.Entry{Demand: sloped()}}, "Entry.Demand[0].Slope"},
		{"demand into a straight one", []solver.Segment{straight, curve}, solver.Scenario{Entry: solver.Entry{Demand: sloped()}}, ""},
		{"exit of a curve", []solver.Segment{straight, curve}, solver.Scenario{Exit: solver.Exit{Capacity: sloped()}}, "Exit.Capacity[0].Slope"},
		{"exit of a straight one", []solver.Segment{curve, straight}, solver.Scenario{Exit: solver.Exit{Capacity: sloped()}}, ""},
		{"works on a curve", []solver.Segment{straight, curve}, solver.Scenario{Bottlenecks: works(700)}, "Bottlenecks[0].Capacity[0].Slope"},
		{"works just before a curve", []solver.Segment{straight, curve}, solver.Scenario{Bottlenecks: works(500)}, "Bottlenecks[0].Capacity[0].Slope"},
		{"works just after a curve", []solver.Segment{curve, straight}, solver.Scenario{Bottlenecks: works(500)}, "Bottlenecks[0].Capacity[0].Slope"},
		{"works away from the curve", []solver.Segment{straight, curve}, solver.Scenario{Bottlenecks: works(300)}, ""},
		{"works at the exit of a curve", []solver.Segment{straight, curve}, solver.Scenario{Bottlenecks: works(1000)}, "Bottlenecks[0].Capacity[0].Slope"},
		{"a sloped exit with a signal at it", []solver.Segment{straight, curve},
			solver.Scenario{Exit: solver.Exit{Capacity: sloped()}, Signals: []solver.Signal{light("light", 1000, 0, 50)}}, "Exit.Capacity[0].Slope"},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := c.scenario
			s.Horizon = 60
			for i, road := range c.roads {
				road.Name = [2]string{"first", "second"}[i]
				s.Segments = append(s.Segments, road)
			}
			err := s.Validate()
			if c.field == "" {
				if err != nil {
					t.Error(err)
				}
				return
			}
			if list := violationsOf(t, err); len(list) != 1 || !names(list, c.field, solver.RuleClosedForm, "-0.0001") {
				t.Errorf("violations %+v, want %s of %s", list, solver.RuleClosedForm, c.field)
			}
		})
	}
}

// refusedAt checks that a solve is given up at a node and time for want of a closed form.
func refusedAt(t *testing.T, s solver.Scenario, node string, time float64) {
	t.Helper()
	solution, err := solver.Solve(context.Background(), s, solver.Budget{})
	var e *solver.ClosedFormError
	if solution != nil || !errors.As(err, &e) {
		t.Fatalf("solution %v, error %v, want a ClosedFormError", solution, err)
	}
	agreeOn(t, "time", e.Time, time, s.Horizon)
	if e.Node != node || e.What == "" || !strings.Contains(e.Error(), node) {
		t.Errorf("refused at %q: %v, want %q", e.Node, e, node)
	}
}

// lanesGrow is a road of one lane of 16 m/s and 0.125 veh/m that has two from 1024 m on.
func lanesGrow(t *testing.T, initial ...solver.ProfilePiece) solver.Scenario {
	t.Helper()
	one, two := bentRoad(t, 1024), bentRoad(t, 1024)
	one.Name, two.Name, two.Relation = "one lane", "two lanes", two.Relation.Lanes(2)
	return solver.Scenario{Segments: []solver.Segment{one, two}, Horizon: 100, Initial: solver.Initial{Profile: initial}}
}

// A standing queue ends where the road carries no more than its node passes: there is no queue of such a flow there.
func TestStandingQueueOnARoadTooNarrowForIt(t *testing.T) {
	narrow, wide := exactRoad(t, 1000), exactRoad(t, 1000)
	narrow.Name, wide.Name, wide.Relation = "narrow", "wide", wide.Relation.Lanes(2)
	s := solver.Scenario{Segments: []solver.Segment{narrow, wide}, Horizon: 60,
		Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 1500, Capacity: solver.Schedule{{Start: -1, Rate: 1.5 * narrow.Relation.Capacity()}}}}}
	for length, fits := range map[float64]bool{500: true, 500.1: false} {
		s.Initial.Queues = []solver.StandingQueue{{Node: "works", Length: length}}
		err := s.Validate()
		if fits && err != nil {
			t.Error(err)
		}
		if !fits && !names(violationsOf(t, err), "Initial.Queues[0]", solver.RuleFits, "{works 0 500.1}") {
			t.Errorf("%g m: %v", length, err)
		}
	}
}

// What leaves the closed family on the way is refused then and there.
func TestWhatHasNoClosedFormIsRefusedWhenItHappens(t *testing.T) {
	const join = "join one lane/two lanes"
	t.Run("a fan from upstream", func(t *testing.T) {
		// From critical to empty at 512 m: its first wave, at 16 m/s, is at 1024 m after 32 s.
		refusedAt(t, lanesGrow(t, flat(0, 512, 0.0625), flat(512, 2048, 0)), join, 32)
	})
	t.Run("a fan from downstream", func(t *testing.T) {
		// From jam to critical at 1536 m of the two lanes: its last wave, at -16 m/s, is at 1024 m after 32 s.
		refusedAt(t, lanesGrow(t, flat(0, 1024, 0.125), flat(1024, 1536, 0.25), flat(1536, 2048, 0.125)), join, 32)
	})
	t.Run("a profile on a straight relation comes to a curve", func(t *testing.T) {
		// Its first vehicle, at 10 m/s from 700 m, is at 1000 m after 30 s.
		straight, curve := exactRoad(t, 1000), bentRoad(t, 1000)
		straight.Name, curve.Name = "straight", "curve"
		refusedAt(t, solver.Scenario{Segments: []solver.Segment{straight, curve}, Horizon: 100,
			Entry:   solver.Entry{Demand: rates(0, 0.25)},
			Initial: solver.Initial{Profile: []solver.ProfilePiece{flat(0, 500, 0.025), ramp(500, 700, 0.025, 0.0125), flat(700, 1000, 0.0125), flat(1000, 2000, 0)}}},
			"join straight/curve", 30)
	})
	t.Run("at time 0", func(t *testing.T) {
		refusedAt(t, lanesGrow(t, ramp(0, 1024, 0.05, 0.03), flat(1024, 2048, 0)), join, 0)
	})
	t.Run("not where the two roads are alike", func(t *testing.T) {
		s := lanesGrow(t, flat(0, 512, 0.0625), flat(512, 2048, 0))
		s.Segments[1].Relation = s.Segments[0].Relation
		// The vehicles in the fan that have passed 1024 m by 64 s: q = vf kj/4 (1 - (x/(vf t))²) is the rate past a fixed place,
		// and its integral from 32 s, vf kj/4 (t - 32)²/t = 0.5*32*32/64.
		agree(t, "passed by 64 s", passed(t, answerOf(t, s), 1024, 0, 64), 8)
	})
	t.Run("not after the horizon", func(t *testing.T) {
		s := lanesGrow(t, flat(0, 512, 0.0625), flat(512, 2048, 0))
		s.Horizon = math.Nextafter(31.9, 0)
		answerOf(t, s)
	})
}
