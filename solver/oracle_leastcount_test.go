package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver/internal/reference"
)

// orderLeastCount is what must be seen of the first order at which the variational reference approaches the exact
// counts in the greatest error, of which no norm takes the mean: every kind of wave and node is held to it alike.
const orderLeastCount = 0.8

// steps of the reference, each half of the one before [s].
var leastCountSteps = []float64{4, 2, 1, 0.5}

// TestLeastCountConvergesToTheExactCount: the variational solution with counts at the nodes at the ends of time
// steps, which has no cells and knows no wave but shares the least-count principle with the solver, approaches its
// answers in the greatest error over the road and the nodes.
func TestLeastCountConvergesToTheExactCount(t *testing.T) {
	for _, v := range []struct {
		name string
		features
	}{
		{"joins", features{kinds: allKinds, segments: 4, steps: true, profile: true}},
		{"bottlenecks", features{kinds: allKinds, segments: 2, bottlenecks: 3, steps: true, exit: true}},
		{"signals", features{kinds: allKinds, segments: 1, signals: 3, steps: true, queues: true}},
		{"everything", anything},
	} {
		t.Run(v.name, func(t *testing.T) {
			t.Parallel()
			steps := leastCountSteps
			if testing.Short() {
				steps = steps[:len(steps)-1]
			}
			sums := make([]float64, len(steps))
			for seed := range uint64(12) {
				onCorridor(t, drawCorridor(seedsOf(v.name)+seed, v.features), func(t testing.TB, s *solved) {
					for i, step := range steps {
						sums[i] += s.leastCountDistance(t, step) / s.corridor.vehicles()
					}
				})
			}
			order := reference.Order(sums)
			t.Logf("greatest errors of the count %.3v of the vehicles, order %.2f", sums, order)
			if order < orderLeastCount {
				t.Errorf("differences %.3v shrink at order %.2f only", sums, order)
			}
		})
	}
}

// leastCountDistance is the greatest difference to the reference: along the road at the horizon, and of what has
// passed the nodes by then.
func (s *solved) leastCountDistance(t testing.TB, step float64) float64 {
	t.Helper()
	var laws []reference.Law
	for _, spec := range s.specs {
		laws = append(laws, spec.law())
	}
	march := reference.SolveLeastCount(s.scenario, laws, step)
	worst := 0.0
	for i := range 100 {
		x := s.scenario.Origin + (float64(i)+0.5)/100*(s.exit()-s.scenario.Origin)
		worst = math.Max(worst, math.Abs(march.Count(x)-s.n(t, x, s.scenario.Horizon)))
	}
	for g, x := range march.Places() {
		_, counts := march.Passed(g)
		worst = math.Max(worst, math.Abs(counts[len(counts)-1]-s.n(t, x, s.scenario.Horizon)))
	}
	return worst
}
