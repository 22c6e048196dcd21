package solver

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestCubicRootsAreThoseItWasMadeOf(t *testing.T) {
	random := rand.New(rand.NewPCG(13, 14))
	for range 5000 {
		r := [3]float64{random.Float64(), 2 + random.Float64(), 4 + random.Float64()}
		scale := 2*random.Float64() - 1
		c := cubic{-scale * r[0] * r[1] * r[2], scale * (r[0]*r[1] + r[0]*r[2] + r[1]*r[2]), -scale * (r[0] + r[1] + r[2]), scale}
		got, n := c.roots(0, 10)
		if n != 3 {
			t.Fatalf("%d roots of %v, want 3", n, c)
		}
		for i, want := range r {
			if math.Abs(got[i]-want) > 1e-12 {
				t.Fatalf("root %d of %v is %.17g, want %.17g", i, c, got[i], want)
			}
		}
		falling := r[1]
		if scale < 0 {
			falling = r[0]
		}
		if got := c.descent(0, 10); math.Abs(got-falling) > 1e-12 {
			t.Fatalf("descent of %v at %.17g, want %.17g", c, got, falling)
		}
	}
}
