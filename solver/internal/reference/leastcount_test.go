package reference

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// TestLeastCountWithoutNodesIsLaxHopf: on one road with ends that let everything in and out, the march over
// time steps and the formula over the whole plane are the same minimum.
func TestLeastCountWithoutNodesIsLaxHopf(t *testing.T) {
	for _, p := range lawPairs(t) {
		s := humpScenario(p)
		exact := LaxHopf{Law: p.law, Profile: s.Initial.Profile}
		march := SolveLeastCount(s, []Law{p.law}, 5)
		for x := 2000.0; x < 5500; x += 71 {
			if from, to := exact.Range(x, s.Horizon); from < 0 || to > 6000 {
				continue
			}
			if got, want := march.Count(x), exact.Count(x, s.Horizon); math.Abs(got-want) > 1e-11 {
				t.Errorf("%s: N(%g) = %.15g, Lax-Hopf %.15g", p.name, x, got, want)
			}
		}
	}
}

// TestLeastCountOfABottleneckIsAFluidQueue: the count at a bottleneck is that of the deterministic queue with
// arrivals later by the free trip, at every step. All changes lie on steps here, so there is no error but
// rounding, one unit of the count a step.
func TestLeastCountOfABottleneckIsAFluidQueue(t *testing.T) {
	p := bothWorlds(t)[0]
	demand, service := steps(0, 0.4, 600, 0.1), steps(0, 0.25, 900, 0.5)
	s := solver.Scenario{
		Segments:    []solver.Segment{{Length: 12000, Relation: p.solver}},
		Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 9000, Capacity: service}},
		Entry:       solver.Entry{Demand: demand},
		Horizon:     2400,
	}
	queue := SolveFluidQueue(steps(300, 0.4, 900, 0.1), service, 0, 0, s.Horizon)
	march := SolveLeastCount(s, []Law{p.law}, 5)
	times, counts := march.Passed(1)
	for i, at := range times {
		arrived := 0.4*math.Min(600, math.Max(0, at-300)) + 0.1*math.Max(0, at-900)
		if want := arrived - queue.At(at); math.Abs(counts[i]-want) > 0x1p-52*400*float64(len(times)) {
			t.Fatalf("at %g s %.12g vehicles passed, want %.12g", at, counts[i], want)
		}
	}
}

// TestLeastCountTailOfAFan: behind a signal under the linear law, N on the tail that the square-root law gives
// is that of the arriving stream (checks.md P19). The fan begins at a switch, which is a step.
func TestLeastCountTailOfAFan(t *testing.T) {
	law := RedGreen{FreeSpeed: 60 / 3.6, JamDensity: 0.12, Arriving: 0.03, Red: 30}
	relation, err := solver.Greenshields(law.FreeSpeed, law.JamDensity)
	if err != nil {
		t.Fatal(err)
	}
	arriving := relation.Flow(law.Arriving)
	for _, after := range []float64{5, 15, 22.5, 45, 80} {
		s := solver.Scenario{
			Segments: []solver.Segment{{Length: 3000, Relation: relation}},
			Signals: []solver.Signal{{Name: "light", Place: 2000, SaturationFlow: math.Inf(1),
				Plan: solver.Plan{Greens: []solver.Window{{Start: law.Red, End: 1e6}}}}},
			Entry:   solver.Entry{Demand: steps(0, arriving)},
			Initial: solver.Initial{BackgroundFlow: arriving},
			Horizon: law.Red + after,
		}
		march := SolveLeastCount(s, []Law{GreenshieldsLaw(law.FreeSpeed, law.JamDensity)}, 1)
		x := 2000 + law.Tail(after)
		if got, want := march.Count(x), arriving*s.Horizon-law.Arriving*x; math.Abs(got-want) > 1e-10 {
			t.Errorf("%g s after green: N on the tail = %.12g, want %.12g", after, got, want)
		}
	}
}

// TestLeastCountIsFirstOrder: against itself with a far finer step, on a road with three signals that send
// waves at each other, where queues clear anywhere between steps; a few rates of demand, since on a single one the
// errors at hand depend on where the steps happen to fall.
func TestLeastCountIsFirstOrder(t *testing.T) {
	for _, p := range bothWorlds(t) {
		sums := make([]float64, 3)
		for _, share := range []float64{0.3, 0.37, 0.44, 0.51} {
			s := threeSignals(p.solver, share*p.solver.Capacity())
			fine := SolveLeastCount(s, []Law{p.law}, 0.1)
			for i, step := range []float64{3.2, 1.6, 0.8} {
				march := SolveLeastCount(s, []Law{p.law}, step)
				for x := 5.0; x < 1000; x += 11 {
					sums[i] += math.Abs(march.Count(x) - fine.Count(x))
				}
			}
		}
		t.Logf("%s: errors of the count %.3g, order %.2f", p.name, sums, Order(sums))
		if Order(sums) < 0.8 {
			t.Errorf("%s: errors %.3g", p.name, sums)
		}
	}
}

func threeSignals(r solver.Relation, demand float64) solver.Scenario {
	s := solver.Scenario{
		Segments: []solver.Segment{{Length: 1000, Relation: r}},
		Entry:    solver.Entry{Demand: steps(0, demand)},
		Horizon:  200,
	}
	for i, place := range []float64{311, 523, 847} {
		s.Signals = append(s.Signals, solver.Signal{Name: string(rune('a' + i)), Place: place, SaturationFlow: math.Inf(1),
			Plan: solver.Plan{Cycle: 41.3, Offset: 7.9 * float64(i), Greens: []solver.Window{{Start: 3.3, End: 27.1}}}})
	}
	return s
}
