package solver_test

import (
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// One test for each convention about queues. The road of exactRoad has 10 m/s free, -5 m/s back, 0.15 veh/m in a jam and
// 0.5 veh/s at 0.05 veh/m. Where 0.25 veh/s (0.025 veh/m) run into a jam, its tail goes back at -0.25/0.125 = -2 m/s.

// closedRoad has a closure, or what else the capacity says, at a place of a long road on which 0.25 veh/s come.
func closedRoad(t *testing.T, horizon float64, works ...solver.Bottleneck) solver.Scenario {
	t.Helper()
	return solver.Scenario{Segments: []solver.Segment{exactRoad(t, 2000)}, Bottlenecks: works, Horizon: horizon,
		Entry: solver.Entry{Demand: rates(0, 0.25)}, Initial: solver.Initial{BackgroundFlow: 0.25}}
}

// stands checks a queue at one time: its tail, its head and its vehicles.
func stands(t *testing.T, s *solver.Solution, node string, time, tail, head, vehicles float64) solver.QueueState {
	t.Helper()
	q := must(s.QueueAt(node, time))(t)
	if !q.Present {
		t.Errorf("no queue at %s at %g s", node, time)
		return q
	}
	agree(t, "tail", q.Tail, tail)
	agree(t, "head", q.Head, head)
	agree(t, "vehicles", q.Vehicles, vehicles)
	for _, n := range s.Nodes() {
		if n.Name == node {
			agree(t, "length", q.Length, n.Place-tail)
		}
	}
	return q
}

func noQueue(t *testing.T, s *solver.Solution, node string, time float64) {
	t.Helper()
	if q := must(s.QueueAt(node, time))(t); q.Present || len(q.Strips) != 0 || q.Length != 0 || q.Vehicles != 0 {
		t.Errorf("at %g s a queue at %s: %+v, want none", time, node, q)
	}
}

// The head is the node while it holds traffic back; then it recedes at -5 m/s, and the queue has cleared when it meets
// the tail: 2 t = 5 (t-100) at 500/3 s. Its peak is there, not when the node recovered.
func TestHeadIsTheNodeAndThenRecedes(t *testing.T) {
	s := answerOf(t, closedRoad(t, 400, solver.Bottleneck{Name: "works", Place: 1000, Capacity: rates(0, 0, 100, infinite)}))
	stands(t, s, "works", 50, 900, 1000, 15)
	stands(t, s, "works", 100, 800, 1000, 30)
	stands(t, s, "works", 130, 740, 850, 16.5)
	q := onlyQueue(t, s, "works")
	noQueue(t, s, "works", q.End)
	noQueue(t, s, "works", 300)
	if q.Node != "works" || !q.Cleared || q.Start != 0 {
		t.Errorf("queue of %q from %g s, cleared: %t", q.Node, q.Start, q.Cleared)
	}
	agree(t, "end", q.End, 500.0/3)
	agree(t, "greatest length", q.PeakLength, 1000.0/3)
	agree(t, "its time", q.PeakLengthTime, 500.0/3)
	agree(t, "most vehicles", q.PeakVehicles, 30)
	agree(t, "their time", q.PeakVehiclesTime, 100)
}

// Only 10 vehicles come, the last from the entry at 40 s: the tail goes back from 500 m at 50 s until 500 - 2 (t-50) =
// 10 (t-40), at 250/3 s, 10/0.15 m back. Then it stands: the peak was attained at once, and never ends.
func TestPeakIsTheEarliestInstantAtWhichItIsAttained(t *testing.T) {
	s := closedRoad(t, 300, solver.Bottleneck{Name: "works", Place: 500, Capacity: rates(0, 0)})
	s.Initial, s.Entry.Demand = solver.Initial{}, rates(0, 0.25, 40, 0)
	solution := answerOf(t, s)
	q := onlyQueue(t, solution, "works")
	agree(t, "greatest length", q.PeakLength, 10/0.15)
	agree(t, "its time", q.PeakLengthTime, 250.0/3)
	agree(t, "most vehicles", q.PeakVehicles, 10)
	agree(t, "their time", q.PeakVehiclesTime, 250.0/3)
	stands(t, solution, "works", 200, 500-10/0.15, 500, 10)
	if q.Cleared || q.End != 300 {
		t.Errorf("cleared: %t, end %g s; it stands at the horizon", q.Cleared, q.End)
	}
	agree(t, "start", q.Start, 50)
}

// A light that is red for 40 of 60 s passes a third of 0.5 veh/s, less than the 0.25 that come. The green of 40 s sends
// a wave back at -5 m/s, the red of 60 s one behind it; the first meets the tail at 200/3 s, 400/3 m back, and what it
// let go reaches the second at 220/3 s, 200/3 m back: from there the second strip's tail goes back at -2 m/s.
func TestOversaturatedSignalHasStrips(t *testing.T) {
	solution := oversaturated(t)
	// at 63 s: jam from 126 to 115 m back, and from 15 m back to the light
	q := stands(t, solution, "light", 63, 874, 1000, 0.15*(11+15))
	want := []solver.Strip{{Tail: 874, Head: 885, Vehicles: 1.65}, {Tail: 985, Head: 1000, Vehicles: 2.25}}
	if len(q.Strips) != 2 {
		t.Fatalf("strips %+v, want %+v", q.Strips, want)
	}
	for i, strip := range q.Strips {
		agree(t, "tail of a strip", strip.Tail, want[i].Tail)
		agree(t, "head of a strip", strip.Head, want[i].Head)
		agree(t, "vehicles of a strip", strip.Vehicles, want[i].Vehicles)
	}
	stands(t, solution, "light", 70, 950, 1000, 7.5)
	stands(t, solution, "light", 80, 1000-80, 1000, 12)
	// one queue, whose tail jumps to the strip that is left; it is longest at the horizon
	one := onlyQueue(t, solution, "light")
	checkPath(t, one.TailPoints(1), point(1000, 0), point(1000-400.0/3, 200.0/3), point(1000-100.0/3, 200.0/3), point(1000-200.0/3, 220.0/3), point(840, 120))
	agree(t, "greatest length", one.PeakLength, 160)
	if one.Cleared || one.PeakLengthTime != 120 {
		t.Errorf("cleared: %t, longest at %g s", one.Cleared, one.PeakLengthTime)
	}
}

// oversaturated is the light of TestOversaturatedSignalHasStrips.
func oversaturated(t *testing.T) *solver.Solution {
	t.Helper()
	s := closedRoad(t, 120)
	s.Signals = []solver.Signal{{Name: "light", Place: 1000, SaturationFlow: infinite,
		Plan: solver.Plan{Cycle: 60, Greens: []solver.Window{{Start: 40, End: 60}}}}}
	return answerOf(t, s)
}

func checkPath(t *testing.T, got []solver.Point, want ...solver.Point) {
	t.Helper()
	if len(got) != len(want) {
		t.Errorf("path %+v, want %+v", got, want)
		return
	}
	for i := range want {
		agree(t, "place", got[i].Place, want[i].Place)
		agreeOn(t, "time", got[i].Time, want[i].Time, 100)
	}
}

// A queue that spills back over a node stays that of the node where it formed; the one it ran over has none.
func TestSpillbackStaysTheQueueOfItsNode(t *testing.T) {
	s := answerOf(t, closedRoad(t, 400, solver.Bottleneck{Name: "narrow", Place: 1000, Capacity: rates(0, 0.3)},
		solver.Bottleneck{Name: "works", Place: 1500, Capacity: rates(0, 0)}))
	q := stands(t, s, "works", 300, 900, 1500, 90)
	if len(q.Strips) != 2 || q.Strips[0].Head != 1000 || q.Strips[1].Tail != 1000 {
		t.Errorf("strips %+v, want one on each side of 1000 m", q.Strips)
	}
	noQueue(t, s, "narrow", 300)
	if queues := must(s.Queues("narrow"))(t); len(queues) != 0 {
		t.Errorf("queues of the node that was run over: %+v", queues)
	}
	one := onlyQueue(t, s, "works")
	agree(t, "greatest length", one.PeakLength, 800)
	for _, c := range []struct{ place, time float64 }{{1400, 50}, {1000, 250}, {800, 350}} {
		time, ok, err := s.QueueReaches("works", c.place)
		if err != nil || !ok {
			t.Fatal(ok, err)
		}
		agree(t, "reaches it", time, c.time)
	}
	if _, ok, err := s.QueueReaches("works", 600); ok || err != nil {
		t.Errorf("it never comes to 600 m: %t, %v", ok, err)
	}
}

// recedingRoad breaks the line of the congested branch: (0.05, 0.5), (0.1, 0.35), (0.15, 0), so slopes -3 and -7 m/s, and a
// jam's tail in flow at capacity goes back at -0.5/0.1 = -5 m/s, faster than a head at -3 m/s.
func recedingRoad(t *testing.T) solver.Scenario {
	t.Helper()
	s := closedRoad(t, 200, solver.Bottleneck{Name: "upper", Place: 1000, Capacity: rates(0, 0, 100, infinite)},
		solver.Bottleneck{Name: "lower", Place: 1100, Capacity: rates(0, 0)})
	s.Segments[0].Relation = throughStates(t, 0.15, solver.FlowPoint{Density: 0.05, Flow: 0.5}, solver.FlowPoint{Density: 0.1, Flow: 0.35})
	return s
}

// Both are closed at time 0. The lower tail goes back until all between has come, at 25/3 s and 1100 - 50/3 m. At 100 s the
// upper opens: its queue's tail is at 800 m (-2 m/s), its head recedes at -3 m/s, what it lets go is at the lower tail after
// 25/3 s and drives it back at -5 m/s: at 1000 m at 125 s, and at the upper's head at 162.5 s and 812.5 m. There the
// upper's queue ends; it has then 0.1 veh/m (since the wave of -7 m/s met its tail at 140 s and 720 m, which since then
// moves at 0.1/0.075 = 4/3 m/s) from 750 to 812.5 m: 6.25 vehicles, which go over to the lower's.
func TestQueueThatReachesARecedingOneTakesItOver(t *testing.T) {
	s := answerOf(t, recedingRoad(t))
	stands(t, s, "upper", 150, 720+40.0/3, 850, 0.1*(850-720-40.0/3))
	stands(t, s, "lower", 150, 875, 1100, 0.15*225)
	upper := onlyQueue(t, s, "upper")
	agree(t, "end of the upper", upper.End, 162.5)
	noQueue(t, s, "upper", 165)
	// tail at 750 + 4/3*2.5, jam from 812.5 - 7*2.5 on
	tail := 750 + 10.0/3
	stands(t, s, "lower", 165, tail, 1100, 0.1*(795-tail)+0.15*305)
	onlyQueue(t, s, "lower")
	time, ok, err := s.QueueReaches("lower", 780)
	if err != nil || !ok {
		t.Fatal(ok, err)
	}
	agree(t, "reaches 780 m by taking over", time, 162.5)
}

// Of 0.375 veh/s (0.0375 veh/m) the upper node passes 0.25: a queue of 0.1 veh/m whose tail goes back at -2 m/s. The lower one
// is closed at 100 s; its tail, at -2 m/s too, is at the upper node at 350 s. The jam goes on into the upper queue at
// -0.25/0.05 = -5 m/s. Each node keeps the queue that formed there: at 390 s the upper's from 220 m (1000 - 2*390) to 800 m at
// 0.1 veh/m and in a jam from there to 1000 m, the lower's in a jam from 1000 m to 1500 m.
func TestQueueThatReachesAStandingOneLeavesItItsOwn(t *testing.T) {
	s := closedRoad(t, 400, solver.Bottleneck{Name: "upper", Place: 1000, Capacity: rates(0, 0.25)},
		solver.Bottleneck{Name: "lower", Place: 1500, Capacity: rates(100, 0)})
	s.Entry.Demand, s.Initial.BackgroundFlow = rates(0, 0.375), 0.375
	solution := answerOf(t, s)
	stands(t, solution, "upper", 300, 400, 1000, 60)
	stands(t, solution, "lower", 300, 1100, 1500, 60)
	upper, lower := onlyQueue(t, solution, "upper"), onlyQueue(t, solution, "lower")
	agree(t, "greatest length of the upper", upper.PeakLength, 800)
	stands(t, solution, "upper", 390, 220, 1000, 0.1*580+0.15*200)
	stands(t, solution, "lower", 390, 1000, 1500, 0.15*500)
	agree(t, "greatest length of the lower", lower.PeakLength, 500)
	if lower.Cleared || upper.Cleared {
		t.Errorf("cleared: upper %t, lower %t", upper.Cleared, lower.Cleared)
	}
}
