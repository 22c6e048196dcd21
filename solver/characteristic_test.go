package solver_test

import (
	"errors"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// followed checks a characteristic: its points and what ends it.
func followed(t *testing.T, s *solver.Solution, x, time float64, ends solver.FrontEnd, want ...solver.Point) {
	t.Helper()
	c := must(s.Characteristic(x, time))(t)
	if c.EndsBy != ends || len(c.Points) != len(want) {
		t.Errorf("from (%g, %g): ends by %v after %+v, want %v after %+v", x, time, c.EndsBy, c.Points, ends, want)
		return
	}
	entry, exit := s.Extent()
	for i := range want {
		agreeOn(t, "place", c.Points[i].Place, want[i].Place, exit-entry)
		agreeOn(t, "time", c.Points[i].Time, want[i].Time, s.Horizon())
	}
}

func point(x, t float64) solver.Point { return solver.Point{Place: x, Time: t} }

// Under the linear law of redThenGreen: 8 m/s for what arrives, -16 m/s in the jam, (x-1024)/tau in the fan.
func TestCharacteristicsRunIntoTheTail(t *testing.T) {
	s := redThenGreen(t)
	t.Run("what arrives", func(t *testing.T) {
		// 904 + 8 t = 1024 - 4 t at 10 s
		followed(t, s, 904, 0, solver.Merged, point(904, 0), point(984, 10))
	})
	t.Run("what is in the jam", func(t *testing.T) {
		// born of the red at the light at 15 s: 1024 - 16 (t-15) = 1024 - 4 t at 20 s
		followed(t, s, 1024-16*2, 17, solver.Merged, point(992, 17), point(944, 20))
	})
	t.Run("a wave of the fan", func(t *testing.T) {
		// -9.6 tau = 8 tau - 480 sqrt(tau/20) at sqrt(tau) = 480/(17.6 sqrt(20))
		root := 480 / 17.6
		tau := root * root / 20
		followed(t, s, 1024-96, 70, solver.Merged, point(928, 70), point(1024-9.6*tau, 60+tau))
	})
	t.Run("what arrives later", func(t *testing.T) {
		// 8 m/s from (0, 20): 8 (t-20) = 1024 + 8 tau - 480 sqrt(tau/20), with t-20 = tau+40, at sqrt(tau/20) = 704/480
		root := 704.0 / 480
		tau := 20 * root * root
		followed(t, s, 0, 20, solver.Merged, point(0, 20), point(8*(tau+40), 60+tau))
	})
	t.Run("a wave that leaves at the exit", func(t *testing.T) {
		// the fan's 12.8 m/s, from 1024 m at 60 s over 1024 m: 80 s
		followed(t, s, 1024+128, 70, solver.AtNode, point(1152, 70), point(2048, 140))
	})
	t.Run("the critical wave stands at the light", func(t *testing.T) {
		followed(t, s, 1024, 100, solver.AtHorizon, point(1024, 100), point(1024, 200))
	})
}

// Traffic at capacity arrives at a queue: its tail runs along the congested branch, 1500 - 5 t, and is a shock all the
// same. Waves at 20 m/s run into it: 500 + 20 (t-50) = 1500 - 5 t at 80 s.
func TestCharacteristicsAtCapacityRunIntoTheTail(t *testing.T) {
	r := must(solver.Triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.125}))(t)
	s := must(solver.Solve(t.Context(), solver.Scenario{
		Segments:    []solver.Segment{{Length: 2000, Relation: r}},
		Bottlenecks: []solver.Bottleneck{{Name: "b", Place: 1500, Capacity: solver.Schedule{{Rate: 0.25}}}},
		Entry:       solver.Entry{Demand: solver.Schedule{{Rate: 0.5}}},
		Initial:     solver.Initial{BackgroundFlow: 0.5},
		Horizon:     300,
	}, solver.Budget{}))(t)
	followed(t, s, 500, 50, solver.Merged, point(500, 50), point(1100, 80))
	for _, f := range s.Fronts() {
		if f.Birth == point(1500, 0) && f.End.Place < 1500 && f.Kind != solver.Shock {
			t.Errorf("the tail is a %v", f.Kind)
		}
	}
}

// On a shock there is only the place itself; on the edge of a fan the wave is the edge.
func TestCharacteristicsOnAFront(t *testing.T) {
	s := redThenGreen(t)
	followed(t, s, 1024-4*30, 30, solver.Merged, point(904, 30))
	followed(t, s, tailAfterGreen(125), 125, solver.Merged, point(tailAfterGreen(125), 125))
	// the edge at -16 m/s from 60 s on runs into the tail at 80 s and 704 m
	followed(t, s, 1024-16*10, 70, solver.Merged, point(864, 70), point(704, 80))
}

// twoSpeeds is 500 m at 10 m/s and 500 m at 20 m/s, both of 0.5 veh/s: backward waves at -5 and at -4 m/s.
func twoSpeeds(t *testing.T) solver.Scenario {
	t.Helper()
	slow, fast := exactRoad(t, 500), exactRoad(t, 500)
	slow.Name, fast.Name = "slow", "fast"
	fast.Relation = triangle(t, solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 4, Capacity: 0.5})
	return solver.Scenario{Segments: []solver.Segment{slow, fast}, Horizon: 300,
		Entry: solver.Entry{Demand: rates(0, 0.25)}, Initial: solver.Initial{BackgroundFlow: 0.25}}
}

