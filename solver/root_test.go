package solver

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The falling functions that the root search has to stand: nearly straight, steep at one end, flat at the root,
// and lost in rounding long before the root's last digit.
var fallingShapes = map[string]func(t, root float64) float64{
	"straight": func(t, root float64) float64 { return root - t },
	"bent":     func(t, root float64) float64 { return (root - t) * (1 + 0.01*t) },
	"steep":    func(t, root float64) float64 { return math.Exp(-20*t) - math.Exp(-20*root) },
	"flat":     func(t, root float64) float64 { return (root - t) * (root - t) * (root - t) },
	"rounded":  func(t, root float64) float64 { return (1e6 + root - t) - 1e6 },
}

func TestFallingRootIsBracketedToTheLastDigit(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 12))
	for name, shape := range fallingShapes {
		for range 2000 {
			a := 100 * random.Float64()
			b := a + math.Pow(10, 4*random.Float64()-2)
			// Roots lie anywhere, and down to a millionth of a millionth of the bracket from its beginning.
			root := a + (b-a)*math.Pow(10, -12*random.Float64())
			evaluations := 0
			f := func(t float64) float64 { evaluations++; return shape(t, root) }
			got := fallingRoot(f, a, b)
			before := math.Nextafter(got, math.Inf(-1))
			if got < a || got > b || shape(got, root) > 0 || got > a && shape(before, root) <= 0 && shape(got, root) != 0 {
				t.Fatalf("%s: root %v of [%v, %v] found as %v: f there %g, before it %g", name, root, a, b, got, shape(got, root), shape(before, root))
			}
			if evaluations > 110 {
				t.Fatalf("%s: %d evaluations for the root %v of [%v, %v]", name, evaluations, root, a, b)
			}
		}
	}
}

// A root six micrometres ahead of a bracket of many kilometres' drive: the last step of the search, less than
// a digit of the wide side, must not be taken for the end of the search.
func TestFallingRootCloseToOneEnd(t *testing.T) {
	a, b := 33.203592585412444, 80.50314238503347
	k, speed, gap := 0.015, 4.140625, 6.132537066605437e-06
	f := func(t float64) float64 { return k * (gap - speed*(t-a) - 1e-3*(t-a)*(t-a)) }
	got := fallingRoot(f, a, b)
	if want := a + gap/speed; math.Abs(got-want) > 1e-12 {
		t.Fatalf("root found at %.17g, want %.17g", got, want)
	}
}

func TestNewtonRootIsRightToTheLastDigit(t *testing.T) {
	random := rand.New(rand.NewPCG(15, 16))
	for range 5000 {
		a := 100 * random.Float64()
		b := a + math.Pow(10, 4*random.Float64()-2)
		root := a + (b-a)*math.Pow(10, -6*random.Float64())
		// Falling with any curvature that leaves it without a turn between a and b.
		bend := (2*random.Float64() - 1) / (b - a)
		evaluations := 0
		f := func(x float64) (value, slope float64) {
			evaluations++
			return (root - x) * (1 + bend*(x-root)), -1 + 2*bend*(root-x)
		}
		fa, _ := f(a)
		fb, _ := f(b)
		if random.IntN(8) == 0 {
			fb = math.NaN()
		}
		if fb > 0 {
			continue
		}
		got := newtonRoot(f, a, b, fa, fb)
		if math.Abs(got-root) > 0x1p-51*root {
			t.Fatalf("root %.17g of [%v, %v] with bend %g found as %.17g", root, a, b, bend, got)
		}
		if evaluations > 60 {
			t.Fatalf("%d evaluations for the root %v of [%v, %v]", evaluations, root, a, b)
		}
	}
}
