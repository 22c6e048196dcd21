package solver

import "fmt"

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
		at := item("Segments", i)
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
