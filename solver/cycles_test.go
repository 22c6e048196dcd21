package solver_test

import (
	"errors"
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// lightOnTheWay is a signal at 1500 m with a red of 30 s and a green of 30 s, red first, on a triangular road of 20 m/s, 5 m/s
// and 0.15 veh/m (capacity 0.6 veh/s), with steady arrivals. The segments meet at its stop line, so that totals tell of
// the approach alone.
func lightOnTheWay(t *testing.T, arrivals, horizon float64) *solver.Solution {
	t.Helper()
	road := must(solver.Triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.15}))(t)
	return answerOf(t, solver.Scenario{
		Segments: []solver.Segment{{Length: 1500, Relation: road}, {Length: 500, Relation: road}},
		Signals: []solver.Signal{{Name: "light", Place: 1500, SaturationFlow: math.Inf(1),
			Plan: solver.Plan{Cycle: 60, Greens: []solver.Window{{Start: 30, End: 60}}}}},
		Entry:   solver.Entry{Demand: rates(0, arrivals)},
		Initial: solver.Initial{BackgroundFlow: arrivals},
		Horizon: horizon,
	})
}

// Every cycle alike: with arrivals q and saturation flow s the delay of a cycle is q r²/(2 (1-q/s)) (Webster 1958, Road
// Research Technical Paper 39, its uniform term times the vehicles of a cycle), and the tail turns back where the wave
// of green, at 5 m/s, catches up with that of red, at v = q/(kj - q/20).
func TestCyclesBelowCapacity(t *testing.T) {
	const q = 0.2
	s := lightOnTheWay(t, q, 300)
	cycles := must(s.Cycles("light"))(t)
	if len(cycles) != 5 {
		t.Fatalf("%d cycles, want 5: %+v", len(cycles), cycles)
	}
	v := q / (0.15 - q/20)
	turn := 5 * 30 / (5 - v)
	for i, c := range cycles {
		start := 60 * float64(i)
		agree(t, "start", c.Start, start)
		agree(t, "green", c.Green, start+30)
		agree(t, "end", c.End, start+60)
		agree(t, "back of queue", c.BackOfQueue, v*turn)
		agree(t, "its time", c.BackOfQueueTime, start+turn)
		agree(t, "departed", c.Departed, q*60)
		agree(t, "delay", c.Delay, q*30*30/(2*(1-q/0.6)))
		if c.Residual != 0 || c.Failed() || !c.Complete {
			t.Errorf("cycle %d: %+v, want a complete one that serves its queue", i+1, c)
		}
	}
}

// With more arrivals than green serves the first cycle leaves what stands between the tail, 60 v upstream of the stop
// line, and the head, where the wave of green is after 30 s; each cycle departs what it serves.
func TestCyclesAboveCapacity(t *testing.T) {
	const q = 0.4
	s := lightOnTheWay(t, q, 300)
	cycles := must(s.Cycles("light"))(t)
	v := q / (0.15 - q/20)
	agree(t, "residual queue of the first cycle", cycles[0].Residual, 0.15*(60*v-5*30))
	for i, c := range cycles {
		if !c.Failed() {
			t.Errorf("cycle %d is said to serve its queue: %+v", i+1, c)
		}
		agree(t, "departed", c.Departed, 0.6*30)
		if i > 0 && c.Residual <= cycles[i-1].Residual {
			t.Errorf("residual queue falls to %g in cycle %d", c.Residual, i+1)
		}
	}
}

// On any signals the cycles tile the solved time; what departs adds up, no queue reaches further back than the back of
// queue, which one attains, and the delays of a single signal add up to those of its approach.
func TestCyclesAddUp(t *testing.T) {
	for name, r := range benchRelations(t) {
		s := mustSolve(t, arterial(r, 4, 10))
		for _, signal := range []string{"signal 1", "signal 2", "signal 3", "signal 4"} {
			t.Run(name+"/"+signal, func(t *testing.T) { checkCycles(t, s, signal) })
		}
	}
	for _, arrivals := range []float64{0, 0.2, 0.3, 0.4, 0.6} {
		s := lightOnTheWay(t, arrivals, 290)
		sum := 0.0
		for _, c := range checkCycles(t, s, "light") {
			sum += c.Delay
		}
		agree(t, "delay", sum, must(s.Totals(290))(t).Segments[0].Delay)
	}
}

