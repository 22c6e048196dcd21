package reference

import (
	"math"
	"slices"

	"github.com/roadswell/roadswell/solver"
)

// pieceAt is the schedule's piece in force at t; the zero piece before the first.
func pieceAt(s solver.Schedule, t float64) solver.SchedulePiece {
	var now solver.SchedulePiece
	for _, p := range s {
		if p.Start <= t {
			now = p
		}
	}
	return now
}

func rateOf(p solver.SchedulePiece, t float64) float64 {
	if p.Slope == 0 {
		return p.Rate
	}
	return p.Rate + p.Slope*(t-p.Start)
}

// meanRate is the schedule's mean over a time step in which no piece starts: a piece is at most linear, so it
// is the rate at the middle. before is the rate in force before the first piece.
func meanRate(s solver.Schedule, before, from, to float64) float64 {
	middle := (from + to) / 2
	if len(s) == 0 || middle < s[0].Start {
		return before
	}
	return rateOf(pieceAt(s, middle), middle)
}

// GreenAt says whether the plan shows effective green at t.
func GreenAt(p solver.Plan, t float64) bool {
	if p.Cycle > 0 {
		t = math.Mod(t-p.Offset, p.Cycle)
		if t < 0 {
			t += p.Cycle
		}
	}
	return slices.ContainsFunc(p.Greens, func(w solver.Window) bool { return t >= w.Start && t < w.End })
}

// Greens lists the effective greens that touch (0, horizon) as explicit times, cut to that span.
func Greens(p solver.Plan, horizon float64) []solver.Window {
	first, last := 0, 0
	if p.Cycle > 0 {
		first, last = int(math.Floor(-p.Offset/p.Cycle))-1, int(math.Ceil((horizon-p.Offset)/p.Cycle))+1
	}
	var out []solver.Window
	for n := first; n <= last; n++ {
		for _, w := range p.Greens {
			from, to := w.Start, w.End
			if p.Cycle > 0 {
				begin := p.Offset + float64(n)*p.Cycle
				from, to = begin+w.Start, begin+w.End
			}
			if from, to = math.Max(0, from), math.Min(horizon, to); from < to {
				out = append(out, solver.Window{Start: from, End: to})
			}
		}
	}
	return out
}

// switches are all the times strictly within (0, horizon) at which something in the scenario changes.
func switches(s *solver.Scenario) []float64 {
	out := append(startsWithin(s.Entry.Demand, 0, s.Horizon), startsWithin(s.Exit.Capacity, 0, s.Horizon)...)
	for _, b := range s.Bottlenecks {
		out = append(out, startsWithin(b.Capacity, 0, s.Horizon)...)
	}
	for _, g := range s.Signals {
		for _, w := range Greens(g.Plan, s.Horizon) {
			out = append(out, w.Start, w.End)
		}
	}
	return out
}

// sorted sorts and drops repetitions.
func sorted(x []float64) []float64 {
	slices.Sort(x)
	return slices.Compact(x)
}
