package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// jumpNear is the shock or contact that is nearest to a place at a time.
func jumpNear(t *testing.T, s *solver.Solution, x, time float64) solver.Front {
	t.Helper()
	var nearest solver.Front
	least := math.Inf(1)
	for _, f := range s.Fronts() {
		if f.Kind == solver.Edge || time < f.Birth.Time || time > f.End.Time {
			continue
		}
		if d := math.Abs(f.Position(time) - x); d < least {
			nearest, least = f, d
		}
	}
	if math.IsInf(least, 1) {
		t.Fatalf("no shock or contact at %g s", time)
	}
	return nearest
}

// jumpBetween is the one shock or contact between two densities at a time.
func jumpBetween(t *testing.T, s *solver.Solution, time, up, down float64) solver.Front {
	t.Helper()
	var found []solver.Front
	for _, f := range s.Fronts() {
		if f.Kind == solver.Edge || time < f.Birth.Time || time > f.End.Time {
			continue
		}
		u, d := f.Sides(time)
		if math.Abs(u.Density-up)+math.Abs(d.Density-down) <= exactness*(up+down) {
			found = append(found, f)
		}
	}
	if len(found) != 1 {
		t.Fatalf("%d fronts between %g and %g veh/m at %g s, want 1", len(found), up, down, time)
	}
	return found[0]
}

// shockBorn is the shock that is born at a place and time, to the exactness of the given scales.
func shockBorn(t *testing.T, s *solver.Solution, x, time, length, span float64) solver.Front {
	t.Helper()
	var near solver.Front
	least := math.Inf(1)
	for _, f := range s.Fronts() {
		if f.Kind != solver.Shock {
			continue
		}
		off := math.Max(math.Abs(f.Birth.Place-x)/length, math.Abs(f.Birth.Time-time)/span)
		if off < least {
			near, least = f, off
		}
	}
	if !(least <= exactness) {
		t.Fatalf("no shock is born at %.12g m, %.12g s: the nearest at %.12g m, %.12g s", x, time, near.Birth.Place, near.Birth.Time)
	}
	return near
}

// countShocks is the number of shocks that exist at a time.
func countShocks(s *solver.Solution, time float64) int {
	n := 0
	for _, f := range s.Fronts() {
		if f.Kind == solver.Shock && f.Birth.Time <= time && time < f.End.Time {
			n++
		}
	}
	return n
}