func checkCycles(t *testing.T, s *solver.Solution, signal string) []solver.Cycle {
	t.Helper()
	place := 0.0
	for _, n := range s.Nodes() {
		if n.Name == signal {
			place = n.Place
		}
	}
	count := func(time float64) float64 { return must(s.At(place, time))(t).Count }
	cycles := must(s.Cycles(signal))(t)
	end, departed := 0.0, 0.0
	for _, c := range cycles {
		agree(t, "start", c.Start, end)
		if c.Green < c.Start || c.End < c.Green {
			t.Errorf("phases out of order: %+v", c)
		}
		end, departed = c.End, departed+c.Departed
		if c.Ended {
			agree(t, "residual queue", c.Residual, must(s.QueueAt(signal, c.End))(t).Vehicles)
		} else if c.Residual != 0 || c.End != s.Horizon() {
			t.Errorf("a green that has not ended leaves a residual queue: %+v", c)
		}
		furthest := 0.0
		for i := range 400 {
			furthest = math.Max(furthest, must(s.QueueAt(signal, c.Start+(c.End-c.Start)*float64(i)/400))(t).Length)
		}
		if furthest > c.BackOfQueue+1e-9*place || furthest < c.BackOfQueue-0.1*(c.End-c.Start) {
			t.Errorf("the queue reaches back %g m, its back is said to be %g m: %+v", furthest, c.BackOfQueue, c)
		}
	}
	agree(t, "end", end, s.Horizon())
	agree(t, "departed", departed, count(s.Horizon())-count(0))
	return cycles
}

// Explicit windows: a signal that begins in green, in the middle of what would be a cycle, and ends in red.
func TestCyclesOfWindows(t *testing.T) {
	road := must(solver.Triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.15}))(t)
	s := answerOf(t, solver.Scenario{
		Segments: []solver.Segment{{Length: 1000, Relation: road}},
		Signals: []solver.Signal{{Name: "light", Place: 500, SaturationFlow: math.Inf(1),
			Plan: solver.Plan{Greens: []solver.Window{{Start: -5, End: 20}, {Start: 50, End: 70}}}}},
		Entry:   solver.Entry{Demand: rates(0, 0.1)},
		Horizon: 100,
	})
	cycles := must(s.Cycles("light"))(t)
	want := []solver.Cycle{{Start: 0, Green: 0, End: 20, Ended: true}, {Start: 20, Green: 50, End: 70, Complete: true, Ended: true}, {Start: 70, Green: 100, End: 100}}
	if len(cycles) != len(want) {
		t.Fatalf("%+v, want %+v", cycles, want)
	}
	for i, c := range cycles {
		agree(t, "start", c.Start, want[i].Start)
		agree(t, "green", c.Green, want[i].Green)
		agree(t, "end", c.End, want[i].End)
		if c.Complete != want[i].Complete || c.Ended != want[i].Ended {
			t.Errorf("cycle %d: %+v, want %+v", i+1, c, want[i])
		}
	}
}

func TestCyclesOfWhatIsNoSignal(t *testing.T) {
	s := lightOnTheWay(t, 0.2, 100)
	for _, name := range []string{"", "entry", "exit", "lamp"} {
		_, err := s.Cycles(name)
		var invalid *solver.InvalidError
		if !errors.As(err, &invalid) || len(invalid.Violations) != 1 || invalid.Violations[0].Rule != solver.RuleUnknown {
			t.Errorf("%q: %v, want that it names no signal", name, err)
		}
	}
}
