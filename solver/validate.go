package solver

import (
	"fmt"
	"math"
)

// What a scenario may hold. The bounds are far outside anything built; they keep every quantity that the
// solver forms within the range in which its tolerances mean what they say.
const (
	minLength      = 0.01    // of a segment [m]
	maxPlace       = 1e7     // size of a place [m]
	minHorizon     = 1e-3    // [s]
	maxHorizon     = 1e7     // [s], about 115 days
	minSpeed       = 0.01    // free-flow speed [m/s]
	maxSpeed       = 1000    // any wave speed [m/s]
	minJamDensity  = 1e-4    // [veh/m]
	maxJamDensity  = 1e3     // [veh/m]
	minCapacity    = 1e-6    // [veh/s]
	maxRate        = 1e6     // any rate, of demand or capacity [veh/s]
	maxSwitches    = 1 << 20 // of one signal within the horizon
	maxSegments    = 1 << 16
	maxInputPieces = 1 << 20 // of one schedule or profile
)

// Validate reports all that is wrong with the scenario as one *[InvalidError], or nil.
func (s Scenario) Validate() error {
	_, err := s.prepare()
	return err
}

// prepare validates the scenario and lays it out.
func (s *Scenario) prepare() (layout, error) {
	var v violations
	v.within("Origin", s.Origin, -maxPlace, maxPlace)
	v.positive("Horizon", s.Horizon)
	if s.Horizon > 0 {
		v.within("Horizon", s.Horizon, minHorizon, maxHorizon)
	}
	s.validateSegments(&v)
	end := math.Inf(1)
	if len(v.list) == 0 {
		end = s.Origin
		for i := range s.Segments {
			end += s.Segments[i].Length
		}
	}
	s.validateControls(end, &v)
	s.validateEnds(&v)
	s.validateInitialNumbers(&v)
	if len(v.list) > 0 {
		return layout{}, v.err()
	}
	l := s.layout()
	nodes, segments := l.nodes, l.segments
	for i := range nodes {
		if first := nodeNamed(nodes, nodes[i].name); first != i {
			v.add("Segments", RuleUnique, nodes[i].name, "names of segments, bottlenecks and signals that give every node a name of its own")
		}
	}
	s.validateSpacing(l, &v)
	s.validateClosedForm(nodes, segments, &v)
	s.validateInitial(nodes, segments, &v)
	return l, v.err()
}

func (s *Scenario) validateSegments(v *violations) {
	if n := len(s.Segments); n == 0 || n > maxSegments {
		v.add("Segments", RuleRequired, n, fmt.Sprintf("between 1 and %d segments", maxSegments))
		return
	}
	names := map[string]bool{}
	total := 0.0
	for i := range s.Segments {
		at := fmt.Sprintf("Segments[%d]", i)
		g := &s.Segments[i]
		v.within(at+".Length", g.Length, minLength, maxPlace)
		total += g.Length
		validateRelation(at+".Relation", g.Relation, v)
		if name := s.segmentName(i); names[name] {
			v.add(at+".Name", RuleUnique, name, "a name that no other segment has")
		} else {
			names[name] = true
		}
	}
	if total > maxPlace {
		v.add("Segments", RuleRange, total, fmt.Sprintf("at most %g m in all", float64(maxPlace)))
	}
}

func validateRelation(at string, r Relation, v *violations) {
	if !r.Valid() {
		v.add(at, RuleRequired, nil, "a flow-density relation made by one of the constructors")
		return
	}
	v.within(at+".FreeSpeed", r.FreeSpeed(), minSpeed, maxSpeed)
	v.within(at+".JamDensity", r.JamDensity(), minJamDensity, maxJamDensity)
	v.within(at+".Capacity", r.Capacity(), minCapacity, maxSpeed*maxJamDensity)
	if w := -r.WaveSpeed(r.JamDensity()); w > maxSpeed || w < minSpeed {
		v.add(at+".WaveSpeed", RuleRange, w, fmt.Sprintf("a backward wave speed at jam density between %g and %g m/s", minSpeed, float64(maxSpeed)))
	}
}

