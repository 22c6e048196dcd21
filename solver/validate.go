package solver

import (
	"fmt"
	"math"
)

// What a scenario may hold. The bounds are far outside anything built; they keep every quantity that the
// solver forms within the range in which its tolerances mean what they say.
const (
	minLength     = 0.01    // of a segment [m]
	maxPlace      = 1e7     // size of a place [m]
	minHorizon    = 1e-3    // [s]
	maxHorizon    = 1e7     // [s], about 115 days
	minSpeed      = 0.01    // free-flow speed [m/s]
	maxSpeed      = 1000    // any wave speed [m/s]
	minJamDensity = 1e-4    // [veh/m]
	maxJamDensity = 1e3     // [veh/m]
	minCapacity   = 1e-6    // [veh/s]
	maxRate       = 1e6     // any rate, of demand or capacity [veh/s]
	maxSwitches   = 1 << 20 // of all signals together within the horizon
	maxSegments   = 1 << 16
)

// Validate reports all that is wrong with the scenario as one *[InvalidError], or nil.
func (s Scenario) Validate() error {
	_, err := s.prepare()
	return err
}

// findings are the violations found so far, by the part of the scenario that they are in. A part that is sound can
// be judged whatever is wrong with the others.
type findings struct {
	time, road, controls, ends, initial violations
}

func (f *findings) err() error {
	all := violations{}
	for _, part := range [...]*violations{&f.road, &f.controls, &f.ends, &f.initial, &f.time} {
		all.list = append(all.list, part.list...)
	}
	return all.err()
}

// prepare validates the scenario and lays it out.
func (s *Scenario) prepare() (layout, error) {
	var f findings
	s.validateTime(&f.time)
	s.validateRoad(&f.road)
	s.validateControls(&f)
	s.validateEnds(&f)
	s.validateInitialNumbers(&f.initial)
	if !f.road.none() {
		return layout{}, f.err()
	}
	judged := s.judgeable(&f)
	l := judged.layout()
	scheduled := f.time.none() && f.controls.none() && f.ends.none()
	s.validateNames(l.nodes, &f.road)
	s.validateSpacing(l, &f.controls)
	judged.validateClosedForm(l, &f.ends)
	s.validateInitial(l, scheduled, &f.initial)
	return l, f.err()
}

// judgeable is the scenario without those schedules of which something is wrong: what is left can be laid out.
func (s *Scenario) judgeable(f *findings) Scenario {
	out := *s
	if !f.time.none() {
		out.Horizon = minHorizon
	}
	if !f.time.none() || !f.controls.none() {
		out.Bottlenecks, out.Signals = nil, nil
	}
	if !f.time.none() || !f.ends.none() {
		out.Entry.Demand, out.Exit.Capacity = nil, nil
	}
	return out
}

func (s *Scenario) validateTime(v *violations) {
	v.positive("Horizon", s.Horizon)
	if s.Horizon > 0 {
		v.within("Horizon", s.Horizon, minHorizon, maxHorizon)
	}
}

// validateRoad checks what the corridor is made of.
func (s *Scenario) validateRoad(v *violations) {
	v.within("Origin", s.Origin, -maxPlace, maxPlace)
	switch n := len(s.Segments); {
	case n == 0:
		v.add("Segments", RuleRequired, n, "at least one segment")
		return
	case n > maxSegments:
		v.add("Segments", RuleRange, n, fmt.Sprintf("at most %d segments", maxSegments))
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

// validateNames: the names of joins are made of those of segments.
func (s *Scenario) validateNames(nodes []node, v *violations) {
	for i := range nodes {
		if first := nodeNamed(nodes, nodes[i].name); first != i {
			v.add("Segments", RuleUnique, nodes[i].name, "names of segments, bottlenecks and signals that give every node a name of its own")
		}
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
		at := fmt.Sprintf("Bottlenecks[%d]", i)
		v.named(at+".Name", b.Name, names)
		v.onRoad(at+".Place", b.Place, s.Origin, exit)
		b.Capacity.validate(at+".Capacity", f.horizon(s), true, v)
	}
	for i := range s.Signals {
		g := &s.Signals[i]
		at := fmt.Sprintf("Signals[%d]", i)
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

// horizon of the scenario; NaN, which no rate and no number of switches is compared with, where that is unsound.
func (f *findings) horizon(s *Scenario) float64 {
	if f.time.none() {
		return s.Horizon
	}
	return math.NaN()
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
