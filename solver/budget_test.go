package solver_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"testing"
	"time"

	"github.com/roadswell/roadswell/solver"
)

// fiveEvents is a road with five events at known times: 0.375 veh/s (10 m/s) come to a bottleneck of 0.25 veh/s at
// 1000 m from time 0, whose flow reaches 1500 m at 50 s and 2000 m at 100 s; at 100 s the road is closed at
// 1500 m; what passed before is gone at 150 s; the queue, at -2 m/s, is back at 1000 m at 350 s.
func fiveEvents(t *testing.T) (s solver.Scenario, times []float64) {
	t.Helper()
	return solver.Scenario{
		Segments:    []solver.Segment{exactRoad(t, 2000)},
		Bottlenecks: []solver.Bottleneck{{Name: "first", Place: 1000, Capacity: rates(0, 0.25)}, {Name: "second", Place: 1500, Capacity: rates(100, 0)}},
		Entry:       solver.Entry{Demand: rates(0, 0.375)},
		Initial:     solver.Initial{BackgroundFlow: 0.375},
		Horizon:     400,
	}, []float64{50, 100, 100, 150, 350}
}

func limitOf(t *testing.T, s solver.Scenario, b solver.Budget) *solver.LimitError {
	t.Helper()
	solution, err := solver.Solve(context.Background(), s, b)
	var e *solver.LimitError
	if solution != nil || !errors.As(err, &e) {
		t.Fatalf("solution %v, error %v, want a LimitError", solution, err)
	}
	return e
}

// A budget of n interactions is used up when the next one is due, and says how far the solution had come.
func TestBudgetOfInteractions(t *testing.T) {
	s, times := fiveEvents(t)
	for n := 1; n < len(times); n++ {
		e := limitOf(t, s, solver.Budget{Interactions: int64(n)})
		if e.Limit != "interactions" || e.Max != int64(n) {
			t.Errorf("%+v, want the limit of %d interactions", e, n)
		}
		agree(t, "reached", e.Reached, times[n])
		if want := fmt.Sprintf("limit of %d interactions reached at scenario time %g s", n, times[n]); e.Error() != want {
			t.Errorf("%q, want %q", e.Error(), want)
		}
	}
	solution, err := solver.Solve(context.Background(), s, solver.Budget{Interactions: int64(len(times))})
	if err != nil {
		t.Fatal(err)
	}
	if got := solution.Stats().Interactions; got != int64(len(times)) {
		t.Errorf("%d interactions, want %d", got, len(times))
	}
}

// A solve that would hold more than its budget of memory is given up on the way.
func TestBudgetOfMemory(t *testing.T) {
	s := arterial(benchRelations(t)["triangular"], 32, 100)
	whole := mustSolve(t, s).Stats()
	e := limitOf(t, s, solver.Budget{Memory: whole.Bytes / 2})
	if e.Limit != "bytes" || e.Max != whole.Bytes/2 || !(e.Reached > 0 && e.Reached < s.Horizon) {
		t.Errorf("%+v, want the limit of %d bytes, within (0, %g) s", e, whole.Bytes/2, s.Horizon)
	}
	if _, err := solver.Solve(context.Background(), s, solver.Budget{Memory: whole.Bytes}); err != nil {
		t.Errorf("with as much memory as it needs: %v", err)
	}
}

// What is laid out counts before the first event.
func TestBudgetOfMemoryAtTheStart(t *testing.T) {
	for name, r := range benchRelations(t) {
		if e := limitOf(t, arterial(r, 32, 100), solver.Budget{Memory: 100_000}); e.Limit != "bytes" || e.Reached != 0 {
			t.Errorf("%s: %+v, want the limit of bytes before the first second", name, e)
		}
	}
}

// No solution is larger than its budget, however short the solve was.
func TestNoSolutionIsLargerThanItsBudget(t *testing.T) {
	s, _ := fiveEvents(t)
	for _, memory := range []int64{1, 1000, 10_000, 100_000} {
		solution, err := solver.Solve(context.Background(), s, solver.Budget{Memory: memory})
		if err != nil {
			var e *solver.LimitError
			if !errors.As(err, &e) || e.Limit != "bytes" || e.Max != memory {
				t.Errorf("budget of %d bytes: %v", memory, err)
			}
			continue
		}
		if got := solution.Stats().Bytes; got > memory {
			t.Errorf("a budget of %d bytes gives a solution of %d", memory, got)
		}
	}
}

// Short cycles unfold to long schedules: signals together are held to one number of switches, so that a short
// request does not fill the memory before any budget is looked at.
func TestSignalsTogetherAreBounded(t *testing.T) {
	s := solver.Scenario{Segments: []solver.Segment{exactRoad(t, 1000)}, Horizon: 600}
	for i := range 16 {
		s.Signals = append(s.Signals, solver.Signal{Name: string(rune('a' + i)), Place: float64(10 + i), SaturationFlow: math.Inf(1),
			Plan: solver.Plan{Cycle: 0.00115, Greens: []solver.Window{{End: 0.000575}}}})
	}
	if list := violationsOf(t, s.Validate()); len(list) != 1 || !names(list, "Signals", solver.RuleRange, "1.6695652e+07") {
		t.Errorf("violations %+v", list)
	}
}

// The zero budget stands for the defaults, and so does one of nothing.
func TestZeroBudget(t *testing.T) {
	s, _ := fiveEvents(t)
	for _, b := range []solver.Budget{{}, {Interactions: -1, Memory: -1}} {
		if _, err := solver.Solve(context.Background(), s, b); err != nil {
			t.Errorf("budget %+v: %v", b, err)
		}
	}
}

func TestEndedContexts(t *testing.T) {
	s, _ := fiveEvents(t)
	cancelled, cancel := context.WithCancel(context.Background())
	cancel()
	expired, done := context.WithDeadline(context.Background(), time.Unix(0, 0))
	defer done()
	for _, c := range []struct {
		ctx  context.Context
		want error
	}{{cancelled, context.Canceled}, {expired, context.DeadlineExceeded}} {
		if solution, err := solver.Solve(c.ctx, s, solver.Budget{}); solution != nil || !errors.Is(err, c.want) {
			t.Errorf("solution %v, error %v, want %v", solution, err, c.want)
		}
	}
}

// impatient is a context that ends after it has been looked at a number of times.
type impatient struct {
	context.Context
	looks, patience int
}

func (c *impatient) Err() error {
	if c.looks++; c.looks > c.patience {
		return context.Canceled
	}
	return nil
}

// A context that ends while the solve is under way ends it; the work done by then grows with the time it was let.
func TestAContextThatEndsOnTheWay(t *testing.T) {
	s := arterial(benchRelations(t)["triangular"], 8, 40)
	patient := &impatient{Context: context.Background(), patience: 1 << 30}
	whole, err := solver.Solve(patient, s, solver.Budget{})
	if err != nil {
		t.Fatal(err)
	}
	// A look for every thousand interactions at the least, or a caller waits too long.
	if most := whole.Stats().Interactions / 1000; most < 3 || patient.looks < int(most) {
		t.Fatalf("%d looks at the context in %d interactions", patient.looks, whole.Stats().Interactions)
	}
	for patience := range 3 {
		ctx := &impatient{Context: context.Background(), patience: patience}
		if solution, err := solver.Solve(ctx, s, solver.Budget{}); solution != nil || !errors.Is(err, context.Canceled) || ctx.looks != patience+1 {
			t.Errorf("patience %d: solution %v, error %v after %d looks", patience, solution, err, ctx.looks)
		}
	}
}
