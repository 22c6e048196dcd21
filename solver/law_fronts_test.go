package solver_test

import (
	"math"
	"slices"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// eachFront calls f for every front that lasts, at the start, in the middle and at the end of its life.
func (s *solved) eachFront(f func(solver.Front, float64)) {
	for _, front := range s.Fronts() {
		a, b := front.Birth.Time, front.End.Time
		if b-a < promised*s.scenario.Horizon {
			continue
		}
		for _, share := range []float64{0.01, 0.5, 0.99} {
			f(front, a+share*(b-a))
		}
	}
}

// TestEveryShockIsCompressive: density rises downstream across every shock.
func TestEveryShockIsCompressive(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		s.eachFront(func(f solver.Front, time float64) {
			if up, down := f.Sides(time); f.Kind == solver.Shock && !(up.Density < down.Density) {
				t.Errorf("front %d at %g s, %g m is a shock from %.17g to %.17g veh/m", f.ID, time, f.Position(time), up.Density, down.Density)
			}
		})
	})
}

// TestEveryFrontKeepsTheVehicles: the Rankine-Hugoniot condition. What flows into a front on one side flows
// out on the other, seen from the front.
func TestEveryFrontKeepsTheVehicles(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		s.eachFront(func(f solver.Front, time float64) {
			up, down := f.Sides(time)
			in, out := up.Flow-up.Density*f.Speed(time), down.Flow-down.Density*f.Speed(time)
			if q := s.scenario.Segments[f.Segment].Relation.Capacity(); math.Abs(in-out) > promised*q {
				t.Errorf("front %d (%v) at %g s moves at %g m/s: %.15g veh/s flow in, %.15g out", f.ID, f.Kind, time, f.Speed(time), in, out)
			}
		})
	})
}

// TestAnEdgeHasOneDensity: only the gradient jumps there.
func TestAnEdgeHasOneDensity(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		s.eachFront(func(f solver.Front, time float64) {
			up, down := f.Sides(time)
			if kj := s.scenario.Segments[f.Segment].Relation.JamDensity(); f.Kind == solver.Edge && math.Abs(up.Density-down.Density) > promised*kj {
				t.Errorf("edge %d at %g s separates %.15g from %.15g veh/m", f.ID, time, up.Density, down.Density)
			}
		})
	})
}

// TestFrontsBeginAndEndWhereTheySay: on their path, inside their segment, and a merged front where the next
// one is born.
func TestFrontsBeginAndEndWhereTheySay(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		fronts, edges := s.Fronts(), s.edges()
		near := promised * (s.exit() - s.scenario.Origin)
		for i, f := range fronts {
			if f.ID != i {
				t.Errorf("front %d has the id %d", i, f.ID)
			}
			within(t, "place of birth", f.Position(f.Birth.Time), f.Birth.Place, near)
			within(t, "place of end", f.Position(f.End.Time), f.End.Place, near)
			if low, high := min(f.Birth.Place, f.End.Place), max(f.Birth.Place, f.End.Place); low < edges[f.Segment]-near || high > edges[f.Segment+1]+near {
				t.Errorf("front %d runs from %g to %g m, outside its segment", i, f.Birth.Place, f.End.Place)
			}
			if f.EndsBy == solver.Merged && f.Into >= 0 {
				within(t, "where it merges into the next", f.End.Place, fronts[f.Into].Birth.Place, near)
				within(t, "when it merges into the next", f.End.Time, fronts[f.Into].Birth.Time, promised*s.scenario.Horizon)
			}
		}
	})
}

// TestAStraightFrontIsStraight: its middle is in the middle.
func TestAStraightFrontIsStraight(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for _, f := range s.Fronts() {
			if middle := (f.Birth.Time + f.End.Time) / 2; f.Straight {
				within(t, "middle of a straight front", f.Position(middle), (f.Birth.Place+f.End.Place)/2, promised*(s.exit()-s.scenario.Origin))
			}
		}
	})
}

// boundaries are the places of all fronts, nodes and ends at a time, from upstream.
func (s *solved) boundaries(time float64) []float64 {
	out := append(s.edges(), s.placed()...)
	for _, f := range s.Fronts() {
		if f.Birth.Time <= time && time < f.End.Time {
			out = append(out, f.Position(time))
		}
	}
	slices.Sort(out)
	return out
}

// tiny is the width below which a region is not asked into: a thousand times the promised relative error of
// the place of its fronts.
func (s *solved) tiny() float64 { return 1000 * promised * (s.exit() - s.scenario.Origin) }

// TestBetweenFrontsDensityIsLinear: so the middle density is the mean of those at the quarters, and N falls by
// that mean times the distance. No front is missing from the list, and N belongs to the densities.
func TestBetweenFrontsDensityIsLinear(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		time := s.sometime()
		at := s.boundaries(time)
		for i := 1; i < len(at); i++ {
			width := at[i] - at[i-1]
			if width < s.tiny() {
				continue
			}
			a, b, c := s.sample(t, at[i-1]+width/4, time), s.sample(t, at[i-1]+width/2, time), s.sample(t, at[i]-width/4, time)
			mean := (a.Down.Density + c.Down.Density) / 2
			within(t, "density in the middle and mean density", b.Down.Density, mean, promised*s.densest())
			within(t, "fall of N and mean density times distance", a.Count-c.Count, mean*width/2, s.count)
		}
	})
}

// TestNIsContinuousAcrossEveryFrontAndNode: extended linearly from either side, exact where the density is
// linear, N is the same on the front.
func TestNIsContinuousAcrossEveryFrontAndNode(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		time := s.sometime()
		at := s.boundaries(time)
		for i := 1; i+1 < len(at); i++ {
			up, down := (at[i]-at[i-1])/4, (at[i+1]-at[i])/4
			if math.Min(up, down) < s.tiny() {
				continue
			}
			fromUp := s.n(t, at[i]-2*up, time) - 2*up*s.sample(t, at[i]-up, time).Down.Density
			fromDown := s.n(t, at[i]+2*down, time) + 2*down*s.sample(t, at[i]+down, time).Down.Density
			s.same(t, "N from upstream and from downstream", time, fromUp, fromDown)
			s.same(t, "N from upstream and there", time, fromUp, s.n(t, at[i], time))
		}
	})
}
