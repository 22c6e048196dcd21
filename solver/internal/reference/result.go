package reference

import "math"

// Result is what a [Godunov] run computed.
//
// In which sense it converges at first order in the cell width dx. The scheme is monotone, so the count N
// (the primitive of the density) obeys a monotone scheme too. In the mean over the road (L1) the count's error
// is O(dx): a jump that runs along a straight part of the relation is smeared over O(sqrt(dx)) by a height of
// O(sqrt(dx)) vehicles, the product being O(dx); elsewhere the error is smaller (Nessyahu & Tadmor 1992, SIAM
// J. Numer. Anal. 29, 1505-1519). The density itself has an L1 error of O(dx), up to a logarithm, where the
// relation bends, but only O(sqrt(dx)) across such a smeared jump, and no monotone scheme does better (Tang &
// Teng 1995, Math. Comp. 64, 581-589). So both distances are offered: CountDistance is the one to expect first
// order of.
//
// The logarithm comes from centred fans: a fan of age t has the gradient 1/t, the scheme's diffusion is of the
// size of dx times wave speed, and the sum over time of their product is dx ln(t/dt). See [FanOrder].
type Result struct {
	// Edges of the cells, one more than there are cells [m].
	Edges []float64
	// Gates are the places of the nodes, the two ends and the joins of segments, from upstream [m].
	Gates []float64
	// Snapshots at the times asked for and at the horizon.
	Snapshots []Snapshot
	// Steps that were taken.
	Steps int
}

// Snapshot is the corridor at one time.
type Snapshot struct {
	Time float64
	// Density of each cell, mean over the cell [veh/m].
	Density []float64
	// Passed is how many vehicles have passed each gate since time 0.
	Passed []float64
	// Waiting vehicles outside the entry, and those turned away since time 0.
	Waiting, TurnedAway float64
}

func newResult(m *mesh) *Result {
	r := &Result{}
	for i := range m.stretches {
		st := &m.stretches[i]
		for c := st.first; c < st.next; c++ {
			r.Edges = append(r.Edges, st.edge(c))
		}
	}
	for _, g := range m.gates {
		r.Gates = append(r.Gates, g.place)
	}
	r.Edges = append(r.Edges, r.Gates[len(r.Gates)-1])
	return r
}

// Last is the snapshot at the horizon.
func (r *Result) Last() Snapshot { return r.Snapshots[len(r.Snapshots)-1] }

// Counts is the count N at every edge of the snapshot: 0 at the entry at time 0, falling downstream.
func (r *Result) Counts(s Snapshot) []float64 {
	out := make([]float64, len(r.Edges))
	out[0] = s.Passed[0]
	for c, k := range s.Density {
		out[c+1] = out[c] - k*(r.Edges[c+1]-r.Edges[c])
	}
	return out
}

// CountDistance is the integral over the road of |N - exact| [veh m].
func (r *Result) CountDistance(s Snapshot, exact func(x float64) float64) float64 {
	sum, before := 0.0, 0.0
	for i, n := range r.Counts(s) {
		now := math.Abs(n - exact(r.Edges[i]))
		if i > 0 {
			sum += (before + now) / 2 * (r.Edges[i] - r.Edges[i-1])
		}
		before = now
	}
	return sum
}

// DensityDistance is the integral over the road of the difference between the cells' densities and the exact
// means over the cells, which are differences of the exact count [veh].
func (r *Result) DensityDistance(s Snapshot, exact func(x float64) float64) float64 {
	sum, before := 0.0, exact(r.Edges[0])
	for c, k := range s.Density {
		after := exact(r.Edges[c+1])
		sum += math.Abs(k*(r.Edges[c+1]-r.Edges[c]) - (before - after))
		before = after
	}
	return sum
}

// PointDistance is the integral over the road of |density - exact|, the exact density being asked for in the
// middle of points equal parts of each cell [veh].
func (r *Result) PointDistance(s Snapshot, points int, exact func(x float64) float64) float64 {
	sum := 0.0
	for c, k := range s.Density {
		part := (r.Edges[c+1] - r.Edges[c]) / float64(points)
		for i := range points {
			sum += part * math.Abs(k-exact(r.Edges[c]+(float64(i)+0.5)*part))
		}
	}
	return sum
}

// Vehicles on the road in the snapshot.
func (r *Result) Vehicles(s Snapshot) float64 {
	n := r.Counts(s)
	return n[0] - n[len(n)-1]
}

// Order is the observed order of convergence: the slope of log(error) against log(cell width), by least
// squares, for errors found with cells halved from one to the next.
func Order(errors []float64) float64 {
	n := float64(len(errors))
	var sx, sy, sxx, sxy float64
	for i, e := range errors {
		x, y := -float64(i), math.Log2(e)
		sx, sy, sxx, sxy = sx+x, sy+y, sxx+x*x, sxy+x*y
	}
	return (n*sxy - sx*sy) / (n*sxx - sx*sx)
}

// FanOrder is the observed order of errors that are expected to behave as dx ln(R/dx), R the distance that
// waves have run: the order left after the logarithm is divided out. cells is R/dx of the first error.
func FanOrder(errors []float64, cells float64) float64 {
	out := make([]float64, len(errors))
	for i, e := range errors {
		out[i] = e / math.Log(cells*math.Exp2(float64(i)))
	}
	return Order(out)
}
