package solver

import (
	"fmt"
	"math"
	"sort"
)

// samePlace [m]: places closer than this are one place. Callers add up lengths and convert units, so two
// spellings of a place differ by roundings; no detector, stop line or map is surveyed to a micrometre.
const samePlace = 1e-6

// control is a bottleneck or a signal.
type control struct {
	name   string
	kind   NodeKind
	place  float64
	signal *Signal  // where it is one
	limits Schedule // of a bottleneck
}

// controls lists bottlenecks and signals by place.
func (s *Scenario) controls() []control {
	list := make([]control, 0, len(s.Bottlenecks)+len(s.Signals))
	for _, b := range s.Bottlenecks {
		list = append(list, control{name: b.Name, kind: BottleneckNode, place: b.Place, limits: b.Capacity})
	}
	for i := range s.Signals {
		g := &s.Signals[i]
		list = append(list, control{name: g.Name, kind: SignalNode, place: g.Place, signal: g})
	}
	sort.SliceStable(list, func(i, j int) bool { return list[i].place < list[j].place })
	return list
}

// capacity of the control over [0, horizon].
func (c *control) capacity(horizon float64) Schedule {
	if c.signal != nil {
		return c.signal.schedule(horizon)
	}
	return c.limits
}

// segmentName of the segment with that index.
func (s *Scenario) segmentName(i int) string {
	if s.Segments[i].Name != "" {
		return s.Segments[i].Name
	}
	return fmt.Sprintf("segment %d", i+1)
}

// layout is the corridor as nodes and the segments between them, upstream first.
type layout struct {
	nodes    []node
	segments []segment
	roads    []int // the scenario's segment that each segment is a part of
}

func (s *Scenario) layout() layout {
	var (
		nodes    []node
		segments []segment
		roads    []int
	)
	list := s.controls()
	nodes = append(nodes, node{name: EntryName, kind: EntryNode, x: s.Origin, excess: s.Entry.Excess})
	x := s.Origin
	for i := range s.Segments {
		end := x + s.Segments[i].Length
		from := x
		for len(list) > 0 && list[0].place < end-samePlace {
			c := list[0]
			list = list[1:]
			if c.place <= from+samePlace {
				nodes[len(nodes)-1].take(&c, s.Horizon)
				continue
			}
			segments = append(segments, newSegment(s.segmentName(i), from, c.place, s.Segments[i].Relation.diagram))
			roads = append(roads, i)
			nodes = append(nodes, node{x: c.place})
			nodes[len(nodes)-1].take(&c, s.Horizon)
			from = c.place
		}
		segments = append(segments, newSegment(s.segmentName(i), from, end, s.Segments[i].Relation.diagram))
		roads = append(roads, i)
		nodes = append(nodes, node{name: s.joinName(i), kind: JoinNode, x: end})
		x = end
	}
	last := &nodes[len(nodes)-1]
	last.name, last.kind = ExitName, ExitNode
	last.restriction = s.Exit.Capacity
	for _, c := range list {
		last.take(&c, s.Horizon)
	}
	link(nodes, segments, s.Horizon)
	for i := range nodes {
		nodes[i].capacity = newTimetable(nodes[i].restriction, math.Inf(1), closeness*s.Horizon)
	}
	nodes[0].demand = newTimetable(s.Entry.Demand, 0, closeness*s.Horizon)
	return layout{nodes, segments, roads}
}

func (s *Scenario) joinName(i int) string {
	if i+1 >= len(s.Segments) {
		return ExitName
	}
	return "join " + s.segmentName(i) + "/" + s.segmentName(i+1)
}

// take puts a bottleneck or signal at the node.
func (n *node) take(c *control, horizon float64) {
	n.name, n.kind = c.name, c.kind
	n.restriction = least(n.restriction, c.capacity(horizon))
}

// link tells each node the segments at it, and what counts as equal there.
func link(nodes []node, segments []segment, horizon float64) {
	for i := range nodes {
		n := &nodes[i]
		n.upSeg, n.downSeg, n.up, n.down = int32(i-1), int32(i), -1, -1
		if i == len(segments) {
			n.downSeg = -1
		}
		n.alike = i > 0 && i < len(segments) && segments[i-1].diagram.same(segments[i].diagram)
		for _, seg := range segments[max(0, i-1):min(i+1, len(segments))] {
			n.flowTolerance = max(n.flowTolerance, seg.flowTolerance)
		}
		n.slack = closeness * horizon
		n.slopeTolerance = n.flowTolerance / horizon
	}
}

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
// they grow: by measurement, some three regions and four fronts for each switch of a node.
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
	k.regions = make([]region, 0, 3*n)
	k.bounds = make([]bound, 0, 3*n)
	k.fronts = make([]front, 0, 4*n)
	k.limits = make([]bounding, 0, 5*n)
	k.steps = make([]step, 0, 4*n)
	k.agenda = newAgenda(len(k.nodes), 3*n)
	if curved {
		k.paths = make([]path, 0, 2*n)
	}
}

// maxReserve bounds what is reserved before anything is known, to some 30 MB.
const maxReserve = 1 << 15

// start puts the initial regions of a segment, upstream first, and the waves between them. It returns the
// count at the segment's end: counts fall downstream by the vehicles in between.
func (k *kernel) start(seg int32, pieces []ProfilePiece, count float64) float64 {
	s := &k.segments[seg]
	first := int32(-1)
	last := int32(-1)
	for _, p := range pieces {
		for _, g := range s.initialRegions(p, seg) {
			g.region.n = count
			id := k.addRegion(g.region)
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
