package reference

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// uniform lists uniform pieces: places and the densities between them.
func uniform(places, densities []float64) []solver.ProfilePiece {
	var out []solver.ProfilePiece
	for i, k := range densities {
		out = append(out, solver.ProfilePiece{Start: places[i], End: places[i+1], StartDensity: k, EndDensity: k})
	}
	return out
}

// densityByCount is -dN/dx by a central difference, exact where the density is linear.
func densityByCount(h LaxHopf, x, t float64) float64 {
	const d = 1e-4
	return (h.Count(x-d, t) - h.Count(x+d, t)) / (2 * d)
}

// differenceNoise bounds the rounding error of densityByCount for counts of size n.
func differenceNoise(n float64) float64 { return 16 * 0x1p-52 * n / 1e-4 }

// TestLaxHopfGreenLightFan: a full queue let go under the linear law opens k = (kj/2)(1 - x/(vf t)); at the
// light always half of the jam density (checks.md P16; Whitham 1974, section 3.1).
func TestLaxHopfGreenLightFan(t *testing.T) {
	h := LaxHopf{Law: GreenshieldsLaw(20, 0.16), Profile: uniform([]float64{-1000, 0, 1000}, []float64{0.16, 0})}
	for _, at := range []float64{5, 20, 40} {
		for u := -0.95; u < 1; u += 0.19 {
			want := 0.08 * (1 - u)
			if got := densityByCount(h, u*20*at, at); math.Abs(got-want) > differenceNoise(160) {
				t.Errorf("k(%g vf t, %g) = %.12g, want %.12g", u, at, got, want)
			}
		}
	}
}

// TestLaxHopfFocusingRamp: the ramp k = x from 1/4 to 1 (vf = kj = 1) collapses at t = 1/2, x = 1/2 into a
// shock of speed -1/4 (checks.md P22). A quarter on either side of the shock tells where it is.
func TestLaxHopfFocusingRamp(t *testing.T) {
	h := LaxHopf{Law: GreenshieldsLaw(1, 1), Profile: []solver.ProfilePiece{
		{Start: -5, End: 0.25, StartDensity: 0.25, EndDensity: 0.25},
		{Start: 0.25, End: 1, StartDensity: 0.25, EndDensity: 1},
		{Start: 1, End: 5, StartDensity: 1, EndDensity: 1},
	}}
	shock := 0.5 - 0.5/4
	for x, want := range map[float64]float64{shock - 1e-3: 0.25, shock + 1e-3: 1} {
		if got := densityByCount(h, x, 1); math.Abs(got-want) > differenceNoise(5) {
			t.Errorf("k(%g, 1) = %.12g, want %g", x, got, want)
		}
	}
}

// TestLaxHopfMergingShocks: 0.1, 0.4, 0.8 (vf = kj = 1): shocks 0.5 and -0.2 merge at t = 1/0.7, x = 0.5/0.7
// and go on at 0.1 (checks.md P24). On a shock the counts of both outer states agree with N.
func TestLaxHopfMergingShocks(t *testing.T) {
	h := LaxHopf{Law: GreenshieldsLaw(1, 1), Profile: uniform([]float64{-10, 0, 1, 10}, []float64{0.1, 0.4, 0.8})}
	meet := 1 / 0.7
	x := 0.5*meet + 0.1*(3-meet)
	want := -1.0 + 0.09*3 - 0.1*x // N at the start of the profile is 0, at x = 0 it is -1
	if got := h.Count(x, 3); math.Abs(got-want) > 1e-13 {
		t.Errorf("N on the merged shock = %.15g, want %.15g", got, want)
	}
	if k := densityByCount(h, x-1e-3, 3); math.Abs(k-0.1) > differenceNoise(1) {
		t.Errorf("upstream density %g, want 0.1", k)
	}
	if k := densityByCount(h, x+1e-3, 3); math.Abs(k-0.8) > differenceNoise(1) {
		t.Errorf("downstream density %g, want 0.8", k)
	}
}

// TestLaxHopfHalfJamTail: the square-root law of a queue that arrivals at half the jam density keep alive
// (checks.md P20): -400 m at 26.67 s, -600 m at 60 s. Just behind the tail the density is kj/2, just ahead of
// it more.
func TestLaxHopfHalfJamTail(t *testing.T) {
	const vf, kj, length = 15.0, 0.15, 200.0
	h := LaxHopf{Law: GreenshieldsLaw(vf, kj), Profile: uniform([]float64{-3000, -length, 0, 3000}, []float64{kj / 2, kj, 0})}
	for _, at := range []float64{10, 2 * length / vf, 40, 60, 100} {
		tail := HalfJamTail(vf, length, at)
		behind, ahead := densityByCount(h, tail-0.01, at), densityByCount(h, tail+0.01, at)
		if math.Abs(behind-kj/2) > differenceNoise(300) || ahead < kj/2*1.05 {
			t.Errorf("t = %g: tail %g m, density %g behind and %g ahead of it", at, tail, behind, ahead)
		}
	}
	if x := HalfJamTail(vf, length, 60); math.Abs(x+600) > 1e-12 {
		t.Errorf("tail at 60 s: %g m, want -600", x)
	}
}

// TestLaxHopfBlockRear: the rear of a finite block of stopped vehicles is its last vehicle and passes the
// block's front at 4 L/vf = 72 s, when the density ahead of it is kj/2 (checks.md P21).
func TestLaxHopfBlockRear(t *testing.T) {
	const vf, kj, length = 60 / 3.6, 0.12, 300.0
	h := LaxHopf{Law: GreenshieldsLaw(vf, kj), Profile: uniform([]float64{-10, 0, length, 9000}, []float64{0, kj, 0})}
	for _, at := range []float64{10, 18, 30, 72, 200} {
		rear := BlockRear(vf, length, at)
		if n := h.Count(rear, at); math.Abs(n) > 1e-12 {
			t.Errorf("t = %g: N at the rear = %g, want 0", at, n)
		}
		if k := densityByCount(h, rear-0.01, at); math.Abs(k) > differenceNoise(36) {
			t.Errorf("t = %g: density %g behind the rear, want 0", at, k)
		}
	}
	if x := BlockRear(vf, length, 72); math.Abs(x-length) > 1e-12 {
		t.Errorf("rear at 72 s: %g m, want %g", x, length)
	}
	if k := densityByCount(h, length+0.01, 72); math.Abs(k-kj/2) > 0.01*kj/(2*vf*72)+differenceNoise(36) {
		t.Errorf("density ahead of the rear at 72 s: %g, want %g", k, kj/2)
	}
}
