package solver

import "math"

// plan puts on the agenda when the node has to be looked at again by itself: when a schedule changes, when the
// flow that governs stops being the least, when a changing flow reaches a corner of a relation, or when the
// entry queue is gone. Waves that arrive are events of their regions.
func (k *kernel) plan(index int32) {
	n := &k.nodes[index]
	n.due = min(k.changeOfGovernor(n), k.cornerReached(n))
	if n.waiting {
		n.due = min(n.due, k.queueGone(n))
	}
	// Waves sent out by one place less than this apart could not be told from each other.
	n.due = max(n.due, k.simultaneous())
	n.due = min(n.due, min(n.capacity.next(), n.demand.next()))
	if n.due <= k.horizon {
		k.agenda.set(^index, n.due)
	} else {
		k.agenda.drop(^index)
	}
}

// changeOfGovernor is when one of the other two flows becomes less than the governing one.
func (k *kernel) changeOfGovernor(n *node) float64 {
	if k.steady(n) {
		return math.Inf(1)
	}
	all := [3]rate{ByDemand: k.offered(n), ByCapacity: {n.capacity.law(k.now), -1}, BySupply: k.accepted(n)}
	governing := all[n.governs]
	t := math.Inf(1)
	for g, other := range all {
		if Governor(g) != n.governs && !math.IsInf(other.value, 1) {
			t = min(t, k.overtakes(n, governing, other))
		}
	}
	return t
}

// steady reports whether nothing at the node changes by itself before a schedule does: the common case.
func (k *kernel) steady(n *node) bool {
	return n.capacity.law(k.now).slope == 0 && n.demand.law(k.now).slope == 0 &&
		(n.up < 0 || k.regions[n.up].uniform()) && (n.down < 0 || k.regions[n.down].uniform())
}

// overtakes is when the governing flow rises above the other, which does not follow a curved profile. Along a
// fixed place a curved profile brings q - c² (2 s T + d T²)/(2 (s + d T)²), which makes a cubic of the difference.
func (k *kernel) overtakes(n *node, governing, other rate) float64 {
	if g := governing.profile; g >= 0 && k.regions[g].d != 0 {
		l := k.regions[g].from(n.x, k.now)
		a, b := other.value-governing.value, other.slope
		c := cubic{
			2 * a * l.s * l.s,
			4*a*l.s*l.d + 2*b*l.s*l.s + 2*l.c*l.c*l.s,
			2*a*l.d*l.d + 4*b*l.s*l.d + l.c*l.c*l.d,
			2 * b * l.d * l.d,
		}
		return later(k.now, k.now+c.descent(0, k.horizon-k.now))
	}
	closing := governing.slope - other.slope
	if closing <= n.slopeTolerance {
		return math.Inf(1)
	}
	return later(k.now, k.now+(other.value-governing.value)/closing)
}

// later drops what is not in the future: it has been dealt with.
func later(now, t float64) float64 {
	if t > now {
		return t
	}
	return math.Inf(1)
}

// cornerReached is when a profile that the node sends out on a straight piece reaches the end of that piece.
func (k *kernel) cornerReached(n *node) float64 {
	t := math.Inf(1)
	for _, g := range [2]int32{n.up, n.down} {
		if g < 0 || k.regions[g].uniform() || k.regions[g].d != 0 {
			continue
		}
		r := &k.regions[g]
		end := r.upLabel
		if g == n.up {
			end = r.downLabel
		}
		t = min(t, later(k.now+closeness*k.horizon, r.arrival(n.x, end)))
	}
	return t
}

// queueGone is when the entry queue will have gone in, if the region at the entry stays.
func (k *kernel) queueGone(n *node) float64 {
	r := &k.regions[n.down]
	demand := n.demand.law(k.now)
	c := cubic{k.backlog(n), demand.value, 0.5 * demand.slope, 0}
	label := r.edgeLabel(n.x, k.now, r.upLabel)
	speed := r.waveSpeed(label)
	c[1] -= k.segments[r.seg].diagram.pieces[r.piece].flow(label)
	if s := r.spread(k.now); !r.uniform() && s != 0 && speed != 0 {
		// The count at the entry falls short of linear by (c T)²/(2 s): the backlog exceeds it by that.
		if r.d == 0 {
			c[2] += 0.5 * speed * speed / s
		} else {
			c = combineOne(&c, &rational{u1: speed, s0: s, s1: r.d}, 1)
		}
	}
	return later(k.now, k.now+c.descent(0, k.horizon-k.now))
}
