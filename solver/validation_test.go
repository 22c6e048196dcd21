package solver_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// sound is a scenario in which all is well and everything is used: two segments of 600 and 400 m, a bottleneck
// at 300 m with a queue of 100 m, a signal at 800 m.
func sound(t *testing.T) solver.Scenario {
	t.Helper()
	first, second := exactRoad(t, 600), exactRoad(t, 400)
	first.Name, second.Name = "first", "second"
	return solver.Scenario{
		Segments:    []solver.Segment{first, second},
		Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 300, Capacity: rates(0, 0.125, 100, 0.25)}},
		Signals: []solver.Signal{{Name: "light", Place: 800, SaturationFlow: 0.4,
			Plan: solver.Plan{Cycle: 60, Offset: 10, Greens: []solver.Window{{Start: 0, End: 20}, {Start: 30, End: 50}}}}},
		Entry:   solver.Entry{Demand: rates(0, 0.25, 50, 0.125)},
		Exit:    solver.Exit{Capacity: rates(0, 0.5, 100, 0.25)},
		Initial: solver.Initial{BackgroundFlow: 0.25, Queues: []solver.StandingQueue{{Node: "works", Length: 100}}},
		Horizon: 300,
	}
}

// wrongInput is one fault and what must be said of it.
type wrongInput struct {
	spoil func(s *solver.Scenario)
	field string
	rule  solver.Rule
	value string
}

func TestTheSoundScenarioIsSound(t *testing.T) {
	if err := sound(t).Validate(); err != nil {
		t.Fatal(err)
	}
}

// checkRefusals breaks the sound scenario in one way after the other: each must be refused for that one reason.
func checkRefusals(t *testing.T, table []wrongInput) {
	t.Helper()
	for _, c := range table {
		s := sound(t)
		c.spoil(&s)
		t.Run(fmt.Sprintf("%s %s %s", c.field, c.rule, c.value), func(t *testing.T) {
			solution, err := solver.Solve(context.Background(), s, solver.Budget{})
			if solution != nil {
				t.Error("a refused scenario has a solution")
			}
			list := violationsOf(t, err)
			want := solver.Violation{Field: c.field, Rule: c.rule, Value: c.value, Allowed: list[0].Allowed}
			if len(list) != 1 || list[0] != want || want.Allowed == "" {
				t.Errorf("violations %+v, want one: field %q, rule %s, value %q and what is allowed", list, c.field, c.rule, c.value)
			}
		})
	}
}

// violationsOf are those of an error that must be an InvalidError, at least one.
func violationsOf(t *testing.T, err error) []solver.Violation {
	t.Helper()
	var e *solver.InvalidError
	if !errors.As(err, &e) || len(e.Violations) == 0 {
		t.Fatalf("error %v, want an InvalidError with violations", err)
	}
	return e.Violations
}

var nan, infinite = math.NaN(), math.Inf(1)

func TestRefusedRoads(t *testing.T) {
	relation := func(r solver.Relation) func(*solver.Scenario) {
		return func(s *solver.Scenario) { s.Segments[1].Relation, s.Initial.BackgroundFlow = r, 0 }
	}
	checkRefusals(t, []wrongInput{
		{func(s *solver.Scenario) { s.Origin = nan }, "Origin", solver.RuleFinite, "NaN"},
		{func(s *solver.Scenario) { *s = solver.Scenario{Origin: 1.1e7, Segments: s.Segments, Horizon: 1} }, "Origin", solver.RuleRange, "1.1e+07"},
		{func(s *solver.Scenario) { s.Horizon = 0 }, "Horizon", solver.RulePositive, "0"},
		{func(s *solver.Scenario) { s.Horizon = 1e-4 }, "Horizon", solver.RuleRange, "0.0001"},
		{func(s *solver.Scenario) { s.Segments = nil }, "Segments", solver.RuleRequired, "0"},
		{func(s *solver.Scenario) { s.Segments = make([]solver.Segment, 1<<16+1) }, "Segments", solver.RuleRange, "65537"},
		{func(s *solver.Scenario) { s.Segments[0].Length, s.Segments[1].Length = 6e6, 5e6 }, "Segments", solver.RuleRange, "1.1e+07"},
		{func(s *solver.Scenario) { s.Segments[1].Length = 0 }, "Segments[1].Length", solver.RuleRange, "0"},
		{func(s *solver.Scenario) { s.Segments[1].Length = -400 }, "Segments[1].Length", solver.RuleRange, "-400"},
		{func(s *solver.Scenario) { s.Segments[1].Name = "first" }, "Segments[1].Name", solver.RuleUnique, "first"},
		{func(s *solver.Scenario) { s.Bottlenecks[0].Name, s.Initial.Queues = "join first/second", nil }, "Segments", solver.RuleUnique, "join first/second"},
		{func(s *solver.Scenario) { s.Segments[1].Relation = solver.Relation{} }, "Segments[1].Relation", solver.RuleRequired, ""},
		{relation(triangle(t, solver.TriangularParams{FreeSpeed: 1024, WaveSpeed: 4, JamDensity: 0.125})), "Segments[1].Relation.FreeSpeed", solver.RuleRange, "1024"},
		{relation(triangle(t, solver.TriangularParams{FreeSpeed: 4, WaveSpeed: 4, JamDensity: 1024})), "Segments[1].Relation.JamDensity", solver.RuleRange, "1024"},
		// 0.0001/(80 + 80) = 6.25e-7
		{relation(triangle(t, solver.TriangularParams{FreeSpeed: 0.0125, WaveSpeed: 0.0125, JamDensity: 1e-4})), "Segments[1].Relation.Capacity", solver.RuleRange, "6.25e-07"},
		// from 2 veh/s down to 0 over 2/1024 veh/m
		{relation(throughStates(t, 0.25+2.0/1024, solver.FlowPoint{Density: 0.25, Flow: 2})), "Segments[1].Relation.WaveSpeed", solver.RuleRange, "1024"},
	})
}

