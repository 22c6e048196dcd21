package solver_test

import (
	"math/rand/v2"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// risingProfile is a random profile that never falls: ramps, level stretches and jumps in any order, from place 0.
func risingProfile(random *rand.Rand, kj float64) (profile []solver.ProfilePiece, whole rise, width float64) {
	k, x := 0.3*kj*random.Float64(), 0.0
	first, weighted := k, 0.0
	step := func() float64 { return (kj - k) * 0.5 * random.Float64() }
	for range 3 + random.IntN(6) {
		length := 20 + 400*random.Float64()
		if random.IntN(3) == 0 { // a jump before the piece
			jump := step()
			weighted += jump * x
			k += jump
		}
		climb := 0.0
		if random.IntN(4) > 0 {
			climb = step()
		}
		profile = append(profile, ramp(x, x+length, k, k+climb))
		weighted += climb * (x + length/2)
		k += climb
		x += length
	}
	return profile, rise{first, k, weighted / (k - first)}, x
}

// Whatever rises becomes one shock: once two widths have passed at the difference of the outer wave speeds, it lies
// on the line of equal areas, with no trace of what happened in between. (See published_ramps_test.go.)
func TestRisingProfileEndsAsOneShockAtItsCentre(t *testing.T) {
	const seed = 20261212
	random := rand.New(rand.NewPCG(seed, 12))
	for i := range 300 {
		vf, kj := 10+30*random.Float64(), 0.1+0.4*random.Float64()
		profile, whole, width := risingProfile(random, kj)
		if whole.kR-whole.kL < 0.05*kj {
			continue
		}
		merged := width * kj / (vf * (whole.kR - whole.kL))
		reach := 7 * vf * merged
		road := append([]solver.ProfilePiece{flat(-reach, 0, whole.kL)}, profile...)
		road = append(road, flat(width, width+reach, whole.kR))
		s := answerOf(t, openRoad(greenshields(t, vf, kj), 6*merged, road...))
		for _, u := range []float64{1.01, 2, 6} {
			f := jumpBetween(t, s, u*merged, whole.kL, whole.kR)
			agreeOn(t, "place", f.Position(u*merged), whole.place(vf, kj, u*merged), width+vf*merged)
			if n := countShocks(s, 0.999*u*merged); n != 1 {
				t.Errorf("%d shocks, want 1", n)
			}
		}
		if t.Failed() {
			t.Fatalf("seed %d, profile %d: vf %g, kj %g, %+v", seed, i, vf, kj, profile)
		}
	}
}
