package reference

import "math"

// Law is a concave flow-density law as a chain of arcs q = q0 + c0 (k-k0) + d (k-k0)²/2, each written down
// from the numbers a user gives.
type Law struct {
	arcs []arc
}

type arc struct {
	k0, k1 float64 // density at both ends
	q0     float64 // flow at k0
	c0, c1 float64 // wave speed at both ends
}

// TriangularLaw is the law with free speed vf, backward wave speed -w and jam density kj.
func TriangularLaw(vf, w, kj float64) Law {
	return TrapezoidalLaw(vf, w, kj, kj*vf*w/(vf+w))
}

// TrapezoidalLaw is the triangular law with its top cut off at the given capacity.
func TrapezoidalLaw(vf, w, kj, capacity float64) Law {
	lo, hi := capacity/vf, kj-capacity/w
	return PiecewiseLinearLaw([]float64{0, lo, hi, kj}, []float64{0, capacity, capacity, 0})
}

// GreenshieldsLaw is q = vf k (1 - k/kj).
func GreenshieldsLaw(vf, kj float64) Law {
	return Law{arcs: []arc{{k1: kj, c0: vf, c1: -vf}}}
}

// QuadraticFreeLaw has speed falling linearly from vf to vc at density kc, then flow falling linearly to zero
// at kj.
func QuadraticFreeLaw(vf, vc, kc, kj float64) Law {
	w := vc * kc / (kj - kc)
	return Law{arcs: []arc{
		{k1: kc, c0: vf, c1: 2*vc - vf},
		{k0: kc, k1: kj, q0: vc * kc, c0: -w, c1: -w},
	}}
}

// PiecewiseLinearLaw joins the corners by straight lines. Corners that coincide count once.
func PiecewiseLinearLaw(density, flow []float64) Law {
	var law Law
	for i := 1; i < len(density); i++ {
		width := density[i] - density[i-1]
		if width <= 1e-12*density[len(density)-1] {
			continue
		}
		c := (flow[i] - flow[i-1]) / width
		law.arcs = append(law.arcs, arc{k0: density[i-1], k1: density[i], q0: flow[i-1], c0: c, c1: c})
	}
	return law
}

// Lanes is the law of n lanes: q_n(k) = n q(k/n).
func (l Law) Lanes(n float64) Law {
	out := Law{arcs: make([]arc, len(l.arcs))}
	for i, a := range l.arcs {
		out.arcs[i] = arc{k0: n * a.k0, k1: n * a.k1, q0: n * a.q0, c0: a.c0, c1: a.c1}
	}
	return out
}

// JamDensity is the density at which the flow has fallen to zero.
func (l Law) JamDensity() float64 { return l.arcs[len(l.arcs)-1].k1 }

// Flow is q(k) for k in [0, jam density].
func (l Law) Flow(k float64) float64 {
	i := 0
	for i < len(l.arcs)-1 && k > l.arcs[i].k1 {
		i++
	}
	return l.arcs[i].flow(k)
}

func (a arc) flow(k float64) float64 {
	bend := (a.c1 - a.c0) / (a.k1 - a.k0)
	return a.q0 + (k-a.k0)*(a.c0+bend*(k-a.k0)/2)
}

// Transform is the Legendre transform L(v) = max over k of q(k) - k v: the greatest rate at which vehicles
// can pass an observer who moves at speed v. On each arc the maximum lies where the wave speed is v, else at
// the end that is nearer to that.
func (l Law) Transform(v float64) float64 {
	best := math.Inf(-1)
	for _, a := range l.arcs {
		k := a.densityOfWave(v)
		best = math.Max(best, a.flow(k)-k*v)
	}
	return best
}

func (a arc) densityOfWave(v float64) float64 {
	switch {
	case v >= a.c0:
		return a.k0
	case v <= a.c1:
		return a.k1
	}
	return a.k0 + (v-a.c0)/(a.c1-a.c0)*(a.k1-a.k0)
}

// Kinks are the wave speeds between which the transform is one quadratic, falling. The first is the fastest
// forward wave, the last the fastest backward one.
func (l Law) Kinks() []float64 {
	var out []float64
	for _, a := range l.arcs {
		out = append(out, a.c0)
		if a.c1 != a.c0 {
			out = append(out, a.c1)
		}
	}
	return out
}