func TestRefusedControls(t *testing.T) {
	works := func(f func(b *solver.Bottleneck)) func(*solver.Scenario) {
		return func(s *solver.Scenario) { s.Initial.Queues = nil; f(&s.Bottlenecks[0]) }
	}
	plan := func(f func(p *solver.Plan)) func(*solver.Scenario) {
		return func(s *solver.Scenario) { f(&s.Signals[0].Plan) }
	}
	checkRefusals(t, []wrongInput{
		{works(func(b *solver.Bottleneck) { b.Name = "" }), "Bottlenecks[0].Name", solver.RuleRequired, ""},
		{works(func(b *solver.Bottleneck) { b.Name = solver.EntryName }), "Bottlenecks[0].Name", solver.RuleUnique, "entry"},
		{works(func(b *solver.Bottleneck) { b.Name = solver.ExitName }), "Bottlenecks[0].Name", solver.RuleUnique, "exit"},
		{func(s *solver.Scenario) { s.Signals[0].Name = "works" }, "Signals[0].Name", solver.RuleUnique, "works"},
		{func(s *solver.Scenario) { s.Signals[0].Name = "" }, "Signals[0].Name", solver.RuleRequired, ""},
		{works(func(b *solver.Bottleneck) { b.Place = 1000.5 }), "Bottlenecks[0].Place", solver.RuleRange, "1000.5"},
		{works(func(b *solver.Bottleneck) { b.Place = -0.5 }), "Bottlenecks[0].Place", solver.RuleRange, "-0.5"},
		{works(func(b *solver.Bottleneck) { b.Place = nan }), "Bottlenecks[0].Place", solver.RuleFinite, "NaN"},
		{works(func(b *solver.Bottleneck) { b.Place = 599.995 }), "Bottlenecks[0].Place", solver.RuleRange, "599.995"},
		{works(func(b *solver.Bottleneck) { b.Place = 800 }), "Signals[0].Place", solver.RuleUnique, "800"},
		{func(s *solver.Scenario) { s.Signals[0].Place = 1000.5 }, "Signals[0].Place", solver.RuleRange, "1000.5"},
		{func(s *solver.Scenario) { s.Signals[0].Place = 600.005 }, "Signals[0].Place", solver.RuleRange, "600.005"},
		{func(s *solver.Scenario) { s.Signals[0].SaturationFlow = 0 }, "Signals[0].SaturationFlow", solver.RulePositive, "0"},
		{func(s *solver.Scenario) { s.Signals[0].SaturationFlow = nan }, "Signals[0].SaturationFlow", solver.RulePositive, "NaN"},
		{plan(func(p *solver.Plan) { p.Cycle = 2e7 }), "Signals[0].Plan.Cycle", solver.RuleRange, "2e+07"},
		// 300 s of a cycle of 0.1 ms with one green: 6 million switches
		{plan(func(p *solver.Plan) { *p = solver.Plan{Cycle: 1e-4, Greens: []solver.Window{{Start: 0, End: 5e-5}}} }), "Signals[0].Plan.Cycle", solver.RuleRange, "0.0001"},
		{plan(func(p *solver.Plan) { p.Offset = nan }), "Signals[0].Plan.Offset", solver.RuleFinite, "NaN"},
		{plan(func(p *solver.Plan) { p.Offset = -2e7 }), "Signals[0].Plan.Offset", solver.RuleRange, "-2e+07"},
		{plan(func(p *solver.Plan) { p.Cycle = 0 }), "Signals[0].Plan.Offset", solver.RuleConflict, "10"},
		{plan(func(p *solver.Plan) { p.Greens[0].End = 0 }), "Signals[0].Plan.Greens[0].End", solver.RuleOrder, "0"},
		{plan(func(p *solver.Plan) { p.Greens[1].Start = 19 }), "Signals[0].Plan.Greens[1].Start", solver.RuleOrder, "19"},
		{plan(func(p *solver.Plan) { p.Greens[1].End = 61 }), "Signals[0].Plan.Greens[1]", solver.RuleRange, "{30 61}"},
		{plan(func(p *solver.Plan) { p.Greens[0].Start = -1 }), "Signals[0].Plan.Greens[0]", solver.RuleRange, "{-1 20}"},
		{plan(func(p *solver.Plan) { p.Cycle, p.Offset, p.Greens[1].End = 0, 0, infinite }), "Signals[0].Plan.Greens[1].End", solver.RuleFinite, "+Inf"},
	})
}

