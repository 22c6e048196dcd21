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
	// ByDemand means: all that arrives passes.
	ByDemand Governor = iota
	// ByCapacity means: the node itself holds traffic back.
	ByCapacity
	// BySupply means: what is downstream cannot take more.
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

	restriction Schedule  // what it lets pass
	capacity    timetable // the same
	demand      timetable // of the entry
	// Flows at the node, and their slopes, that differ by less count as equal: slopes where they would not add up
	// to a different flow by the horizon.
	flowTolerance, slopeTolerance float64
	slack                         float64 // difference of times that counts as none

	excess  Excess
	waiting bool // an entry queue stands
	alike   bool // the same relation on both sides
	due     float64
	governs Governor
	history []passage
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
	until := k.simultaneous()
	k.now = k.lastArrival(n, until)
	k.takeIn(n, until)
	k.settle(index)
	k.plan(index)
}

// takeIn ends the regions next to the node that are used up by until, all at the time that is now.
func (k *kernel) takeIn(n *node, until float64) {
	up, down := n.up, n.down
	for k.gone(n.up, upSide, until) {
		b := k.bounds[n.up]
		gone := n.up
		n.up = k.fronts[b.up].up
		k.boundDown(n.up, b.down)
		k.bury(gone, b.up)
	}
	for k.gone(n.down, downSide, until) {
		b := k.bounds[n.down]
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
}

// lastArrival is the time of the last of all that is due at the node by until: it all counts as happening then.
func (k *kernel) lastArrival(n *node, until float64) float64 {
	now := k.now
	for _, t := range [3]float64{n.due, n.capacity.next(), n.demand.next()} {
		if t <= until {
			now = max(now, t)
		}
	}
	for g := n.up; k.gone(g, upSide, until); g = k.fronts[k.bounds[g].up].up {
		now = max(now, k.bounds[g].due)
	}
	for g := n.down; k.gone(g, downSide, until); g = k.fronts[k.bounds[g].down].down {
		now = max(now, k.bounds[g].due)
	}
	return min(now, k.horizon)
}

// gone reports whether a region on that side of a node is used up by until, and there is another one behind it.
func (k *kernel) gone(g int32, s side, until float64) bool {
	if g < 0 || !(k.bounds[g].due <= until) {
		return false
	}
	if s == upSide {
		return k.bounds[g].up >= 0
	}
	return k.bounds[g].down >= 0
}

// unscheduled marks a region whose bounds have changed and whose event is not on the agenda yet.
var unscheduled = math.NaN()

func (k *kernel) bury(region, front int32) {
	b := &k.bounds[region]
	b.died, b.due = k.now, math.Inf(1)
	k.agenda.drop(region)
	k.endFront(front, AtNode, -1)
}

// settle determines the flow and puts the new states on the sides that do not carry it already.
func (k *kernel) settle(index int32) {
	n := &k.nodes[index]
	if n.waiting && k.backlog(n) <= closeness*(1+n.demand.total(k.now)) {
		n.waiting = false
	}
	offered, allowed, accepted := k.offered(n), rate{n.capacity.law(k.now), -1}, k.accepted(n)
	flow := offered
	n.governs = ByDemand
	if n.less(allowed, flow) {
		flow, n.governs = allowed, ByCapacity
	}
	if n.less(accepted, flow) {
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

// less compares two rates: by value, and where the values agree, or will within a time that counts as none, by what
// they are about to do.
func (n *node) less(a, b rate) bool {
	if math.IsInf(a.value, 1) || math.IsInf(b.value, 1) {
		return a.value < b.value
	}
	if d := a.value - b.value; math.Abs(d) > max(n.flowTolerance, n.slack*math.Abs(a.slope-b.slope)) {
		return d < 0
	}
	return a.slope < b.slope-n.slopeTolerance
}
