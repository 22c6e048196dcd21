package solver_test

import (
	"fmt"
	"math"
	"sync"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// everyAnswer asks one question of every kind at many points and writes every bit of the answers down.
func everyAnswer(s *solved) string {
	out := fmt.Sprintf("%v\n", s.Stats())
	for _, f := range s.Fronts() {
		out += fmt.Sprintf("%d %v %v %v %v %d %v\n", f.ID, f.Kind, f.Birth, f.End, f.EndsBy, f.Into, f.Position((f.Birth.Time+f.End.Time)/2))
	}
	d := s.scenario
	for i := range 12 {
		x := d.Origin + (s.exit()-d.Origin)*math.Mod(float64(i)*0.618, 1)
		t := d.Horizon * math.Mod(float64(i)*0.755, 1)
		a, err := s.At(x, t)
		out += fmt.Sprintf("%v %v\n", a, err)
		tr, err := s.Trajectory(x, t)
		if err == nil {
			out += fmt.Sprintf("%v %v %v\n", tr.Left, tr.End, tr.Position((t+tr.End.Time)/2))
		}
		total, err := s.Totals(t)
		out += fmt.Sprintf("%v %v\n", total, err)
		for _, n := range s.Nodes() {
			q, err := s.QueueAt(n.Name, t)
			out += fmt.Sprintf("%s %v %v\n", n.Name, q, err)
		}
	}
	return out
}

// TestSameInputSameOutput, bit for bit.
func TestSameInputSameOutput(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		again, err := solveCorridor(drawCorridor(s.seed, anything))
		if err != nil {
			t.Fatal(err)
		}
		if a, b := everyAnswer(s), everyAnswer(again); a != b {
			t.Errorf("two solutions of one scenario differ:\n%s\n%s", a, b)
		}
	})
}

// TestASolutionCanBeAskedByMany: goroutines that ask one solution at the same time get what one alone gets.
// Worth most under the race detector.
func TestASolutionCanBeAskedByMany(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		if s.seed%8 != 0 {
			return // eight goroutines ask: an eighth of the corridors costs as much as one law on all
		}
		answers := make([]string, 8)
		var all sync.WaitGroup
		for i := range answers {
			all.Go(func() { answers[i] = everyAnswer(s) })
		}
		all.Wait()
		alone := everyAnswer(s)
		for i, a := range answers {
			if a != alone {
				t.Errorf("goroutine %d got:\n%s\nalone:\n%s", i, a, alone)
			}
		}
	})
}

// TestSolvingLeavesTheScenarioAlone: the caller's slices are neither changed nor kept.
func TestSolvingLeavesTheScenarioAlone(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		fresh := drawCorridor(s.seed, anything)
		if a, b := describe(&s.corridor), describe(&fresh); a != b {
			t.Errorf("the scenario was changed:\n%s\n%s", a, b)
		}
		before := everyAnswer(s)
		spoil(&s.scenario)
		s.scenario.Horizon, s.scenario.Origin = fresh.scenario.Horizon, fresh.scenario.Origin
		if after := everyAnswer(s); before != after {
			t.Errorf("a change of the scenario after the solve changed the answers:\n%s\n%s", before, after)
		}
	})
}

// spoil writes over everything that the scenario's slices hold, but lengths.
func spoil(s *solver.Scenario) {
	for i := range s.Bottlenecks {
		s.Bottlenecks[i].Place = -1
		clear(s.Bottlenecks[i].Capacity)
	}
	for i := range s.Signals {
		s.Signals[i].Place = -1
		clear(s.Signals[i].Plan.Greens)
	}
	clear(s.Entry.Demand)
	clear(s.Exit.Capacity)
	clear(s.Initial.Profile)
	clear(s.Initial.Queues)
}
