package solver

import "math"

// offered is what wishes to pass.
func (k *kernel) offered(n *node) rate {
	if n.upSeg >= 0 {
		return k.trace(n.up, n.x, upSide)
	}
	if n.waiting {
		return rate{law{value: math.Inf(1)}, -1}
	}
	return rate{n.demand.law(k.now), -1}
}

// accepted is what can be taken in downstream.
func (k *kernel) accepted(n *node) rate {
	if n.downSeg < 0 {
		return rate{law{value: math.Inf(1)}, -1}
	}
	return k.trace(n.down, n.x, downSide)
}

// backlog is the number of vehicles in the entry queue.
func (k *kernel) backlog(n *node) float64 {
	return n.demand.total(k.now) - k.regions[n.down].count(n.x, k.now)
}

// trace is the demand of the region upstream of a place, or the supply of the region downstream of it.
func (k *kernel) trace(g int32, x float64, s side) rate {
	r := &k.regions[g]
	seg := &k.segments[r.seg]
	d := seg.diagram
	var label float64
	var saturated bool
	if s == upSide {
		label = r.edgeLabel(x, k.now, r.downLabel)
		saturated = label >= d.criticalLo-seg.densityTolerance
	} else {
		label = r.edgeLabel(x, k.now, r.upLabel)
		saturated = label <= d.criticalHi+seg.densityTolerance
	}
	if saturated && !k.leavesCapacity(g, label, s) {
		return rate{law{value: d.capacity}, -1}
	}
	return k.flowOf(g, label)
}

// leavesCapacity reports whether a profile whose density at a node is critical right now brings less and less
// from now on.
func (k *kernel) leavesCapacity(g int32, label float64, s side) bool {
	r := &k.regions[g]
	if r.uniform() || r.spread(k.now) == 0 {
		return false
	}
	seg := &k.segments[r.seg]
	coming := r.waveSpeed(label)
	critical := seg.diagram.criticalLo
	if s == downSide {
		coming, critical = -coming, seg.diagram.criticalHi
	}
	return coming > seg.speedTolerance && math.Abs(label-critical) <= seg.densityTolerance && k.flowOf(g, label).slope < 0
}

// flowOf is the flow past a fixed place at which the region has density label.
func (k *kernel) flowOf(g int32, label float64) rate {
	r := &k.regions[g]
	q := k.segments[r.seg].diagram.pieces[r.piece].flow(label)
	if r.uniform() {
		return rate{law{value: q}, -1}
	}
	c := r.waveSpeed(label)
	return rate{law{q, -c * c * r.gradient(k.now)}, g}
}
