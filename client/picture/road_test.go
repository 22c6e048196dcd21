package picture_test

import (
	"math"

	"github.com/roadswell/roadswell/client/picture"
)

// road is a slow, obvious stand-in for the solver that gives the pictures of these tests
// something real to show: least counts (Newell 1993) at the nodes of a road with one
// triangular relation, tabulated once a second.
type road struct {
	free, wave float64                           // free and backward wave speed, m/s, both positive
	jam        []float64                         // jam density of each link, veh/m
	node       []float64                         // places of the nodes, m; first is the entry, last the exit
	demand     func(t float64) float64           // veh/s at the entry
	capacity   func(node int, t float64) float64 // veh/s
	count      [][]float64                       // by node and second
}

// solve fills the counts up to the horizon (s).
func (r *road) solve(horizon int) {
	r.count = make([][]float64, len(r.node))
	for i := range r.node {
		r.count[i] = []float64{0}
	}
	arrived := 0.0
	for s := 1; s <= horizon; s++ {
		t := float64(s)
		arrived += r.demand(t - 0.5)
		for i := range r.node {
			r.count[i] = append(r.count[i], r.least(i, t, arrived))
		}
	}
}

// least is the count at node i: what has come, what has room, what may pass.
func (r *road) least(i int, t, arrived float64) float64 {
	n := r.count[i][len(r.count[i])-1] + r.capacity(i, t-0.5)
	if i == 0 {
		n = math.Min(n, arrived)
	} else {
		n = math.Min(n, r.at(i-1, t-r.length(i-1)/r.free))
	}
	if i < len(r.node)-1 {
		n = math.Min(n, r.at(i+1, t-r.length(i)/r.wave)+r.jam[i]*r.length(i))
	}
	return n
}

func (r *road) length(link int) float64 { return r.node[link+1] - r.node[link] }

// at interpolates the count of a node; the road is empty before the start.
func (r *road) at(node int, t float64) float64 {
	c := r.count[node]
	t = math.Min(math.Max(t, 0), float64(len(c)-1))
	s := min(int(t), max(len(c)-2, 0))
	if s+1 >= len(c) {
		return c[s]
	}
	return c[s] + (t-float64(s))*(c[s+1]-c[s])
}

func (r *road) link(x float64) int {
	i := 0
	for i < len(r.node)-2 && x >= r.node[i+1] {
		i++
	}
	return i
}

// branches are the counts at (x, t) by what comes from upstream and what downstream allows.
func (r *road) branches(x, t float64) (free, queued float64) {
	i := r.link(x)
	gap := r.node[i+1] - x
	free = r.at(i, t-(x-r.node[i])/r.free)
	return free, r.at(i+1, t-gap/r.wave) + r.jam[i]*gap
}

// density is in veh/km.
func (r *road) density(x, t float64) float64 {
	i := r.link(x)
	free, queued := r.branches(x, t)
	if free <= queued+1e-9 {
		s := t - (x-r.node[i])/r.free
		return 1000 * (r.at(i, s+0.5) - r.at(i, s-0.5)) / r.free
	}
	s := t - (r.node[i+1]-x)/r.wave
	return 1000 * (r.jam[i] - (r.at(i+1, s+0.5)-r.at(i+1, s-0.5))/r.wave)
}

// tail is the upstream end of the queue that reaches up to the end of a link, or false.
func (r *road) tail(link int, t float64) (float64, bool) {
	queued := func(x float64) bool { f, q := r.branches(x, t); return f > q+1e-6 }
	low, high := r.node[link], r.node[link+1]-0.01
	if !queued(high) {
		// It may stand off its node, drained from the front: look for any queued stretch.
		for x := high; ; x -= 10 {
			if x < low {
				return 0, false
			}
			if queued(x) {
				high = x
				break
			}
		}
	}
	if queued(low + 0.01) {
		return low, link == 0 // farther up it is the tail of the next link
	}
	for high-low > 0.05 {
		if mid := (low + high) / 2; queued(mid) {
			high = mid
		} else {
			low = mid
		}
	}
	return high, true
}

// tails are the stretches of time in which a link has a queue, every step seconds.
func (r *road) tails(link int, horizon, step float64) []picture.Path {
	var all []picture.Path
	var path picture.Path
	for t := step; t <= horizon; t += step {
		x, ok := r.tail(link, t)
		if ok {
			path = append(path, picture.Point{Time: t, Place: x})
			continue
		}
		if len(path) > 1 {
			all = append(all, path)
		}
		path = nil
	}
	if len(path) > 1 {
		all = append(all, path)
	}
	return all
}

// vehicle follows the n-th count from the entry, every step seconds.
func (r *road) vehicle(n, horizon, step float64) picture.Path {
	var path picture.Path
	for t := 0.0; t <= horizon; t += step {
		low, high := r.node[0], r.node[len(r.node)-1]
		if r.passed(low, t) < n {
			continue
		}
		if r.passed(high-0.01, t) >= n {
			return append(path, picture.Point{Time: t, Place: high})
		}
		for high-low > 0.05 {
			if mid := (low + high) / 2; r.passed(mid, t) >= n {
				low = mid
			} else {
				high = mid
			}
		}
		path = append(path, picture.Point{Time: t, Place: low})
	}
	return path
}

func (r *road) passed(x, t float64) float64 { return math.Min(r.branches(x, t)) }

// waveFrom follows the backward wave that leaves a node at t until it meets the tail.
func (r *road) waveFrom(node int, t float64) picture.Path {
	path := picture.Path{{Time: t, Place: r.node[node]}}
	for x := r.node[node]; x > r.node[node-1]; x -= 5 {
		at := t + (r.node[node]-x)/r.wave
		if f, q := r.branches(x-1, at+1); f <= q {
			break
		}
		path = append(path, picture.Point{Time: at, Place: x})
	}
	return picture.Path{path[0], path[len(path)-1]}
}
