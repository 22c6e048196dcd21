package solver_test

import (
	"context"
	"errors"
	"math"
	"testing"
	"time"

	"github.com/roadswell/roadswell/solver"
)

// fuzzBudget keeps every input cheap: what costs more must end in a LimitError.
var fuzzBudget = solver.Budget{Interactions: 20_000, Memory: 64 << 20}

// hanging is far longer than 20 000 interactions and their questions ever take.
const hanging = 20 * time.Second

// FuzzSolve: any bytes make a scenario. It is refused with a typed error, or solved within budget and the laws
// hold; never a panic, never a hang.
//
//	go test ./solver -run '^$' -fuzz FuzzSolve -fuzztime 10m
func FuzzSolve(f *testing.F) {
	for _, seed := range fuzzSeeds() {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		ctx, cancel := context.WithTimeout(context.Background(), hanging)
		defer cancel()
		scenario := decodeScenario(data)
		solution, err := solver.Solve(ctx, scenario, fuzzBudget)
		if err != nil {
			refusedProperly(t, scenario, err)
			return
		}
		if n := solution.Stats().Interactions; n > fuzzBudget.Interactions {
			t.Errorf("%d interactions, allowed %d", n, fuzzBudget.Interactions)
		}
		if err := scenario.Validate(); err != nil {
			t.Errorf("solved, though it is not valid: %v", err)
		}
		if sane(scenario) {
			checkLaws(t, asSolved(scenario, solution))
			return
		}
		askEverything(t, scenario, solution)
	})
}

// refusedProperly checks that a refusal is one of the documented kinds and says something.
func refusedProperly(t *testing.T, s solver.Scenario, err error) {
	t.Helper()
	var invalid *solver.InvalidError
	var limit *solver.LimitError
	var beyond *solver.ClosedFormError
	switch {
	case errors.As(err, &invalid):
		if len(invalid.Violations) == 0 || s.Validate() == nil {
			t.Errorf("refused as invalid, but nothing is named or Validate accepts it: %v", err)
		}
	case errors.As(err, &limit):
		if limit.Max != fuzzBudget.Interactions && limit.Max != fuzzBudget.Memory {
			t.Errorf("a limit that nobody set: %+v", limit)
		}
	case errors.As(err, &beyond):
		if !(beyond.Time >= 0 && beyond.Time <= s.Horizon) {
			t.Errorf("no closed form from %g s on, horizon %g s", beyond.Time, s.Horizon)
		}
	default:
		t.Errorf("an error of no documented kind: %v", err)
	}
}

// sane reports whether all sizes of the scenario lie within what roads are like, give or take a thousandfold:
// only then must nine digits be right. For what is not sane the solver owes an answer without panic or NaN.
func sane(s solver.Scenario) bool {
	ok := between(s.Horizon, 1e-3, 1e6) && between(math.Abs(s.Origin), 0, 1e6)
	for _, g := range s.Segments {
		r := g.Relation
		ok = ok && between(g.Length, 1e-1, 1e6) && between(r.FreeSpeed(), 1e-2, 1e3) && between(r.JamDensity(), 1e-3, 10) &&
			between(-r.WaveSpeed(r.JamDensity()), 1e-2, 1e3) && between(r.Capacity(), 1e-4, 1e2)
	}
	for _, p := range s.Entry.Demand {
		ok = ok && between(p.Rate, 0, 1e2)
	}
	return ok
}

func between(x, lo, hi float64) bool { return x >= lo && x <= hi }

// askEverything asks one question of every kind; the answers must be numbers, or refusals.
func askEverything(t *testing.T, s solver.Scenario, solution *solver.Solution) {
	t.Helper()
	entry, exit := solution.Extent()
	for _, u := range []float64{0, 0.3, 0.7, 1} {
		x, at := entry+u*(exit-entry), u*s.Horizon
		if a, err := solution.At(x, at); err == nil && math.IsNaN(a.Count+a.Up.Density+a.Down.Speed) {
			t.Errorf("At(%g, %g) = %+v", x, at, a)
		}
		if total, err := solution.Totals(at); err != nil || math.IsNaN(total.VehicleTime+total.Delay+total.Stored) {
			t.Errorf("Totals(%g) = %+v, %v", at, total, err)
		}
		if tr, err := solution.Trajectory(x, at); err == nil && math.IsNaN(tr.End.Place+tr.End.Time) {
			t.Errorf("Trajectory(%g, %g) ends at %+v", x, at, tr.End)
		}
		if trip, err := solution.TravelTime(entry, exit, at); err == nil && math.IsNaN(trip.Duration+trip.Delay+trip.WaitOutside) {
			t.Errorf("TravelTime(%g, %g, %g) = %+v", entry, exit, at, trip)
		}
		if c, err := solution.Characteristic(x, at); err == nil && len(c.Points) == 0 {
			t.Errorf("Characteristic(%g, %g) has no point", x, at)
		}
	}
	for _, n := range solution.Nodes() {
		queues, err := solution.Queues(n.Name)
		state, errAt := solution.QueueAt(n.Name, s.Horizon/2)
		_, _, errReach := solution.QueueReaches(n.Name, entry)
		if err := errors.Join(err, errAt, errReach); err != nil || math.IsNaN(state.Length+state.Vehicles) {
			t.Errorf("queue of %s: %+v, %v", n.Name, state, err)
		}
		if cycles, err := solution.Cycles(n.Name); (err == nil) != (n.Kind == solver.SignalNode) || err == nil && len(cycles) == 0 {
			t.Errorf("cycles of %s: %+v, %v", n.Name, cycles, err)
		} else {
			for _, c := range cycles {
				if math.IsNaN(c.BackOfQueue + c.Residual + c.Departed + c.Delay) {
					t.Errorf("cycle of %s: %+v", n.Name, c)
				}
			}
		}
		for _, q := range queues {
			if math.IsNaN(q.PeakLength + q.PeakVehicles + q.End) {
				t.Errorf("queue of %s: %+v", n.Name, q)
			}
		}
	}
	solution.Fronts()
}

// fuzzSeeds are byte strings that decode to something worth changing: each begins with another relation.
func fuzzSeeds() [][]byte {
	var out [][]byte
	for kind := range byte(5) {
		seed := []byte{0, 64, 0, 64, 0, 96, kind, 0, 40, 0, 48, 0, 30, 0, 50, 2}
		for i := range byte(120) {
			seed = append(seed, (i*37+kind*11)%200)
		}
		out = append(out, seed, nil, []byte{kind})
	}
	return out
}
