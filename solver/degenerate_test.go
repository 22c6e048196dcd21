package solver_test

import (
	"context"
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// The corridors of this file are degenerate on purpose: events that fall together, states on the border of two
// cases, sizes at the end of the range. Each must keep the laws; where a closed form is at hand, the count at
// the exit is compared with it.

// degenerate is one such corridor.
type degenerate struct {
	name     string
	scenario solver.Scenario
	left     float64 // vehicles that have left by the horizon; NaN: not known by hand
}

// A road to go wrong on: 10 m/s free, 5 m/s back, 0.15 veh/m in a jam, so capacity 0.5 veh/s at 0.05 veh/m.
// All waves are exact in binary, so what should fall together does.
func exactRoad(t testing.TB, length float64) solver.Segment {
	t.Helper()
	r, err := solver.Triangular(solver.TriangularParams{FreeSpeed: 10, WaveSpeed: 5, JamDensity: 0.15})
	if err != nil {
		t.Fatal(err)
	}
	return solver.Segment{Length: length, Relation: r}
}

func bentRoad(t testing.TB, length float64) solver.Segment {
	t.Helper()
	r, err := solver.Greenshields(16, 0.125)
	if err != nil {
		t.Fatal(err)
	}
	return solver.Segment{Length: length, Relation: r}
}

func rates(pairs ...float64) solver.Schedule {
	var s solver.Schedule
	for i := 0; i < len(pairs); i += 2 {
		s = append(s, solver.SchedulePiece{Start: pairs[i], Rate: pairs[i+1]})
	}
	return s
}

func light(name string, place float64, greens ...float64) solver.Signal {
	g := solver.Signal{Name: name, Place: place, SaturationFlow: math.Inf(1)}
	for i := 0; i < len(greens); i += 2 {
		g.Plan.Greens = append(g.Plan.Greens, solver.Window{Start: greens[i], End: greens[i+1]})
	}
	return g
}

// keepsTheLaws solves a corridor and checks conservation, range, order and agreement of counts with totals.
func keepsTheLaws(t *testing.T, d degenerate) {
	t.Helper()
	solution, err := solver.Solve(context.Background(), d.scenario, solver.Budget{})
	if err != nil {
		t.Fatal(err)
	}
	s := asSolved(d.scenario, solution)
	checkLaws(t, s)
	if got := s.totalsAt(t, d.scenario.Horizon).Left; !math.IsNaN(d.left) && math.Abs(got-d.left) > s.count {
		t.Errorf("%.15g vehicles left, want %.15g", got, d.left)
	}
	if t.Failed() {
		t.Log("\n" + picture(s))
	}
}

// asSolved dresses a solution of any scenario up as that of a corridor, so that the laws can be asked.
func asSolved(scenario solver.Scenario, solution *solver.Solution) *solved {
	c := corridor{scenario: scenario}
	s := &solved{corridor: c, Solution: solution, d: newDice(1).Rand}
	s.count = promised * c.vehicles()
	return s
}

// checkLaws are the laws that hold for every scenario, cheaply asked.
func checkLaws(t testing.TB, s *solved) {
	t.Helper()
	total := s.totalsAt(t, s.scenario.Horizon)
	s.same(t, "initial + entered, left + stored", s.scenario.Horizon, total.Initial+total.Entered, total.Left+total.Stored)
	s.same(t, "wished to enter; entered, waiting and turned away", s.scenario.Horizon,
		wishing(s.scenario.Entry.Demand, s.scenario.Horizon), total.Entered+total.Waiting+total.TurnedAway)
	s.same(t, "N at the exit, left - initial", s.scenario.Horizon, s.n(t, s.exit(), s.scenario.Horizon), total.Left-total.Initial)
	for _, f := range s.Fronts() {
		middle := (f.Birth.Time + f.End.Time) / 2
		if up, down := f.Sides(middle); f.Kind == solver.Shock && f.End.Time > f.Birth.Time && !(up.Density < down.Density) {
			t.Errorf("front %d is a shock from %g to %g veh/m", f.ID, up.Density, down.Density)
		}
	}
	for range 20 {
		x, time := s.somewhere(), s.sometime()
		a := s.sample(t, x, time)
		inRange(t, s.relationAt(x), a.Up)
		inRange(t, s.relationAt(x), a.Down)
		tr := s.drive(t, x, time)
		if end := s.n(t, tr.End.Place, tr.End.Time); math.Abs(end-a.Count) > 2*s.count {
			t.Errorf("vehicle %g from (%g, %g) ends at %+v, where N is %g", a.Count, x, time, tr.End, end)
		}
	}
}

// TestDegenerateCorridors runs all the tables.
func TestDegenerateCorridors(t *testing.T) {
	for _, table := range [][]degenerate{coincidences(t), borders(t), placesAtTheEnd(t), sizes(t)} {
		for _, d := range table {
			t.Run(d.name, func(t *testing.T) { keepsTheLaws(t, d) })
		}
	}
}
