package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// leastCountAgreement is how well the exact count must agree with the brute-force least count, relative to the
// vehicles on the road. The minimisation itself is good to about 1e-15 of them.
const leastCountAgreement = 1e-8

// TestLaxHopfOnHomogeneousRoads: wherever neither end of the road can have had an influence, the count is the
// least one over all places that it could have come from.
func TestLaxHopfOnHomogeneousRoads(t *testing.T) {
	for _, kind := range allKinds {
		t.Run(kind.String(), func(t *testing.T) {
			f := features{kinds: []relationKind{kind}, segments: 6, same: true, profile: true, steps: true}
			onRandomCorridors(t, f, func(t testing.TB, s *solved) {
				if len(s.scenario.Initial.Profile) == 0 {
					return // nothing happens on a uniform road
				}
				agreesWithLeastCount(t, s)
			})
		})
	}
}

func agreesWithLeastCount(t testing.TB, s *solved) {
	t.Helper()
	least := reference.LaxHopf{Law: s.specs[0].law(), Profile: reference.InitialProfile(&s.scenario)}
	for range 40 {
		x, time := s.inside(least)
		want := least.Count(x, time)
		if got := s.n(t, x, time); math.Abs(got-want) > leastCountAgreement*s.corridor.vehicles() {
			t.Errorf("N(%.12g, %.12g) = %.15g, least count %.15g, off by %.2g", x, time, got, want, got-want)
		}
	}
}

// inside draws a point that neither end of the road can have reached.
func (s *solved) inside(h reference.LaxHopf) (x, time float64) {
	fastest, slowest := h.Law.Kinks()[0], h.Law.Kinks()[len(h.Law.Kinks())-1]
	apex := (s.exit() - s.scenario.Origin) / (fastest - slowest)
	time = s.d.Float64() * math.Min(apex, s.scenario.Horizon)
	from, to := s.scenario.Origin+fastest*time, s.exit()+slowest*time
	return from + s.d.Float64()*(to-from), time
}

// TestLaxHopfOnManyRamps: a profile of thirty ramps and jumps on a road of 20 km, so that shocks form, bend and
// merge, for ten minutes.
func TestLaxHopfOnManyRamps(t *testing.T) {
	for _, kind := range allKinds {
		t.Run(kind.String(), func(t *testing.T) {
			f := features{kinds: []relationKind{kind}, segments: 1}
			t.Parallel()
			for seed := range uint64(20) {
				c := drawCorridor(seed, f)
				c.scenario = manyRamps(c, seed)
				if !onCorridor(t, c, agreesWithLeastCount) {
					t.Errorf("seed %d is refused", seed)
				}
			}
		})
	}
}

func manyRamps(c corridor, seed uint64) solver.Scenario {
	s := c.scenario
	s.Horizon, s.Origin = 600, 0
	s.Segments = []solver.Segment{{Name: "road", Length: 20000, Relation: c.specs[0].relation()}}
	d := newDice(seed)
	s.Initial = solver.Initial{}
	kj := s.Segments[0].Relation.JamDensity()
	k := d.in(0, kj)
	for i := range 30 {
		next := d.in(0, kj)
		from, to := float64(i)*20000/30, float64(i+1)*20000/30
		s.Initial.Profile = append(s.Initial.Profile, solver.ProfilePiece{Start: from, End: to, StartDensity: k, EndDensity: next})
		if k = next; d.chance(0.3) {
			k = d.in(0, kj)
		}
	}
	return s
}
