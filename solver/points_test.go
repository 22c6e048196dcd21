package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// The points of fronts, trajectories and queues: straight lines between them stay within the tolerance asked for.

// Points: between them straight lines stay within the tolerance, they begin and end with the front, and a coarser
// tolerance asks for no more of them.
func TestFrontPointsStayWithinTheirTolerance(t *testing.T) {
	eachCurved(t, func(t *testing.T, f solver.Front) {
		fewer := math.MaxInt
		for _, tolerance := range []float64{1e-4, 0.01, 1, 100} {
			points := f.Points(tolerance)
			if points[0] != f.Birth || points[len(points)-1] != f.End {
				t.Errorf("front %d: points from %+v to %+v, want %+v to %+v", f.ID, points[0], points[len(points)-1], f.Birth, f.End)
			}
			if len(points) > fewer {
				t.Errorf("front %d: %d points for %g m, %d for less", f.ID, len(points), tolerance, fewer)
			}
			fewer = len(points)
			if off := farthest(t, points, f.Position); off > tolerance {
				t.Errorf("front %d: lines between %d points are up to %g m off, allowed %g", f.ID, len(points), off, tolerance)
			}
		}
	})
}

// farthest is how far straight lines between the points are from a path, at forty times on each and, for an arc
// that turns at once, ever closer to its beginning.
func farthest(t *testing.T, points []solver.Point, path func(time float64) float64) float64 {
	t.Helper()
	off := 0.0
	for i := 1; i < len(points); i++ {
		a, b := points[i-1], points[i]
		if !(b.Time > a.Time) {
			t.Fatalf("point %d at %g s is not after the one before it at %g s", i, b.Time, a.Time)
		}
		look := func(share float64) {
			time := a.Time + share*(b.Time-a.Time)
			off = math.Max(off, math.Abs(path(time)-a.Place-share*(b.Place-a.Place)))
		}
		for j := 1; j < 40; j++ {
			look(float64(j) / 40)
			look(math.Ldexp(1, -j))
		}
	}
	return off
}

// The path of the moment's green, against its own closed form.
func TestSquareRootPathsAreDrawnWithinTheirTolerance(t *testing.T) {
	f := upstreamOf(t, shortGreen(t), 1024)
	path := func(time float64) float64 { return 1024 - 16*time + 16*math.Sqrt(0.05*time) }
	for _, tolerance := range []float64{1e-3, 0.1, 5} {
		if off := farthest(t, f.Points(tolerance), path); off > tolerance*(1+exactness) {
			t.Errorf("%g m off, allowed %g", off, tolerance)
		}
	}
}

// A vehicle stands 256 m before the light of redThenGreen until the first wave is there, after 16 s. With tau the time since
// green it then goes at v = (16 + (x-1024)/tau)/2, so x = 1024 + 16 tau - b sqrt(tau) with -256 = 16*16 - b*4, b = 128: it
// passes the light when 16 tau = 128 sqrt(tau), at 64 s.
func TestTrajectoryPointsStayWithinTheirTolerance(t *testing.T) {
	tr := trajectory(t, redThenGreen(t), 768, 70)
	path := func(time float64) float64 {
		if tau := time - 60; tau > 16 {
			return 1024 + 16*tau - 128*math.Sqrt(tau)
		}
		return 768
	}
	agree(t, "passes the light", passes(t, tr, 1024), 124)
	for _, tolerance := range []float64{1e-3, 0.1, 5} {
		points := tr.Points(tolerance)
		if off := farthest(t, points, path); off > tolerance*(1+exactness) {
			t.Errorf("%d points: %g m off, allowed %g", len(points), off, tolerance)
		}
		if points[0] != point(768, 70) || points[len(points)-1] != tr.End || tr.End.Time != 200 || tr.Left {
			t.Errorf("points from %+v to %+v, end %+v", points[0], points[len(points)-1], tr.End)
		}
	}
	agree(t, "where it is at the horizon", tr.End.Place, path(200))
}

// The tail of redThenGreen: straight up to 80 s, then the square root, which turns back 45 s after green where
// 8 = 240/sqrt(20*45), at 1024 + 360 - 720 m. The head stands at the light: the fan is congested up to its critical wave.
func TestTailPointsStayWithinTheirTolerance(t *testing.T) {
	q := onlyQueue(t, redThenGreen(t), "light")
	path := func(time float64) float64 {
		if time > 80 {
			return tailAfterGreen(time)
		}
		return 1024 - 4*time
	}
	agree(t, "greatest length", q.PeakLength, 360)
	agreeWithin(t, "its time", q.PeakLengthTime, 105, 1e-5) // the length is flat there: 1e-5 s are 1e-12 m
	for _, tolerance := range []float64{1e-3, 0.1, 5} {
		strips := q.Strips(tolerance)
		if len(strips) != 1 {
			t.Fatalf("%d strips, want one", len(strips))
		}
		for _, points := range [][]solver.Point{q.TailPoints(tolerance), strips[0].Tail} {
			if off := farthest(t, points, path); off > tolerance*(1+exactness) {
				t.Errorf("%d points: %g m off, allowed %g", len(points), off, tolerance)
			}
			if first, last := points[0], points[len(points)-1]; first != point(1024, 0) || last.Time != 200 {
				t.Errorf("tail from %+v to %+v", first, last)
			}
		}
		if off := farthest(t, strips[0].Head, func(float64) float64 { return 1024 }); off > exactness*1024 {
			t.Errorf("the head is up to %g m from the light", off)
		}
	}
}

// The strips of the oversaturated light of TestOversaturatedSignalHasStrips, corner by corner.
func TestStripPathsAreExactWhereStraight(t *testing.T) {
	strips := onlyQueue(t, oversaturated(t), "light").Strips(1)
	if len(strips) != 2 {
		t.Fatalf("%d strips, want two", len(strips))
	}
	checkPath(t, strips[0].Tail, point(1000, 0), point(1000-400.0/3, 200.0/3))
	checkPath(t, strips[0].Head, point(1000, 0), point(1000, 40), point(1000-400.0/3, 200.0/3))
	checkPath(t, strips[1].Tail, point(1000, 60), point(1000-200.0/3, 220.0/3), point(840, 120))
	checkPath(t, strips[1].Head, point(1000, 60), point(1000, 100), point(900, 120))
}