// validateControls checks bottlenecks and signals; end is the exit's place, +Inf where it is not known.
func (s *Scenario) validateControls(end float64, v *violations) {
	names := map[string]bool{}
	for i := range s.Bottlenecks {
		b := &s.Bottlenecks[i]
		at := fmt.Sprintf("Bottlenecks[%d]", i)
		v.named(at+".Name", b.Name, names)
		v.within(at+".Place", b.Place, s.Origin-samePlace, min(end, maxPlace)+samePlace)
		b.Capacity.validate(at+".Capacity", s.Horizon, true, v)
	}
	for i := range s.Signals {
		g := &s.Signals[i]
		at := fmt.Sprintf("Signals[%d]", i)
		v.named(at+".Name", g.Name, names)
		v.within(at+".Place", g.Place, s.Origin-samePlace, min(end, maxPlace)+samePlace)
		if !(g.SaturationFlow > 0) {
			v.add(at+".SaturationFlow", RulePositive, g.SaturationFlow, "more than 0")
		}
		g.Plan.validate(at+".Plan", v)
		s.validateSwitches(at, g, v)
	}
	if !math.IsInf(end, 1) && len(v.list) == 0 {
		s.validatePlaces(v)
	}
}

func (s *Scenario) validateSwitches(at string, g *Signal, v *violations) {
	if g.Plan.Cycle == 0 {
		return
	}
	if g.Plan.Cycle > maxHorizon {
		v.add(at+".Plan.Cycle", RuleRange, g.Plan.Cycle, fmt.Sprintf("at most %g s", float64(maxHorizon)))
	}
	if n := s.Horizon / g.Plan.Cycle * float64(2*max(1, len(g.Plan.Greens))); n > maxSwitches {
		v.add(at+".Plan.Cycle", RuleRange, g.Plan.Cycle, fmt.Sprintf("long enough that the signal switches at most %d times within the horizon", maxSwitches))
	}
	if math.Abs(g.Plan.Offset) > maxHorizon || math.Abs(g.Plan.Offset) > maxSwitches*g.Plan.Cycle {
		v.add(at+".Plan.Offset", RuleRange, g.Plan.Offset, fmt.Sprintf("at most %g s and %d cycles in size", float64(maxHorizon), maxSwitches))
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
		if g.end-g.start >= minLength {
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
			return fmt.Sprintf("Bottlenecks[%d]", i)
		}
	}
	for i := range s.Signals {
		if s.Signals[i].Name == name {
			return fmt.Sprintf("Signals[%d]", i)
		}
	}
	return ""
}

func (s *Scenario) validateEnds(v *violations) {
	s.Entry.Demand.validate("Entry.Demand", s.Horizon, false, v)
	s.Exit.Capacity.validate("Exit.Capacity", s.Horizon, true, v)
	if s.Entry.Excess != Waits && s.Entry.Excess != TurnsAway {
		v.add("Entry.Excess", RuleRange, int(s.Entry.Excess), "Waits or TurnsAway")
	}
	if len(s.Entry.Demand) > maxInputPieces || len(s.Initial.Profile) > maxInputPieces {
		v.add("Entry.Demand", RuleRange, len(s.Entry.Demand), fmt.Sprintf("at most %d pieces", maxInputPieces))
	}
}

// validateClosedForm refuses schedules that change linearly in time next to a curved relation: what they send
// out has no closed form.
func (s *Scenario) validateClosedForm(nodes []node, segments []segment, v *violations) {
	curved := func(seg int32) bool { return seg >= 0 && segments[seg].diagram.curved() }
	for i := range nodes {
		n := &nodes[i]
		if (n.restriction.sloped() || n.demand.schedule.sloped()) && (curved(n.upSeg) || curved(n.downSeg)) {
			v.add(s.scheduleField(n), RuleClosedForm, nil, "steps: a rate that changes linearly in time has no closed form on a curved flow-density relation")
		}
	}
}

// scheduleField is the field path of the schedule that governs the node.
func (s *Scenario) scheduleField(n *node) string {
	if field := s.controlField(n.name); field != "" && n.restriction.sloped() {
		return field + ".Capacity"
	}
	if n.demand.schedule.sloped() {
		return "Entry.Demand"
	}
	return "Exit.Capacity"
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
