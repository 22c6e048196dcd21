package reference

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// steps makes a schedule of (start, rate) pairs.
func steps(pairs ...float64) solver.Schedule {
	var s solver.Schedule
	for i := 0; i < len(pairs); i += 2 {
		s = append(s, solver.SchedulePiece{Start: pairs[i], Rate: pairs[i+1]})
	}
	return s
}

// TestFluidQueuePublishedCases re-solves cases of checks.md; units are those of each case.
func TestFluidQueuePublishedCases(t *testing.T) {
	for _, c := range []struct {
		name              string
		arrivals, service solver.Schedule
		to                float64
		max, clear, delay float64
	}{
		{"P27 rubbernecking, minutes from 16:30 (Mannering & Washburn problem)",
			steps(0, 6400.0/60*0.5), steps(0, 4800.0/60*0.5, 15, 6000.0/60*0.5, 30, 7200.0/60*0.5), 100, 250 * 1.0, 67.5, 9562.5},
		{"P28 full closure, one lane, two, minutes (CEE 207, Lehigh University)",
			steps(0, 4000.0/60), steps(0, 0, 15, 25, 35, 80), 200, 5500.0 / 3, 172.5, 161875},
		{"P29 resurfacing, minutes", steps(0, 80), steps(0, 60, 30, 120), 60, 600, 45, 13500},
		{"P30 two demand levels, hours (Buckholz, queuing notes, example 6)", steps(0, 200, 2, 125), steps(0, 150), 8, 100, 6, 300},
		{"P31 gate opens when 30 are waiting, minutes (Mannering & Washburn, ch. 5)", steps(0, 6, 15, 2), steps(0, 0, 5, 4), 60, 50, 40, 1100},
		{"P34 handbook incident, hours", steps(0, 4800), steps(0, 3454.5, 0.5, 7050), 2, 672.75, 0.5 + 672.75/2250, 0.5 * 672.75 * (0.5 + 672.75/2250)},
	} {
		f := SolveFluidQueue(c.arrivals, c.service, 0, 0, c.to)
		_, most := f.Max()
		clears := f.Clears()
		if len(clears) != 1 {
			t.Errorf("%s: clears at %v, want once", c.name, clears)
			continue
		}
		for _, v := range [][2]float64{{most, c.max}, {clears[0], c.clear}, {f.Delay(), c.delay}} {
			if math.Abs(v[0]-v[1]) > 1e-12*v[1] {
				t.Errorf("%s: %.12g, want %.12g", c.name, v[0], v[1])
			}
		}
	}
}

// TestFluidQueueOfParabolicDemand: demand falling linearly from 2 to 0 over [0, 4] at service 1: the queue is
// t - t²/4, greatest 1 at t = 2, gone at t = 4, total delay 8 - 16/3.
func TestFluidQueueOfParabolicDemand(t *testing.T) {
	f := SolveFluidQueue(solver.Schedule{{Rate: 2, Slope: -0.5}, {Start: 4}}, steps(0, 1), 0, 0, 10)
	at, most := f.Max()
	for _, v := range [][2]float64{{at, 2}, {most, 1}, {f.At(1), 0.75}, {f.At(5), 0}, {f.Delay(), 8 - 16.0/3}} {
		if math.Abs(v[0]-v[1]) > 1e-14 {
			t.Errorf("%.15g, want %.15g", v[0], v[1])
		}
	}
}

// TestFluidQueueFormsInsideAPiece: demand rising through the service rate inside a linear piece starts the
// queue at that moment.
func TestFluidQueueFormsInsideAPiece(t *testing.T) {
	f := SolveFluidQueue(solver.Schedule{{Rate: 0, Slope: 1}}, steps(0, 3), 0, 0, 5)
	if q := f.At(3); q != 0 {
		t.Errorf("queue at the crossing = %g, want 0", q)
	}
	if q := f.At(5); math.Abs(q-2) > 1e-14 {
		t.Errorf("queue at 5 = %g, want 2", q)
	}
}

// TestFluidQueueDelayIsTheIntegralOfTheQueue compares the closed form with a midpoint sum, whose error for a
// queue with slopes up to r and n steps of width h is at most r h²/4 each.
func TestFluidQueueDelayIsTheIntegralOfTheQueue(t *testing.T) {
	f := SolveFluidQueue(solver.Schedule{{Rate: 1, Slope: 0.02}, {Start: 70, Rate: 1.5}, {Start: 160}}, steps(0, 0.5, 30, 2, 120, 0, 140, 3), 4, 0, 200)
	const n = 100000
	sum, h := 0.0, 200.0/n
	for i := range n {
		sum += h * f.At((float64(i)+0.5)*h)
	}
	if bound := 3 * h * h / 4 * n; math.Abs(sum-f.Delay()) > bound {
		t.Errorf("delay %.9g, sum %.9g, bound %g", f.Delay(), sum, bound)
	}
}
