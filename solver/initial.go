package solver

import "math"

// initialPieces is the density at time 0 on segment i of the layout: the background with the standing queues
// laid over it, in pieces that cover the segment.
func (s *Scenario) initialPieces(seg *segment, i int, queues []standingPiece) []ProfilePiece {
	var background []ProfilePiece
	if len(s.Initial.Profile) == 0 {
		free := seg.diagram.freeDensity(s.Initial.BackgroundFlow)
		background = []ProfilePiece{{seg.start, seg.end, free, free}}
	}
	for _, p := range s.Initial.Profile {
		if part, ok := p.clip(seg.start, seg.end); ok {
			background = append(background, part)
		}
	}
	background[0].Start, background[len(background)-1].End = seg.start, seg.end
	for _, q := range queues {
		if q.segment == i {
			background = overlay(background, q.piece)
		}
	}
	return background
}

// clip returns the part of the piece within [start, end], ok where there is one.
func (p ProfilePiece) clip(start, end float64) (ProfilePiece, bool) {
	a, b := max(p.Start, start), min(p.End, end)
	if b-a <= samePlace {
		return ProfilePiece{}, false
	}
	return ProfilePiece{a, b, p.at(a), p.at(b)}, true
}

func (p ProfilePiece) at(x float64) float64 {
	switch x {
	case p.Start:
		return p.StartDensity
	case p.End:
		return p.EndDensity
	}
	f := (x - p.Start) / (p.End - p.Start)
	return p.StartDensity*(1-f) + p.EndDensity*f
}

// overlay replaces what lies under the piece.
func overlay(background []ProfilePiece, q ProfilePiece) []ProfilePiece {
	var out []ProfilePiece
	for _, p := range background {
		if left, ok := p.clip(p.Start, min(p.End, q.Start)); ok {
			out = append(out, left)
		}
	}
	out = append(out, q)
	for _, p := range background {
		if right, ok := p.clip(max(p.Start, q.End), p.End); ok {
			out = append(out, right)
		}
	}
	out[0].Start, out[len(out)-1].End = background[0].Start, background[len(background)-1].End
	return out
}

// standingPiece is the part of a standing queue on one segment of the layout.
type standingPiece struct {
	segment int
	piece   ProfilePiece
}

// standing cuts the standing queues into parts by segment. What does not fit is left out: validation has
// refused it before.
func (s *Scenario) standing(l layout) []standingPiece {
	var out []standingPiece
	for _, q := range s.Initial.Queues {
		parts, _ := q.parts(l.nodes, l.segments)
		out = append(out, parts...)
	}
	return out
}

// parts lays the queue out from its node upstream; rest is what did not fit, in its own unit.
func (q StandingQueue) parts(nodes []node, segments []segment) (out []standingPiece, rest float64) {
	i := nodeNamed(nodes, q.Node)
	rest = q.Length + q.Vehicles
	for seg := i - 1; seg >= 0 && rest > 0; seg-- {
		s := &segments[seg]
		if !nodes[i].holdsBack(segments, s) {
			return out, rest
		}
		density := standingDensity(&nodes[i], segments, s)
		length := rest
		if q.Length == 0 {
			length = rest / density
		}
		length = min(length, s.end-s.start)
		if length > samePlace {
			out = append(out, standingPiece{seg, ProfilePiece{s.end - length, s.end, density, density}})
		}
		if q.Length == 0 {
			rest -= length * density
		} else {
			rest -= length
		}
		if length < s.end-s.start {
			return out, 0
		}
	}
	return out, rest
}

// holdsBack reports whether the node lets less pass at time 0 than segment s can carry: else no queue stands there.
func (n *node) holdsBack(segments []segment, s *segment) bool {
	return n.kind == SignalNode || n.heldFlow(segments) < s.diagram.capacity*(1-closeness)
}

// standingDensity is the density of a queue held by the node, on segment s (see [StandingQueue]).
func standingDensity(n *node, segments []segment, s *segment) float64 {
	if n.kind == SignalNode {
		return s.diagram.jam
	}
	return s.diagram.congestedDensity(n.heldFlow(segments))
}

// heldFlow is what the node lets pass at time 0 while a queue stands at it.
func (n *node) heldFlow(segments []segment) float64 {
	flow := n.restriction.at(0, math.Inf(1)).value
	for _, seg := range [2]int32{n.upSeg, n.downSeg} {
		if seg >= 0 {
			flow = min(flow, segments[seg].diagram.capacity)
		}
	}
	return flow
}

func nodeNamed(nodes []node, name string) int {
	for i := range nodes {
		if nodes[i].name == name {
			return i
		}
	}
	return -1
}
