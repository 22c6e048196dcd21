package solver

import "math"

// newKernel returns a kernel that holds the traffic at time 0, with all waves that start then.
func newKernel(s *Scenario, l layout) *kernel {
	k := &kernel{plane: plane{horizon: s.Horizon, nodes: l.nodes, segments: l.segments}}
	k.reserve()
	queues := s.standing(l)
	count := 0.0
	for i := range k.segments {
		count = k.start(int32(i), s.initialPieces(&k.segments[i], i, queues), count)
	}
	for i := len(k.nodes) - 1; i >= 0; i-- {
		k.settle(int32(i))
		k.plan(int32(i))
	}
	return k
}

// reserve makes room for what a scenario of this size usually takes, so that the lists need not be copied as
// they grow: by measurement, three regions and four fronts for each switch of a node, and a third less where the
// relation is curved, as fans then take the place of contacts.
func (k *kernel) reserve() {
	n := 16
	curved := false
	for i := range k.nodes {
		switches := len(k.nodes[i].restriction)
		n += 2 + switches
		k.nodes[i].history = make([]passage, 0, 4+2*min(switches, maxReserve))
	}
	for i := range k.segments {
		curved = curved || k.segments[i].diagram.curved()
	}
	n = min(n, maxReserve)
	regions, fronts := 3*n, 4*n
	if curved {
		regions, fronts = 2*n, 3*n
		k.paths = make([]path, 0, 2*n)
	}
	k.regions = make([]region, 0, regions)
	k.bounds = make([]bound, 0, regions)
	k.fronts = make([]front, 0, fronts)
	k.limits = make([]bounding, 0, regions+fronts)
	k.steps = make([]step, 0, fronts)
	k.agenda = newAgenda(len(k.nodes), regions)
}

// maxReserve bounds what is reserved before anything is known, to some 30 MB.
const maxReserve = 1 << 10

// start puts the initial regions of a segment, upstream first, and the waves between them. It returns the
// count at the segment's end: counts fall downstream by the vehicles in between.
func (k *kernel) start(seg int32, pieces []ProfilePiece, count float64) float64 {
	s := &k.segments[seg]
	first := int32(-1)
	last := int32(-1)
	for _, p := range pieces {
		for _, g := range s.initialRegions(p, seg) {
			g.region.n = count
			id := k.addRegion(&g.region)
			if last < 0 {
				first = id
				k.bounds[id].up = ^seg
			} else {
				born := int32(len(k.fronts))
				if k.connect(last, id, k.regions[last].downLabel, g.region.upLabel, g.region.x0, 0, count) {
					k.record(last, id, born)
				} else {
					k.withdraw() // one uniform state
					id = last
				}
			}
			last = id
			count -= g.vehicles
		}
	}
	k.boundDown(last, ^(seg + 1))
	k.nodes[seg].down = first
	k.nodes[seg+1].up = last
	if last == first {
		k.record(^seg, ^(seg + 1), int32(len(k.fronts)))
	}
	for g := first; ; {
		k.schedule(g)
		down := k.bounds[g].down
		if down < 0 {
			return count
		}
		g = k.fronts[down].down
	}
}

// initialRegion is a region at time 0 with the vehicles in it.
type initialRegion struct {
	region   region
	vehicles float64
}

// initialRegions cuts a profile piece at the corners of the relation. All parts share the spread of the
// whole, so that a profile across the critical density still meets in one point.
func (s *segment) initialRegions(p ProfilePiece, seg int32) []initialRegion {
	length := p.End - p.Start
	ka, kb := p.StartDensity, p.EndDensity
	if math.Abs(kb-ka) <= s.densityTolerance {
		mean := 0.5 * (ka + kb)
		return []initialRegion{{uniformRegion(s.diagram, s.snap(mean), p.Start, 0, 0, seg), mean * length}}
	}
	spread := length / (kb - ka)
	var out []initialRegion
	for _, c := range s.cuts(ka, kb) {
		piece := &s.diagram.pieces[c.piece]
		x := p.Start + (c.from-ka)*spread
		g := region{x0: x, k: c.from, c: piece.waveSpeed(c.from), s: spread, d: piece.d,
			upLabel: c.from, downLabel: c.to, seg: seg, piece: int32(c.piece)}
		g.r = piece.flow(c.from) - c.from*g.c
		out = append(out, initialRegion{g, 0.5 * (c.from + c.to) * (c.to - c.from) * spread})
	}
	return out
}

// snap returns the corner of the relation that k is at, give or take a rounding, else k.
func (s *segment) snap(k float64) float64 {
	for i := range s.diagram.pieces {
		if hi := s.diagram.pieces[i].hi; math.Abs(k-hi) <= s.densityTolerance {
			return hi
		}
	}
	return k
}

// cut is the part of a profile on one piece of the relation.
type cut struct {
	piece    int
	from, to float64
}

// cuts lists the parts of a profile from density a to b.
func (s *segment) cuts(a, b float64) []cut {
	a, b = s.snap(a), s.snap(b)
	d := s.diagram
	var out []cut
	if a < b {
		for i := d.pieceAbove(a); i <= d.pieceBelow(b); i++ {
			out = append(out, cut{i, max(a, d.pieces[i].lo), min(b, d.pieces[i].hi)})
		}
		return out
	}
	for i := d.pieceBelow(a); i >= d.pieceAbove(b); i-- {
		out = append(out, cut{i, min(a, d.pieces[i].hi), max(b, d.pieces[i].lo)})
	}
	return out
}
