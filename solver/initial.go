package solver

import (
	"fmt"
	"math"
)

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
	a, b := math.Max(p.Start, start), math.Min(p.End, end)
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
		if left, ok := p.clip(p.Start, math.Min(p.End, q.Start)); ok {
			out = append(out, left)
		}
	}
	out = append(out, q)
	for _, p := range background {
		if right, ok := p.clip(math.Max(p.Start, q.End), p.End); ok {
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
		density := standingDensity(&nodes[i], segments, s)
		length := rest
		if q.Length == 0 {
			length = rest / density
		}
		length = math.Min(length, s.end-s.start)
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

// standingDensity is the density of a queue held by the node, on segment s (see [StandingQueue]).
func standingDensity(n *node, segments []segment, s *segment) float64 {
	if n.kind == SignalNode {
		return s.diagram.jam
	}
	return s.diagram.congestedDensity(n.heldFlow(segments))
}

// heldFlow is what the node lets pass at time 0 while a queue stands at it.
func (n *node) heldFlow(segments []segment) float64 {
	flow := n.allowed(0).value
	for _, seg := range [2]int32{n.upSeg, n.downSeg} {
		if seg >= 0 {
			flow = math.Min(flow, segments[seg].diagram.capacity)
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

// validateInitialNumbers checks what can be said of the initial traffic without knowing the corridor.
func (s *Scenario) validateInitialNumbers(v *violations) {
	for i, p := range s.Initial.Profile {
		at := fmt.Sprintf("Initial.Profile[%d]", i)
		v.finite(at+".Start", p.Start)
		if v.finite(at+".End", p.End) && !(p.End > p.Start) {
			v.add(at+".End", RuleOrder, p.End, fmt.Sprintf("beyond its start, %g", p.Start))
		}
		v.notNegative(at+".StartDensity", p.StartDensity)
		v.notNegative(at+".EndDensity", p.EndDensity)
	}
	v.notNegative("Initial.BackgroundFlow", s.Initial.BackgroundFlow)
	if len(s.Initial.Profile) > 0 && s.Initial.BackgroundFlow != 0 {
		v.add("Initial.BackgroundFlow", RuleConflict, s.Initial.BackgroundFlow, "0 where a profile is given")
	}
	for i, q := range s.Initial.Queues {
		at := fmt.Sprintf("Initial.Queues[%d]", i)
		v.notNegative(at+".Vehicles", q.Vehicles)
		v.notNegative(at+".Length", q.Length)
		if (q.Vehicles > 0) == (q.Length > 0) {
			v.add(at, RuleRequired, q, "exactly one of vehicles and length, more than 0")
		}
	}
}

// validateInitial checks the initial traffic against the layout.
func (s *Scenario) validateInitial(nodes []node, segments []segment, v *violations) {
	s.validateProfile(segments, v)
	if len(s.Initial.Profile) == 0 {
		s.validateBackground(v)
	}
	s.validateStanding(nodes, segments, v)
}

func (s *Scenario) validateBackground(v *violations) {
	for i := range s.Segments {
		if c := s.Segments[i].Relation.Capacity(); s.Initial.BackgroundFlow > c*(1+closeness) {
			v.add("Initial.BackgroundFlow", RuleRange, s.Initial.BackgroundFlow, fmt.Sprintf("at most %g, the capacity of %s", c, s.segmentName(i)))
			return
		}
	}
}

func (s *Scenario) validateProfile(segments []segment, v *violations) {
	profile := s.Initial.Profile
	start, end := segments[0].start, segments[len(segments)-1].end
	for i, p := range profile {
		at := fmt.Sprintf("Initial.Profile[%d]", i)
		if math.Abs(p.Start-start) > samePlace {
			v.add(at+".Start", RuleCover, p.Start, fmt.Sprintf("%g, where the piece before it (or the corridor's entry) leaves off", start))
		}
		start = p.End
		validateDensities(at, p, segments, v)
	}
	if n := len(profile); n > 0 && math.Abs(profile[n-1].End-end) > samePlace {
		v.add(fmt.Sprintf("Initial.Profile[%d].End", n-1), RuleCover, profile[n-1].End, fmt.Sprintf("%g, the corridor's exit", end))
	}
}

// validateDensities checks a piece against the jam density of each segment that it lies on.
func validateDensities(at string, p ProfilePiece, segments []segment, v *violations) {
	for i := range segments {
		seg := &segments[i]
		part, ok := p.clip(seg.start, seg.end)
		if !ok {
			continue
		}
		for _, end := range [2]struct {
			field   string
			density float64
		}{{".StartDensity", part.StartDensity}, {".EndDensity", part.EndDensity}} {
			if end.density > seg.diagram.jam*(1+closeness) {
				v.add(at+end.field, RuleRange, end.density, fmt.Sprintf("at most %g, the jam density of %s", seg.diagram.jam, seg.name))
				return
			}
		}
	}
}

func (s *Scenario) validateStanding(nodes []node, segments []segment, v *violations) {
	for i, q := range s.Initial.Queues {
		at := fmt.Sprintf("Initial.Queues[%d]", i)
		n := nodeNamed(nodes, q.Node)
		if n < 0 {
			v.add(at+".Node", RuleUnknown, q.Node, "the name of a node of the corridor")
			continue
		}
		if n == 0 {
			v.add(at+".Node", RuleRange, q.Node, "a node with road upstream of it; what waits before the entry is no part of the initial traffic")
			continue
		}
		if nodes[n].kind != SignalNode && nodes[n].heldFlow(segments) >= segments[n-1].diagram.capacity*(1-closeness) {
			v.add(at+".Node", RuleConflict, q.Node, "a node that holds traffic back at time 0; this one passes the capacity of the road before it")
			continue
		}
		if _, rest := q.parts(nodes, segments); rest > samePlace {
			unit := "vehicles"
			if q.Length > 0 {
				unit = "m"
			}
			v.add(at, RuleFits, q, fmt.Sprintf("a queue that fits on the road behind the node; %g %s of it do not", rest, unit))
		}
	}
	s.validateOverlap(nodes, segments, v)
}

func (s *Scenario) validateOverlap(nodes []node, segments []segment, v *violations) {
	if len(v.list) > 0 {
		return
	}
	var seen []standingPiece
	for i, q := range s.Initial.Queues {
		parts, _ := q.parts(nodes, segments)
		for _, p := range parts {
			for _, o := range seen {
				if p.segment == o.segment && p.piece.Start < o.piece.End-samePlace && o.piece.Start < p.piece.End-samePlace {
					v.add(fmt.Sprintf("Initial.Queues[%d]", i), RuleConflict, q, "queues that do not overlap")
					return
				}
			}
		}
		seen = append(seen, parts...)
	}
}
