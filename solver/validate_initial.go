package solver

import (
	"fmt"
	"math"
)

// validateInitialNumbers checks what can be said of the initial traffic without knowing the corridor.
func (s *Scenario) validateInitialNumbers(v *violations) {
	if n := len(s.Initial.Profile); n > maxPieces {
		v.add("Initial.Profile", RuleRange, n, fmt.Sprintf("at most %d pieces", maxPieces))
	}
	for i, p := range s.Initial.Profile {
		at := item("Initial.Profile", i)
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
		at := item("Initial.Queues", i)
		v.notNegative(at+".Vehicles", q.Vehicles)
		v.notNegative(at+".Length", q.Length)
		if (q.Vehicles > 0) == (q.Length > 0) {
			v.add(at, RuleRequired, q, "exactly one of vehicles and length, more than 0")
		}
	}
}

// validateInitial checks the initial traffic against the layout; scheduled says that all schedules and controls are
// in it.
func (s *Scenario) validateInitial(l layout, scheduled bool, v *violations) {
	numbers := v.none()
	s.validateProfile(l.segments, v)
	if len(s.Initial.Profile) == 0 {
		s.validateBackground(v)
	}
	s.validateStandingNames(l.nodes, v)
	if scheduled && numbers {
		s.validateStanding(l.nodes, l.segments, v)
	}
}

func (s *Scenario) validateBackground(v *violations) {
	flow := s.Initial.BackgroundFlow
	for i := range s.Segments {
		if c := s.Segments[i].Relation.Capacity(); flow > c*(1+closeness) && !math.IsInf(flow, 1) {
			v.add("Initial.BackgroundFlow", RuleRange, flow, fmt.Sprintf("at most %g, the capacity of %q", c, s.segmentName(i)))
			return
		}
	}
}

func (s *Scenario) validateProfile(segments []segment, v *violations) {
	profile := s.Initial.Profile
	start, end := segments[0].start, segments[len(segments)-1].end
	for i, p := range profile {
		at := item("Initial.Profile", i)
		if gap := math.Abs(p.Start - start); gap > samePlace && !math.IsInf(gap, 1) {
			v.add(at+".Start", RuleCover, p.Start, fmt.Sprintf("%g, where the piece before it (or the corridor's entry) leaves off", start))
		}
		start = p.End
		validateDensities(at, p, segments, v)
	}
	if n := len(profile); n > 0 && profile[n-1].End > profile[n-1].Start {
		if gap := math.Abs(profile[n-1].End - end); gap > samePlace && !math.IsInf(gap, 1) {
			v.add(fmt.Sprintf("Initial.Profile[%d].End", n-1), RuleCover, profile[n-1].End, fmt.Sprintf("%g, the corridor's exit", end))
		}
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
			if end.density > seg.diagram.jam*(1+closeness) && !math.IsInf(end.density, 1) {
				v.add(at+end.field, RuleRange, end.density, fmt.Sprintf("at most %g, the jam density of %q", seg.diagram.jam, seg.name))
				return
			}
		}
	}
}

func (s *Scenario) validateStandingNames(nodes []node, v *violations) {
	for i, q := range s.Initial.Queues {
		at := fmt.Sprintf("Initial.Queues[%d].Node", i)
		switch n := nodeNamed(nodes, q.Node); {
		case n < 0 && s.controlField(q.Node) == "": // the layout lacks controls of which something is wrong
			v.add(at, RuleUnknown, q.Node, "the name of a node of the corridor")
		case n == 0:
			v.add(at, RuleRange, q.Node, "a node with road upstream of it; what waits before the entry is no part of the initial traffic")
		}
	}
}

func (s *Scenario) validateStanding(nodes []node, segments []segment, v *violations) {
	for i, q := range s.Initial.Queues {
		at := item("Initial.Queues", i)
		n := nodeNamed(nodes, q.Node)
		if n <= 0 {
			continue
		}
		if !nodes[n].holdsBack(segments, &segments[n-1]) {
			v.add(at+".Node", RuleConflict, q.Node, "a node that holds traffic back at time 0; this one passes the capacity of the road before it")
			continue
		}
		if _, rest := q.parts(nodes, segments); rest > samePlace {
			unit := "vehicles"
			if q.Length > 0 {
				unit = "m"
			}
			v.add(at, RuleFits, q, fmt.Sprintf("a queue that fits on the road behind the node, as far as that can carry more than the node passes; %g %s of it do not", rest, unit))
		}
	}
	if v.none() {
		s.validateOverlap(nodes, segments, v)
	}
}

func (s *Scenario) validateOverlap(nodes []node, segments []segment, v *violations) {
	var seen []standingPiece
	for i, q := range s.Initial.Queues {
		parts, _ := q.parts(nodes, segments)
		for _, p := range parts {
			for _, o := range seen {
				if p.segment == o.segment && p.piece.Start < o.piece.End-samePlace && o.piece.Start < p.piece.End-samePlace {
					v.add(item("Initial.Queues", i), RuleConflict, q, "queues that do not overlap")
					return
				}
			}
		}
		seen = append(seen, parts...)
	}
}