// A wave crosses a join where all that arrives passes, at the speed of the same flow on the other side.
func TestCharacteristicsCrossAJoin(t *testing.T) {
	t.Run("downstream", func(t *testing.T) {
		// 400 m at 10 m/s, 500 m at 20 m/s
		followed(t, answerOf(t, twoSpeeds(t)), 100, 10, solver.AtNode, point(100, 10), point(500, 50), point(1000, 75))
	})
	t.Run("over a node that passes just that flow", func(t *testing.T) {
		s := twoSpeeds(t)
		s.Bottlenecks = []solver.Bottleneck{{Name: "just", Place: 300, Capacity: rates(0, 0.25)}}
		followed(t, answerOf(t, s), 100, 10, solver.AtNode, point(100, 10), point(300, 30), point(500, 50), point(1000, 75))
	})
	t.Run("upstream, in a queue over the join", func(t *testing.T) {
		s := twoSpeeds(t)
		s.Exit.Capacity = rates(0, 0.125)
		// 0.125 veh/s in the queue: 0.15 - 0.125/5 and 0.15 - 0.125/4 veh/m (jam density 0.5/20 + 0.5/4)
		s.Initial = solver.Initial{Profile: []solver.ProfilePiece{flat(0, 500, 0.125), flat(500, 1000, 0.15-0.125/4)}}
		// 400 m at -4 m/s, 500 m at -5 m/s
		followed(t, answerOf(t, s), 900, 10, solver.AtNode, point(900, 10), point(500, 110), point(0, 210))
	})
	t.Run("a wave of a fan, over a node that does nothing", func(t *testing.T) {
		s := openRoad(bentRoad(t, 1).Relation, 100, flat(0, 512, 0.0625), flat(512, 1024, 0))
		s.Bottlenecks = []solver.Bottleneck{{Name: "nothing", Place: 768, Capacity: rates(0, infinite)}}
		// 8 m/s from 512 m: at 592 m after 10 s, at 768 m after 32 s, at 1024 m after 64 s
		followed(t, answerOf(t, s), 592, 10, solver.AtNode, point(592, 10), point(768, 32), point(1024, 64))
	})
}

// Where a node governs the flow, no wave passes: not from downstream where its capacity is less than what the queue
// there takes, though it is as much (the node governs); where it is more, that queue governs and waves go on.
func TestCharacteristicsEndAtANodeThatGoverns(t *testing.T) {
	scenario := func(capacity float64) solver.Scenario {
		return solver.Scenario{
			Segments:    []solver.Segment{exactRoad(t, 1500)},
			Bottlenecks: []solver.Bottleneck{{Name: "first", Place: 500, Capacity: rates(0, capacity)}, {Name: "second", Place: 1000, Capacity: rates(0, 0.25)}},
			Entry:       solver.Entry{Demand: rates(0, 0.375)},
			Initial:     solver.Initial{BackgroundFlow: 0.375, Queues: []solver.StandingQueue{{Node: "second", Length: 500}}},
			Horizon:     300,
		}
	}
	// -5 m/s from 900 m at 10 s: at 500 m at 90 s. From there the tail, since time 0 at -0.125/(0.1 - 0.0375) = -2 m/s, is
	// 180 m back: met at -5 (t-90) = -2 t, at 150 s and 200 m.
	followed(t, answerOf(t, scenario(0.25)), 900, 10, solver.AtNode, point(900, 10), point(500, 90))
	followed(t, answerOf(t, scenario(0.3)), 900, 10, solver.Merged, point(900, 10), point(500, 90), point(200, 150))
}

// A wave that nothing stops is where it is at the horizon.
func TestCharacteristicsUpToTheHorizon(t *testing.T) {
	s := twoSpeeds(t)
	s.Horizon = 55
	followed(t, answerOf(t, s), 100, 10, solver.AtHorizon, point(100, 10), point(500, 50), point(600, 55))
}

func TestCharacteristicsOutsideAreRefused(t *testing.T) {
	s := answerOf(t, twoSpeeds(t))
	for _, c := range []struct {
		x, time float64
		field   string
	}{{-1, 0, "Place"}, {1001, 0, "Place"}, {nan, 0, "Place"}, {500, -1, "Time"}, {500, 301, "Time"}} {
		_, err := s.Characteristic(c.x, c.time)
		var e *solver.InvalidError
		if !errors.As(err, &e) || len(e.Violations) != 1 || e.Violations[0].Field != c.field {
			t.Errorf("from (%g, %g): %v, want a violation of %s", c.x, c.time, err, c.field)
		}
	}
}

// Fans of the entry and of the exit, mirror images, come together at a join half way: the shock between them rests on
// it. Waves end there, from both sides.
func TestCharacteristicsEndAtAShockThatRestsOnAJoin(t *testing.T) {
	road := must(solver.Greenshields(16, 0.5))(t)
	s := must(solver.Solve(t.Context(), solver.Scenario{
		Segments: []solver.Segment{{Length: 400, Relation: road}, {Length: 400, Relation: road}},
		Entry:    solver.Entry{Demand: solver.Schedule{{Rate: road.Capacity()}}},
		Initial: solver.Initial{Profile: []solver.ProfilePiece{
			{Start: 0, End: 400, StartDensity: 0.125, EndDensity: 0.125},
			{Start: 400, End: 600, StartDensity: 0, EndDensity: 0.5},
			{Start: 600, End: 800, StartDensity: 0.5, EndDensity: 0.5},
		}},
		Horizon: 200,
	}, solver.Budget{}))(t)
	at := must(s.At(400, 80))(t)
	if !(at.Up.Density < 0.25 && at.Down.Density > 0.25) {
		t.Fatalf("no shock rests on the join: %+v", at)
	}
	if !at.OnFront {
		t.Errorf("the join is not said to be on a front: %+v", at)
	}
	// The wave of 5 m/s of either fan is at the join at 80 s.
	followed(t, s, 300, 60, solver.Merged, point(300, 60), point(400, 80), point(400, 80))
	followed(t, s, 500, 60, solver.Merged, point(500, 60), point(400, 80))
}
