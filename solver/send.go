package solver

import "math"

// send makes one side of a node carry the flow: where the region there does not do so already, a new region
// is put at the node and connected to it.
func (k *kernel) send(index int32, s side, flow rate, count float64) {
	n := &k.nodes[index]
	old := n.up
	if s == downSide {
		old = n.down
	}
	if k.carries(n, old, s, flow) {
		if math.IsNaN(k.bounds[old].due) {
			k.schedule(old)
		}
		return
	}
	fresh, ok := k.emission(n, old, s, flow, count)
	if !ok {
		return
	}
	k.put(index, s, &fresh, old, count)
}

// put places a fresh region between the node and the region old that was next to it.
func (k *kernel) put(index int32, s side, fresh *region, old int32, count float64) {
	n := &k.nodes[index]
	born := int32(len(k.fronts))
	g := k.addRegion(fresh)
	up, down, direction := old, g, -1.0
	if s == downSide {
		up, down, direction = g, old, 1
	}
	ku, kd := k.labelAt(n, up, upSide), k.labelAt(n, down, downSide)
	if !k.connect(up, down, ku, kd, n.x, k.now, count) {
		// The flows differed by a rounding, the densities do not: old carries the flow after all.
		k.withdraw()
		return
	}
	k.keepAway(born, direction)
	if s == downSide {
		k.bounds[g].up, n.down = ^index, g
		k.record(^index, old, born)
	} else {
		k.boundDown(g, ^index)
		n.up = g
		k.record(old, ^index, born)
	}
	k.reschedule(up)
}

// keepAway sees to it that no straight front sent out by a node returns to it at once because its speed, zero
// in truth, was rounded to the wrong side.
func (k *kernel) keepAway(born int32, direction float64) {
	for i := range k.fronts[born:] {
		if f := &k.fronts[born:][i]; f.speed*direction < 0 {
			f.speed = 0
		}
	}
}

// carries reports whether the flow past the node on that side of it is already the wanted one, now and on.
func (k *kernel) carries(n *node, g int32, s side, flow rate) bool {
	if flow.profile == g && g >= 0 {
		return true
	}
	r := &k.regions[g]
	label := k.labelAt(n, g, s)
	if flow.slope != 0 && k.atEnd(r, label, s) {
		return false
	}
	if flow.profile >= 0 && n.alike {
		return k.continues(&k.regions[flow.profile], r, n.x)
	}
	own := k.flowOf(g, label)
	if r.spread(k.now) == 0 || r.waveSpeed(label) == 0 {
		own.slope = 0 // the characteristic at the node stays there
	}
	return math.Abs(own.value-flow.value) <= n.flowTolerance && math.Abs(own.slope-flow.slope) <= n.slopeTolerance
}

// atEnd reports whether a profile sent out by a node has reached the last density of its piece there.
func (k *kernel) atEnd(r *region, label float64, s side) bool {
	end := r.upLabel
	if s == upSide {
		end = r.downLabel
	}
	return !r.uniform() && math.Abs(label-end) <= k.segments[r.seg].densityTolerance
}

func (k *kernel) labelAt(n *node, g int32, s side) float64 {
	r := &k.regions[g]
	if s == upSide {
		return r.edgeLabel(n.x, k.now, r.downLabel)
	}
	return r.edgeLabel(n.x, k.now, r.upLabel)
}

// continues reports whether region b is the same profile as a, at x.
func (k *kernel) continues(a, b *region, x float64) bool {
	seg := &k.segments[b.seg]
	length := seg.end - seg.start
	return math.Abs(a.density(x, k.now)-b.density(x, k.now)) <= seg.densityTolerance &&
		math.Abs(a.gradient(k.now)-b.gradient(k.now))*length <= seg.densityTolerance
}