func TestRefusedSchedules(t *testing.T) {
	for field, of := range map[string]func(s *solver.Scenario) solver.Schedule{
		"Bottlenecks[0].Capacity": func(s *solver.Scenario) solver.Schedule { return s.Bottlenecks[0].Capacity },
		"Entry.Demand":            func(s *solver.Scenario) solver.Schedule { return s.Entry.Demand },
		"Exit.Capacity":           func(s *solver.Scenario) solver.Schedule { return s.Exit.Capacity },
	} {
		piece := func(i int, f func(p *solver.SchedulePiece)) func(*solver.Scenario) {
			return func(s *solver.Scenario) { s.Initial.Queues = nil; f(&of(s)[i]) }
		}
		checkRefusals(t, []wrongInput{
			{piece(0, func(p *solver.SchedulePiece) { p.Start = nan }), field + "[0].Start", solver.RuleFinite, "NaN"},
			{piece(0, func(p *solver.SchedulePiece) { p.Start = -2e7 }), field + "[0].Start", solver.RuleRange, "-2e+07"},
			{piece(1, func(p *solver.SchedulePiece) { p.Start = 0 }), field + "[1].Start", solver.RuleOrder, "0"},
			{piece(1, func(p *solver.SchedulePiece) { p.Rate = nan }), field + "[1].Rate", solver.RuleFinite, "NaN"},
			// falls below zero long before the horizon, rises above what is taken for a rate before it
			{piece(1, func(p *solver.SchedulePiece) { p.Slope = -0.01 }), field + "[1].Slope", solver.RuleRange, "-0.01"},
			{piece(1, func(p *solver.SchedulePiece) { p.Slope = 1e5 }), field + "[1].Slope", solver.RuleRange, "100000"},
		})
	}
	checkRefusals(t, []wrongInput{
		{func(s *solver.Scenario) { s.Entry.Excess = 7 }, "Entry.Excess", solver.RuleRange, "7"},
		{func(s *solver.Scenario) { s.Entry.Demand = manySteps(1<<20 + 1) }, "Entry.Demand", solver.RuleRange, "1048577"},
	})
}

// manySteps is a schedule of n steps, a millisecond each.
func manySteps(n int) solver.Schedule {
	s := make(solver.Schedule, n)
	for i := range s {
		s[i].Start = float64(i) / 1000
	}
	return s
}

// A fault may break a further rule. It must be named all the same.
func TestFaultsThatBreakMoreThanOneRule(t *testing.T) {
	demand := func(f func(p *solver.SchedulePiece)) func(*solver.Scenario) {
		return func(s *solver.Scenario) { f(&s.Entry.Demand[1]) }
	}
	for _, c := range []wrongInput{
		{func(s *solver.Scenario) { s.Horizon = infinite }, "Horizon", solver.RuleFinite, "+Inf"},
		{func(s *solver.Scenario) { s.Segments[0].Length = infinite }, "Segments[0].Length", solver.RuleFinite, "+Inf"},
		{demand(func(p *solver.SchedulePiece) { p.Rate = -0.25 }), "Entry.Demand[1].Rate", solver.RuleNotNegative, "-0.25"},
		{demand(func(p *solver.SchedulePiece) { p.Rate = 2e6 }), "Entry.Demand[1].Rate", solver.RuleRange, "2e+06"},
		{demand(func(p *solver.SchedulePiece) { p.Rate = infinite }), "Entry.Demand[1].Rate", solver.RuleFinite, "+Inf"},
		{demand(func(p *solver.SchedulePiece) { p.Slope = infinite }), "Entry.Demand[1].Slope", solver.RuleFinite, "+Inf"},
		{func(s *solver.Scenario) { s.Signals[0].Plan = solver.Plan{Cycle: -60} }, "Signals[0].Plan.Cycle", solver.RuleNotNegative, "-60"},
		{func(s *solver.Scenario) {
			s.Initial = solver.Initial{Profile: []solver.ProfilePiece{flat(nan, 1000, 0.01)}}
		},
			"Initial.Profile[0].Start", solver.RuleFinite, "NaN"},
	} {
		s := sound(t)
		c.spoil(&s)
		if list := violationsOf(t, s.Validate()); !names(list, c.field, c.rule, c.value) {
			t.Errorf("violations %+v, want among them field %q, rule %s, value %q", list, c.field, c.rule, c.value)
		}
	}
}

