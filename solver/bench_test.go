package solver_test

import (
	"context"
	"fmt"
	"math"
	"testing"
	"time"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// arterial has signals 400 m apart with a common cycle of 80 s, half of it green, and staggered offsets; the demand
// is close to what they pass.
func arterial(r solver.Relation, signals, cycles int) solver.Scenario {
	r = r.Lanes(2)
	s := solver.Scenario{
		Segments: []solver.Segment{{Length: 400 * float64(signals+1), Relation: r}},
		Entry:    solver.Entry{Demand: solver.Schedule{{Rate: 0.42 * r.Capacity()}}},
		Horizon:  80 * float64(cycles),
	}
	for i := range signals {
		s.Signals = append(s.Signals, solver.Signal{
			Name: fmt.Sprintf("signal %d", i+1), Place: 400 * float64(i+1), SaturationFlow: math.Inf(1),
			Plan: solver.Plan{Cycle: 80, Offset: float64(i * 27 % 80), Greens: []solver.Window{{Start: 0, End: 40}}},
		})
	}
	return s
}

// benchRelations are one relation without and one with curvature.
func benchRelations(t testing.TB) map[string]solver.Relation {
	straight, err := solver.Triangular(solver.TriangularParams{FreeSpeed: 14, WaveSpeed: 5, JamDensity: 0.14})
	if err != nil {
		t.Fatal(err)
	}
	curved, err := solver.Greenshields(15, 0.14)
	if err != nil {
		t.Fatal(err)
	}
	return map[string]solver.Relation{"triangular": straight, "Greenshields": curved}
}

func mustSolve(t testing.TB, s solver.Scenario) *solver.Solution {
	t.Helper()
	solution, err := solver.Solve(context.Background(), s, solver.Budget{})
	if err != nil {
		t.Fatal(err)
	}
	return solution
}

// BenchmarkSolveArterial is one solve of four signals over ten cycles.
func BenchmarkSolveArterial(b *testing.B) {
	for name, r := range benchRelations(b) {
		b.Run(name, func(b *testing.B) {
			s := arterial(r, 4, 10)
			b.ReportAllocs()
			for b.Loop() {
				mustSolve(b, s)
			}
		})
	}
}

// BenchmarkExactAgainstCells solves four signals over ten cycles exactly and, in the same run, with the
// finite-volume reference at a given density error against the exact one: over the road and the ten cycles, relative to
// the mean density. It reports how many times faster the exact solve is, also for the error at the horizon alone, which
// depends on what the signals show just then. On the triangular relation the reference converges at order one half, so
// that 1 % takes it many minutes: what 2 % takes, which is less, is a lower bound.
func BenchmarkExactAgainstCells(b *testing.B) {
	for _, c := range []struct {
		relation string
		share    float64
	}{{"Greenshields", 0.01}, {"Greenshields", 0.005}, {"triangular", 0.02}} {
		b.Run(fmt.Sprintf("%s/%g%%", c.relation, 100*c.share), func(b *testing.B) {
			s := arterial(benchRelations(b)[c.relation], 4, 10)
			throughout, atHorizon := cellsForError(b, s, c.share)
			quickest := math.Inf(1)
			b.ReportAllocs()
			for b.Loop() {
				begin := time.Now()
				for range batch {
					mustSolve(b, s)
				}
				quickest = math.Min(quickest, time.Since(begin).Seconds()/batch)
			}
			b.ReportMetric(quickest*1e6, "µs/solve")
			b.ReportMetric(throughout.seconds/quickest, "times-faster")
			b.ReportMetric(throughout.seconds, "s/reference")
			b.ReportMetric(throughout.cell, "m/cell")
			b.ReportMetric(atHorizon.seconds/quickest, "times-faster-for-horizon")
		})
	}
}

// batch of solves that are timed together, collections of garbage among them; of the batches the quickest counts, as of
// the runs of the reference.
const batch = 50

// cellRun is what the reference takes for cells of a width [m]: time [s], and the share of error that is left.
type cellRun struct {
	cell, seconds, share float64
}

// atShare is between two runs, by powers of the error, where the share of error is the wanted one.
func atShare(want float64, coarse, fine cellRun) cellRun {
	part := math.Log(want/coarse.share) / math.Log(fine.share/coarse.share)
	between := func(a, b float64) float64 { return a * math.Pow(b/a, part) }
	return cellRun{between(coarse.cell, fine.cell), between(coarse.seconds, fine.seconds), want}
}

// cellsForError halves the cells of the reference until its error is the wanted share, throughout and at the
// horizon.
func cellsForError(b *testing.B, s solver.Scenario, want float64) (throughout, atHorizon cellRun) {
	solution := mustSolve(b, s)
	var looks []float64
	for t := 4.0; t < s.Horizon; t += 8 {
		looks = append(looks, t)
	}
	var before [2]cellRun
	for cell := 8.0; cell > 0.001; cell /= 2 {
		took := math.Inf(1)
		var r *reference.Result
		for i := 0; i < 3 && (i == 0 || took < 10); i++ {
			begin := time.Now()
			r = reference.Godunov(s, reference.Options{Cell: cell, Times: looks})
			took = math.Min(took, time.Since(begin).Seconds())
		}
		now := [2]cellRun{{cell, took, densityError(b, solution, r, r.Snapshots)}, {cell, took, densityError(b, solution, r, r.Snapshots[len(looks):])}}
		if atHorizon.cell == 0 && now[1].share <= want {
			atHorizon = atShare(want, before[1], now[1])
		}
		if now[0].share <= want && atHorizon.cell > 0 {
			return atShare(want, before[0], now[0]), atHorizon
		}
		before = now
	}
	b.Fatal("the reference does not get there")
	return throughout, atHorizon
}

// densityError is the L1 distance of the cells' densities from the exact ones in the middle of the cells, summed over
// snapshots, relative to the L1 norm of the exact density.
func densityError(b *testing.B, s *solver.Solution, r *reference.Result, snapshots []reference.Snapshot) float64 {
	off, norm := 0.0, 0.0
	for _, shot := range snapshots {
		for i, k := range shot.Density {
			x, width := 0.5*(r.Edges[i]+r.Edges[i+1]), r.Edges[i+1]-r.Edges[i]
			a, err := s.At(x, shot.Time)
			if err != nil {
				b.Fatal(err)
			}
			off += width * math.Abs(a.Down.Density-k)
			norm += width * a.Down.Density
		}
	}
	return off / norm
}

// BenchmarkGrowth takes the time for more cycles and more signals, and reports the growth exponent of the time in
// the number of wave interactions over each row.
func BenchmarkGrowth(b *testing.B) {
	rows := map[string][][2]int{
		"cycles":  {{4, 10}, {4, 100}, {4, 1000}},
		"signals": {{1, 100}, {8, 100}, {32, 100}},
	}
	for name, r := range benchRelations(b) {
		for row, sizes := range rows {
			b.Run(name+"/"+row, func(b *testing.B) {
				var last float64
				for b.Loop() {
					last = growth(b, r, sizes)
				}
				b.ReportMetric(last, "exponent")
			})
		}
	}
}

// growth is the slope of log time over log interactions from the smallest to the largest size.
func growth(b *testing.B, r solver.Relation, sizes [][2]int) float64 {
	var first, last [2]float64
	for i, size := range sizes {
		s := arterial(r, size[0], size[1])
		took, interactions := quickest(b, s)
		last = [2]float64{math.Log(interactions), math.Log(took)}
		if i == 0 {
			first = last
		}
	}
	return (last[1] - first[1]) / (last[0] - first[0])
}

// quickest of five turns, in each of which the solve is repeated for a twentieth of a second: so that all sizes bear
// collections of garbage and other work on the machine alike.
func quickest(b *testing.B, s solver.Scenario) (seconds, interactions float64) {
	seconds = math.Inf(1)
	for range 5 {
		solves, begin := 0.0, time.Now()
		for solves == 0 || time.Since(begin) < time.Second/20 {
			interactions = float64(mustSolve(b, s).Stats().Interactions)
			solves++
		}
		seconds = math.Min(seconds, time.Since(begin).Seconds()/solves)
	}
	return seconds, interactions
}

// BenchmarkInteraction reports what one wave interaction costs.
func BenchmarkInteraction(b *testing.B) {
	for name, r := range benchRelations(b) {
		b.Run(name, func(b *testing.B) {
			s := arterial(r, 4, 1000)
			var interactions int64
			b.ReportAllocs()
			for b.Loop() {
				interactions += mustSolve(b, s).Stats().Interactions
			}
			b.ReportMetric(float64(b.Elapsed())/float64(interactions), "ns/interaction")
		})
	}
}

// mostAllocations per wave interaction: lists that double as they grow, and nothing else.
const mostAllocations = 0.05

// TestInteractionsDoNotAllocate: from ten times as many cycles on, the allocations hardly grow.
func TestInteractionsDoNotAllocate(t *testing.T) {
	for name, r := range benchRelations(t) {
		small, large := arterial(r, 4, 100), arterial(r, 4, 1000)
		count := func(s solver.Scenario) float64 { return testing.AllocsPerRun(3, func() { mustSolve(t, s) }) }
		more := count(large) - count(small)
		interactions := float64(mustSolve(t, large).Stats().Interactions - mustSolve(t, small).Stats().Interactions)
		if more > mostAllocations*interactions {
			t.Errorf("%s: %.0f allocations for %.0f interactions", name, more, interactions)
		}
	}
}

// TestWorkGrowsWithInteractions: ten times the cycles make about ten times the interactions, so that time, which
// the benchmarks show to grow with these alone, grows with the traffic and not with its square.
func TestWorkGrowsWithInteractions(t *testing.T) {
	for name, r := range benchRelations(t) {
		ten := float64(mustSolve(t, arterial(r, 4, 100)).Stats().Interactions)
		hundred := float64(mustSolve(t, arterial(r, 4, 1000)).Stats().Interactions)
		if ratio := hundred / ten; ratio > 11 || ratio < 9 {
			t.Errorf("%s: %g interactions in 100 cycles, %g in 1000", name, ten, hundred)
		}
	}
}
