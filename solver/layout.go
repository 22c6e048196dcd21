package solver

import (
	"math"
	"sort"
	"strconv"
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
	return "segment " + strconv.Itoa(i+1)
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
		from, name, diagram := x, s.segmentName(i), s.Segments[i].Relation.diagram
		for len(list) > 0 && list[0].place < end-samePlace {
			c := list[0]
			list = list[1:]
			if c.place <= from+samePlace {
				nodes[len(nodes)-1].take(&c, s.Horizon)
				continue
			}
			segments = append(segments, newSegment(name, from, c.place, diagram))
			roads = append(roads, i)
			nodes = append(nodes, node{x: c.place})
			nodes[len(nodes)-1].take(&c, s.Horizon)
			from = c.place
		}
		segments = append(segments, newSegment(name, from, end, diagram))
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