// names says whether the violations hold one of that field, rule and value, with what would be allowed.
func names(list []solver.Violation, field string, rule solver.Rule, value string) bool {
	for _, v := range list {
		if v.Field == field && v.Rule == rule && v.Value == value && v.Allowed != "" {
			return true
		}
	}
	return false
}

func TestRefusedInitialTraffic(t *testing.T) {
	profile := func(pieces ...solver.ProfilePiece) func(*solver.Scenario) {
		return func(s *solver.Scenario) { s.Initial = solver.Initial{Profile: pieces} }
	}
	queues := func(list ...solver.StandingQueue) func(*solver.Scenario) {
		return func(s *solver.Scenario) { s.Initial.Queues = list }
	}
	checkRefusals(t, []wrongInput{
		{profile(flat(0, 400, 0.01), flat(410, 1000, 0.01)), "Initial.Profile[1].Start", solver.RuleCover, "410"},
		{profile(flat(0, 400, 0.01), flat(390, 1000, 0.01)), "Initial.Profile[1].Start", solver.RuleCover, "390"},
		{profile(flat(1, 1000, 0.01)), "Initial.Profile[0].Start", solver.RuleCover, "1"},
		{profile(flat(0, 999, 0.01)), "Initial.Profile[0].End", solver.RuleCover, "999"},
		{profile(flat(0, 0, 0.01)), "Initial.Profile[0].End", solver.RuleOrder, "0"},
		{profile(ramp(0, 1000, -0.01, 0.01)), "Initial.Profile[0].StartDensity", solver.RuleNotNegative, "-0.01"},
		{profile(ramp(0, 1000, 0.01, nan)), "Initial.Profile[0].EndDensity", solver.RuleFinite, "NaN"},
		{profile(ramp(0, 800, 0, 0.15), ramp(800, 1000, 0.15, 0.16)), "Initial.Profile[1].EndDensity", solver.RuleRange, "0.16"},
		{func(s *solver.Scenario) { s.Initial.BackgroundFlow = -0.25 }, "Initial.BackgroundFlow", solver.RuleNotNegative, "-0.25"},
		{func(s *solver.Scenario) { s.Initial.BackgroundFlow = 0.5625 }, "Initial.BackgroundFlow", solver.RuleRange, "0.5625"},
		{func(s *solver.Scenario) { s.Initial.Profile = []solver.ProfilePiece{flat(0, 1000, 0.01)} }, "Initial.BackgroundFlow", solver.RuleConflict, "0.25"},
		{queues(solver.StandingQueue{Node: "works"}), "Initial.Queues[0]", solver.RuleRequired, "{works 0 0}"},
		{queues(solver.StandingQueue{Node: "works", Length: 10, Vehicles: 1}), "Initial.Queues[0]", solver.RuleRequired, "{works 1 10}"},
		{queues(solver.StandingQueue{Node: "works", Length: 10, Vehicles: -1}), "Initial.Queues[0].Vehicles", solver.RuleNotNegative, "-1"},
		{queues(solver.StandingQueue{Node: "nowhere", Length: 10}), "Initial.Queues[0].Node", solver.RuleUnknown, "nowhere"},
		{queues(solver.StandingQueue{Node: solver.EntryName, Length: 10}), "Initial.Queues[0].Node", solver.RuleRange, "entry"},
		// the exit passes at time 0 what the road before it carries, and so does a join of two like segments
		{queues(solver.StandingQueue{Node: solver.ExitName, Length: 10}), "Initial.Queues[0].Node", solver.RuleConflict, "exit"},
		{queues(solver.StandingQueue{Node: "join first/second", Length: 10}), "Initial.Queues[0].Node", solver.RuleConflict, "join first/second"},
		{queues(solver.StandingQueue{Node: "works", Length: 301}), "Initial.Queues[0]", solver.RuleFits, "{works 0 301}"},
		// at 0.125 veh/s the queue has 0.15 - 0.125/5 = 0.125 veh/m: 37.5 vehicles on 300 m
		{queues(solver.StandingQueue{Node: "works", Vehicles: 37.6}), "Initial.Queues[0]", solver.RuleFits, "{works 37.6 0}"},
		{queues(solver.StandingQueue{Node: "works", Length: 100}, solver.StandingQueue{Node: "light", Length: 501}), "Initial.Queues[1]", solver.RuleConflict, "{light 0 501}"},
	})
}
