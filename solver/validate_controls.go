package solver

import (
	"fmt"
	"math"
)

// validateControls checks bottlenecks and signals.
func (s *Scenario) validateControls(f *findings) {
	v := &f.controls
	exit := float64(maxPlace)
	if f.road.none() {
		exit = s.exitPlace()
	}
	names := map[string]bool{}
	switches := 0.0
	for i := range s.Bottlenecks {
		b := &s.Bottlenecks[i]
		at := item("Bottlenecks", i)
		v.named(at+".Name", b.Name, names)
		v.onRoad(at+".Place", b.Place, s.Origin, exit)
		b.Capacity.validate(at+".Capacity", f.horizon(s), true, v)
	}
	for i := range s.Signals {
		g := &s.Signals[i]
		at := item("Signals", i)
		v.named(at+".Name", g.Name, names)
		v.onRoad(at+".Place", g.Place, s.Origin, exit)
		if !(g.SaturationFlow > 0) {
			v.add(at+".SaturationFlow", RulePositive, g.SaturationFlow, "more than 0")
		}
		g.Plan.validate(at+".Plan", v)
		g.Plan.validateSwitches(at+".Plan", f.horizon(s), v)
		switches += g.Plan.switches(f.horizon(s))
	}
	if v.none() {
		s.validatePlaces(v)
	}
	if switches > maxSwitches && v.none() {
		v.add("Signals", RuleRange, math.Round(switches), fmt.Sprintf("signals that switch at most %d times in all within the horizon", maxSwitches))
	}
}

// exitPlace is where the last segment ends.
func (s *Scenario) exitPlace() float64 {
	x := s.Origin
	for i := range s.Segments {
		x += s.Segments[i].Length
	}
	return x
}

// onRoad checks that a place is between entry and exit, give or take the roundings of who added up its lengths.
func (v *violations) onRoad(field string, x, entry, exit float64) {
	if v.finite(field, x) && (x < entry-samePlace || x > exit+samePlace) {
		v.add(field, RuleRange, x, fmt.Sprintf("between %g and %g", entry, exit))
	}
}

// validatePlaces: at most one control at a place.
func (s *Scenario) validatePlaces(v *violations) {
	list := s.controls()
	for i := 1; i < len(list); i++ {
		if a, b := &list[i-1], &list[i]; b.place-a.place <= samePlace {
			v.add(s.controlField(b.name)+".Place", RuleUnique, b.place, fmt.Sprintf("one bottleneck or signal at a place; %q stands there too", a.name))
		}
	}
}

// validateSpacing: nodes that are not at one place are some way apart.
func (s *Scenario) validateSpacing(l layout, v *violations) {
	for i := range l.segments {
		g := &l.segments[i]
		if g.end-g.start >= minLength-samePlace {
			continue
		}
		n := &l.nodes[i]
		if s.controlField(l.nodes[i+1].name) != "" {
			n = &l.nodes[i+1]
		}
		v.add(s.controlField(n.name)+".Place", RuleRange, n.x, fmt.Sprintf("at a node of the corridor, or at least %g m from it", minLength))
	}
}

// controlField is the field path of the bottleneck or signal of that name, empty for other nodes.
func (s *Scenario) controlField(name string) string {
	for i := range s.Bottlenecks {
		if s.Bottlenecks[i].Name == name {
			return item("Bottlenecks", i)
		}
	}
	for i := range s.Signals {
		if s.Signals[i].Name == name {
			return item("Signals", i)
		}
	}
	return ""
}

func (s *Scenario) validateEnds(f *findings) {
	v := &f.ends
	s.Entry.Demand.validate("Entry.Demand", f.horizon(s), false, v)
	s.Exit.Capacity.validate("Exit.Capacity", f.horizon(s), true, v)
	if s.Entry.Excess != Waits && s.Entry.Excess != TurnsAway {
		v.add("Entry.Excess", RuleRange, int(s.Entry.Excess), "Waits or TurnsAway")
	}
}

// validateClosedForm refuses schedules that change linearly in time next to a curved relation: what they send
// out has no closed form.
func (s *Scenario) validateClosedForm(l layout, v *violations) {
	curved := func(seg int32) bool { return seg >= 0 && l.segments[seg].diagram.curved() }
	last := len(l.nodes) - 1
	for i := range l.nodes {
		n := &l.nodes[i]
		if !curved(n.upSeg) && !curved(n.downSeg) {
			continue
		}
		for b := range s.Bottlenecks {
			if s.Bottlenecks[b].Name == n.name {
				v.steps(fmt.Sprintf("Bottlenecks[%d].Capacity", b), s.Bottlenecks[b].Capacity)
			}
		}
		if i == 0 {
			v.steps("Entry.Demand", s.Entry.Demand)
		}
		if i == last {
			v.steps("Exit.Capacity", s.Exit.Capacity)
		}
	}
}

// steps refuses a schedule that changes other than by steps, at its first such piece.
func (v *violations) steps(field string, s Schedule) {
	for i := range s {
		if s[i].Slope != 0 {
			v.add(fmt.Sprintf("%s[%d].Slope", field, i), RuleClosedForm, s[i].Slope,
				"steps: a rate that changes linearly in time has no closed form on a curved flow-density relation")
			return
		}
	}
}

// named checks the name of a bottleneck or signal: present, and not that of another node.
func (v *violations) named(field, name string, names map[string]bool) {
	switch {
	case name == "":
		v.add(field, RuleRequired, nil, "a name")
	case name == EntryName || name == ExitName || names[name]:
		v.add(field, RuleUnique, name, "a name that no other node has")
	}
	names[name] = true
}
