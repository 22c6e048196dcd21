package solver_test

import (
	"errors"
	"math"
	"slices"
	"sync/atomic"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// TestInstantaneousTravelTimeOfUniformStates: each stretch at its own speed.
func TestInstantaneousTravelTimeOfUniformStates(t *testing.T) {
	road := must(solver.Triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.15}))(t)
	s := answerOf(t, solver.Scenario{
		Segments: []solver.Segment{{Length: 1000, Relation: road}},
		Initial: solver.Initial{Profile: []solver.ProfilePiece{
			{Start: 0, End: 400, StartDensity: 0, EndDensity: 0},
			{Start: 400, End: 1000, StartDensity: 0.1, EndDensity: 0.1},
		}},
		Horizon: 100,
	})
	// 0.1 veh/m carry 5*(0.15-0.1) = 0.25 veh/s: 2.5 m/s.
	got, ok, err := s.InstantaneousTravelTime(100, 900, 0)
	if err != nil || !ok {
		t.Fatal(ok, err)
	}
	agree(t, "time", got, 300/20.0+500/2.5)
}

// TestInstantaneousTravelTimeIsTheIntegral: of 1/v, by quadrature between the fronts, on every relation and in fans and
// profiles of both branches.
func TestInstantaneousTravelTimeIsTheIntegral(t *testing.T) {
	f := features{kinds: allKinds, segments: 2, bottlenecks: 1, steps: true, slopes: true, profile: true}
	var judged atomic.Int64
	t.Cleanup(func() {
		if judged.Load() < 5 && *onlySeed == 0 {
			t.Errorf("only %d corridors could be judged", judged.Load())
		}
	})
	onRandomCorridors(t, f, func(t testing.TB, s *solved) {
		from, to, time := s.somewhere(), s.somewhere(), s.sometime()
		if from > to {
			from, to = to, from
		}
		got, ok, err := s.InstantaneousTravelTime(from, to, time)
		if err != nil {
			t.Fatal(err)
		}
		coarse, _ := s.slownessBetween(t, from, to, time, 32)
		want, slowest := s.slownessBetween(t, from, to, time, 64)
		switch off := math.Abs(want - coarse); { // which shows how good a judge the quadrature is; next to a jam, none
		case off > 1e-3*want || slowest == 0:
			return
		case !ok:
			t.Errorf("from %g to %g at %g: no time, but nobody goes slower than %g m/s", from, to, time, slowest)
		case math.Abs(got-want) > off+1e-9*want:
			t.Errorf("from %g to %g at %g: %.12g s, want %.12g", from, to, time, got, want)
		default:
			judged.Add(1)
		}
	})
}

// slownessBetween integrates 1/v at a time by Gauss's rule of three points on many cells between the fronts.
func (s *solved) slownessBetween(t testing.TB, from, to, time float64, cells int) (sum, slowest float64) {
	t.Helper()
	ends := []float64{from, to}
	for _, f := range s.Fronts() {
		if f.Birth.Time <= time && time <= f.End.Time {
			ends = append(ends, f.Position(time))
		}
	}
	for _, n := range s.Nodes() {
		ends = append(ends, n.Place)
	}
	slowest = math.Inf(1)
	places := sortedBetween(ends, from, to)
	const node = 0.7745966692414834
	for i := 1; i < len(places); i++ {
		h := (places[i] - places[i-1]) / float64(cells)
		for j := range cells {
			middle := places[i-1] + (float64(j)+0.5)*h
			for _, point := range [3][2]float64{{-node, 5.0 / 18}, {0, 8.0 / 18}, {node, 5.0 / 18}} {
				v := s.sample(t, middle+0.5*h*point[0], time).Up.Speed
				slowest = math.Min(slowest, v)
				sum += h * point[1] / v
			}
		}
	}
	return sum, slowest
}

func TestNoInstantaneousTravelTimeThroughAJam(t *testing.T) {
	s := redThenGreen(t)
	if got, ok, err := s.InstantaneousTravelTime(0, 2048, 59); ok || err != nil {
		t.Errorf("through standing traffic: %g s, %v, %v", got, ok, err)
	}
	if _, ok, err := s.InstantaneousTravelTime(1024, 2048, 59); !ok || err != nil {
		t.Errorf("beyond the jam: %v, %v", ok, err)
	}
	for _, bad := range [][3]float64{{-1, 10, 0}, {10, 5, 0}, {0, 3000, 0}, {0, 10, 201}, {0, 10, math.NaN()}} {
		var invalid *solver.InvalidError
		if _, _, err := s.InstantaneousTravelTime(bad[0], bad[1], bad[2]); !errors.As(err, &invalid) {
			t.Errorf("%v: %v", bad, err)
		}
	}
}

// sortedBetween lists the places strictly between two others, with these, in order.
func sortedBetween(places []float64, from, to float64) []float64 {
	out := []float64{from, to}
	for _, x := range places {
		if x > from && x < to {
			out = append(out, x)
		}
	}
	slices.Sort(out)
	return out
}
