package solver

import "math"

// NodeKind is what stands at a node.
type NodeKind int

const (
	// EntryNode is the upstream end of the corridor.
	EntryNode NodeKind = iota
	// JoinNode is where two segments meet and nothing else restricts the flow.
	JoinNode
	// BottleneckNode is a [Bottleneck], wherever it is.
	BottleneckNode
	// SignalNode is a [Signal], wherever it is.
	SignalNode
	// ExitNode is the downstream end of the corridor.
	ExitNode
)

// String returns the kind in lower case.
func (k NodeKind) String() string {
	return [...]string{"entry", "join", "bottleneck", "signal", "exit"}[k]
}

// Governor says what determines the flow through a node.
type Governor int8

const (
	// ByDemand: all that arrives passes.
	ByDemand Governor = iota
	// ByCapacity: the node itself holds traffic back.
	ByCapacity
	// BySupply: what is downstream cannot take more.
	BySupply
)

// String returns the governor in lower case.
func (g Governor) String() string { return [...]string{"demand", "capacity", "supply"}[g] }

// node is a fixed place at which the flow is the least of what is offered, what it lets pass and what is
// accepted: F = min(demand upstream, C(t), supply downstream) (Daganzo 1995; Lebacque 1996). At the entry the
// demand schedule and the entry queue offer, at the exit everything is accepted.
type node struct {
	name     string
	kind     NodeKind
	x        float64
	upSeg    int32 // -1 at the entry
	downSeg  int32 // -1 at the exit
	up, down int32 // live regions on its two sides, -1 where there is none
	capacity Schedule
	demand   Schedule // of the entry
	excess   Excess
	waiting  bool // an entry queue stands
	alike    bool // the same relation on both sides
	stamp    uint32
	due      float64
	governs  Governor
	history  []passage
}

// passage is what stands on the two sides of a node, and what governs it, from a time on.
type passage struct {
	from     float64
	up, down int32
	governs  Governor
}

func (n *node) note(t float64) {
	p := passage{from: t, up: n.up, down: n.down, governs: n.governs}
	if last := len(n.history) - 1; last >= 0 && n.history[last].from == t {
		n.history[last] = p
		return
	}
	n.history = append(n.history, p)
}

// rate is a flow at a node to first order, and the profile that brings it where there is one.
type rate struct {
	law
	profile int32 // region whose profile it follows, -1 for a uniform state or a schedule
}

// visit looks at a node again: it takes in all that has reached it by now, settles the flow through it and
// puts the waves that this sends out on its two sides.
func (k *kernel) visit(index int32) {
	n := &k.nodes[index]
	k.now = k.takeIn(n)
	k.settle(index)
	k.plan(index)
}

// takeIn ends the regions next to the node that are used up, and returns the time of the last of them.
func (k *kernel) takeIn(n *node) float64 {
	until := k.simultaneous()
	now := k.now
	for _, t := range [3]float64{n.due, n.capacity.next(now), n.demand.next(now)} {
		if t <= until {
			now = math.Max(now, t)
		}
	}
	up, down := n.up, n.down
	for n.up >= 0 && k.bounds[n.up].due <= until && k.bounds[n.up].up >= 0 {
		b := k.bounds[n.up]
		now = math.Max(now, b.due)
		gone := n.up
		n.up = k.fronts[b.up].up
		k.boundDown(n.up, b.down)
		k.bury(gone, b.up)
	}
	for n.down >= 0 && k.bounds[n.down].due <= until && k.bounds[n.down].down >= 0 {
		b := k.bounds[n.down]
		now = math.Max(now, b.due)
		gone := n.down
		n.down = k.fronts[b.down].down
		k.bounds[n.down].up = b.up
		k.bury(gone, b.down)
	}
	if n.up != up {
		k.bounds[n.up].due = unscheduled
	}
	if n.down != down {
		k.bounds[n.down].due = unscheduled
	}
	return now
}

// unscheduled marks a region whose bounds have changed and whose event is not on the agenda yet.
var unscheduled = math.NaN()

func (k *kernel) bury(region, front int32) {
	b := &k.bounds[region]
	b.died, b.due = k.now, math.Inf(1)
	b.stamp++
	k.endFront(front, AtNode, -1)
}

// settle determines the flow and puts the new states on the sides that do not carry it already.
func (k *kernel) settle(index int32) {
	n := &k.nodes[index]
	if n.waiting && k.backlog(n) <= closeness*(1+n.demand.total(k.now)) {
		n.waiting = false
	}
	offered, allowed, accepted := k.offered(n), rate{n.allowed(k.now), -1}, k.accepted(n)
	flow := offered
	n.governs = ByDemand
	if k.less(n, allowed, flow) {
		flow, n.governs = allowed, ByCapacity
	}
	if k.less(n, accepted, flow) {
		flow, n.governs = accepted, BySupply
	}
	if n.upSeg < 0 && n.excess == Waits && n.governs != ByDemand {
		n.waiting = true
	}
	count := k.countAt(n)
	if n.downSeg >= 0 {
		k.send(index, downSide, flow, count)
	}
	if n.upSeg >= 0 {
		k.send(index, upSide, flow, count)
	}
	n.note(k.now)
}

// countAt is the number of vehicles that have passed the node.
func (k *kernel) countAt(n *node) float64 {
	if n.up >= 0 {
		return k.regions[n.up].count(n.x, k.now)
	}
	return k.regions[n.down].count(n.x, k.now)
}

// less compares two rates: by value, and where the values agree by what they are about to do.
func (k *kernel) less(n *node, a, b rate) bool {
	flowTolerance, slopeTolerance := k.tolerances(n)
	if math.IsInf(a.value, 1) || math.IsInf(b.value, 1) {
		return a.value < b.value
	}
	if d := a.value - b.value; math.Abs(d) > flowTolerance {
		return d < 0
	}
	return a.slope < b.slope-slopeTolerance
}

// tolerances below which flows at a node, and their slopes, count as equal: slopes where they would not add
// up to a different flow by the horizon.
func (k *kernel) tolerances(n *node) (flow, slope float64) {
	if n.upSeg >= 0 {
		flow = k.segments[n.upSeg].flowTolerance
	}
	if n.downSeg >= 0 {
		flow = math.Max(flow, k.segments[n.downSeg].flowTolerance)
	}
	return flow, flow / k.horizon
}

func (n *node) allowed(t float64) law {
	if n.capacity == nil {
		return law{value: math.Inf(1)}
	}
	return n.capacity.at(t, math.Inf(1))
}

// offered is what wishes to pass.
func (k *kernel) offered(n *node) rate {
	if n.upSeg >= 0 {
		return k.trace(n.up, n.x, upSide)
	}
	if n.waiting {
		return rate{law{value: math.Inf(1)}, -1}
	}
	return rate{n.demand.at(k.now, 0), -1}
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
