package reference

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// lawPair is one law written down twice: here and by the solver's constructor.
type lawPair struct {
	name   string
	law    Law
	solver solver.Relation
}

func lawPairs(t *testing.T) []lawPair {
	t.Helper()
	must := func(r solver.Relation, err error) solver.Relation {
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	return []lawPair{
		{"triangular", TriangularLaw(30, 5, 0.14),
			must(solver.Triangular(solver.TriangularParams{FreeSpeed: 30, WaveSpeed: 5, JamDensity: 0.14}))},
		{"trapezoidal", TrapezoidalLaw(25, 6, 0.15, 0.5),
			must(solver.Trapezoidal(solver.TrapezoidalParams{FreeSpeed: 25, WaveSpeed: 6, JamDensity: 0.15, Capacity: 0.5}))},
		{"Greenshields", GreenshieldsLaw(20, 0.16), must(solver.Greenshields(20, 0.16))},
		{"quadratic free branch", QuadraticFreeLaw(30, 22, 0.025, 0.15), must(solver.QuadraticFree(30, 22, 0.025, 0.15))},
		{"piecewise linear", PiecewiseLinearLaw([]float64{0, 0.02, 0.04, 0.15}, []float64{0, 0.5, 0.6, 0}),
			must(solver.PiecewiseLinear([]solver.FlowPoint{{}, {Density: 0.02, Flow: 0.5}, {Density: 0.04, Flow: 0.6}, {Density: 0.15}}))},
	}
}

// TestLawAndRelationAreTheSameCurve: two ways of writing down one curve agree to a few roundings of its
// capacity.
func TestLawAndRelationAreTheSameCurve(t *testing.T) {
	for _, p := range lawPairs(t) {
		for _, lanes := range []float64{1, 2.5} {
			law, r := p.law.Lanes(lanes), p.solver.Lanes(lanes)
			for i := range 1001 {
				k := law.JamDensity() * float64(i) / 1000
				if got, want := law.Flow(k), r.Flow(math.Min(k, r.JamDensity())); math.Abs(got-want) > 8*0x1p-52*r.Capacity() {
					t.Fatalf("%s, %g lanes: q(%g) = %.17g, relation says %.17g", p.name, lanes, k, got, want)
				}
			}
		}
	}
}

// TestTransformIsTheGreatestPassingRate compares the closed form with a plain search over densities: the grid
// of n densities misses the maximum by at most the flow's greatest slope relative to the observer times half
// a grid step, and never exceeds it.
func TestTransformIsTheGreatestPassingRate(t *testing.T) {
	const n = 20000
	for _, p := range lawPairs(t) {
		for v := -40.0; v <= 40; v += 0.7 {
			best, kj := math.Inf(-1), p.law.JamDensity()
			for i := range n + 1 {
				k := kj * float64(i) / n
				best = math.Max(best, p.law.Flow(k)-k*v)
			}
			got := p.law.Transform(v)
			if missed := (30 + math.Abs(v)) * kj / (2 * n); best > got+1e-14 || best < got-missed {
				t.Errorf("%s: L(%g) = %.12g, search finds %.12g", p.name, v, got, best)
			}
		}
	}
}

// TestTransformOfTheLinearSpeedLaw: L(v) = kj (vf - v)²/(4 vf) between the fastest waves, 0 above, -kj v below.
func TestTransformOfTheLinearSpeedLaw(t *testing.T) {
	law := GreenshieldsLaw(20, 0.16)
	for v, want := range map[float64]float64{-30: 4.8, -20: 3.2, 0: 0.8, 10: 0.2, 20: 0, 25: 0} {
		if got := law.Transform(v); math.Abs(got-want) > 1e-14 {
			t.Errorf("L(%g) = %.17g, want %g", v, got, want)
		}
	}
}