// emission is the region that a node puts on one of its sides to carry the flow; ok is false where there is
// no closed form for it, which is then noted in k.refused.
func (k *kernel) emission(n *node, old int32, s side, flow rate, count float64) (region, bool) {
	segIndex := n.downSeg
	if s == upSide {
		segIndex = n.upSeg
	}
	seg := &k.segments[segIndex]
	if flow.slope != 0 || flow.profile >= 0 {
		return k.profileEmission(n, segIndex, s, flow, count)
	}
	label := seg.diagram.freeDensity(flow.value)
	if s == upSide {
		label = seg.diagram.congestedDensity(flow.value)
	}
	if fan, ok := k.standingFan(n, old, s, label, count); ok {
		return fan, true
	}
	return uniformRegion(seg.diagram, label, n.x, k.now, count, segIndex), true
}

// standingFan is the fan between the critical density and the old state where the critical characteristic
// stands at the node: with a curved piece there, no uniform state comes between.
func (k *kernel) standingFan(n *node, old int32, s side, label, count float64) (region, bool) {
	r := &k.regions[old]
	d := k.segments[r.seg].diagram
	oldLabel := k.labelAt(n, old, s)
	var w wave
	if s == upSide {
		w = wave{piece: d.congested, lo: d.criticalHi, hi: min(oldLabel, d.pieces[d.congested].hi)}
		if label != d.criticalHi {
			return region{}, false
		}
	} else {
		w.piece = d.pieceBelow(d.criticalLo)
		w.lo, w.hi = max(oldLabel, d.pieces[w.piece].lo), d.criticalLo
		if label != d.criticalLo {
			return region{}, false
		}
	}
	p := &d.pieces[w.piece]
	critical := p.waveSpeed(label)
	if p.d == 0 || w.hi <= w.lo || math.Abs(critical) > k.segments[r.seg].speedTolerance {
		return region{}, false
	}
	fan := fanRegion(p, int32(w.piece), w, n.x, k.now, count, r.seg)
	fan.k, fan.c, fan.r = label, 0, d.capacity
	return fan, true
}

// profileEmission carries a flow that changes in time: the same profile on a road alike, else a profile on a
// straight piece of the relation.
func (k *kernel) profileEmission(n *node, segIndex int32, s side, flow rate, count float64) (region, bool) {
	if flow.profile >= 0 && n.alike {
		same := k.regions[flow.profile]
		same.seg = segIndex
		label := same.density(n.x, k.now)
		if s == downSide {
			same.downLabel = label
		} else {
			same.upLabel = label
		}
		return same, true
	}
	if flow.profile >= 0 && k.regions[flow.profile].d != 0 {
		return k.refuse(n, "a fan or profile on a curved relation crosses into a different relation")
	}
	d := k.segments[segIndex].diagram
	label, piece := d.slopingState(flow.law, s, k.segments[segIndex].densityTolerance)
	p := &d.pieces[piece]
	if p.d != 0 {
		return k.refuse(n, "a flow that changes in time enters a curved relation")
	}
	return rampRegion(p, int32(piece), label, flow.slope, s, n.x, k.now, count, segIndex), true
}

func (k *kernel) refuse(n *node, what string) (region, bool) {
	k.refused = &ClosedFormError{Node: n.name, Time: k.now, What: what}
	return region{}, false
}

// slopingState is the density that carries the flow on that side of a node, and the piece on which it will be.
func (d *diagram) slopingState(flow law, s side, tolerance float64) (label float64, piece int) {
	label = d.freeDensity(flow.value)
	rising := flow.slope > 0
	if s == upSide {
		label = d.congestedDensity(flow.value)
		rising = flow.slope < 0
	}
	if rising {
		piece = d.pieceAbove(label + tolerance)
	} else {
		piece = d.pieceBelow(label - tolerance)
	}
	return label, piece
}

// rampRegion is a profile on a straight piece, sent out by a flow that changes with slope [veh/s²].
func rampRegion(p *piece, index int32, label, slope float64, s side, x, t, n float64, seg int32) region {
	change := slope / p.cr // of density, in time at a fixed place
	g := region{
		x0: x, t0: t, k: label, c: p.cr, s: -p.cr / change, r: p.flow(label) - label*p.cr, n: n,
		upLabel: label, downLabel: label, seg: seg, piece: index,
	}
	later := p.lo
	if change > 0 {
		later = p.hi
	}
	if s == downSide {
		g.upLabel = later
	} else {
		g.downLabel = later
	}
	return g
}
