package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// carried is how well the density must stay the same along a wave, relative to jam density: a fan shows the rounding
// of a place multiplied by its gradient.
const carried = 1e-7

// TestCharacteristicsCarryTheirDensity: along a characteristic, from node to node and up to the front that swallows it,
// the density is that of its start. A wave that ran on through a front would come into another one.
func TestCharacteristicsCarryTheirDensity(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for range 3 {
			x, time := s.somewhere(), s.sometime()
			c, err := s.Characteristic(x, time)
			if err != nil {
				t.Fatalf("Characteristic(%g, %g): %v", x, time, err)
			}
			for i := 1; i < len(c.Points); i++ {
				from, to := c.Points[i-1], c.Points[i]
				if to.Time-from.Time < 1e-6*s.scenario.Horizon {
					continue // too short to tell from its ends
				}
				s.carriesOneDensity(t, from, to)
			}
		}
	})
}

func (s *solved) carriesOneDensity(t testing.TB, from, to solver.Point) {
	t.Helper()
	jam := s.relationAt(0.5 * (from.Place + to.Place)).JamDensity()
	along := func(share float64) solver.Sample {
		return s.sample(t, from.Place+share*(to.Place-from.Place), from.Time+share*(to.Time-from.Time))
	}
	first := along(0.01).Down.Density
	for _, share := range []float64{0.25, 0.5, 0.75, 0.99} {
		a := along(share)
		if off := math.Min(math.Abs(a.Down.Density-first), math.Abs(a.Up.Density-first)); off > carried*jam {
			t.Errorf("the wave of %.12g veh/m from %v to %v has %.12g, %.12g at %g of its way", first, from, to, a.Up.Density, a.Down.Density, share)
		}
	}
}
