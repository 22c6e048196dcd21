package reference

import (
	"math"
	"slices"

	"github.com/roadswell/roadswell/solver"
)

// stretch is a homogeneous part of the corridor between two places where something may hold traffic back, cut
// into equal cells.
type stretch struct {
	relation    solver.Relation
	start, end  float64
	first, next int // cells [first, next) of the mesh
	width       float64

	capacity, criticalLo, criticalHi float64
}

// gate is a place between two stretches (or an end of the corridor) with what restricts the flow there, each
// as a mean over a time step.
type gate struct {
	place  float64
	limits []func(from, to float64) float64
}

func (g *gate) capacity(from, to float64) float64 {
	c := math.Inf(1)
	for _, limit := range g.limits {
		c = math.Min(c, limit(from, to))
	}
	return c
}

// mesh is the corridor cut into stretches, gates (one more than stretches) and cells.
type mesh struct {
	stretches []stretch
	gates     []gate
	cells     int
}

// samePlace is the relative distance below which two places are one: the sum of a few segment lengths
// against a place given as a number differs by a few units of rounding.
const samePlace = 1e-12

func newMesh(s *solver.Scenario, o Options) mesh {
	var m mesh
	end := segmentStart(s, len(s.Segments))
	same := samePlace * (math.Abs(s.Origin) + math.Abs(end))
	for i := range s.Segments {
		m.cut(s.Segments[i].Relation, placesWithin(s, segmentStart(s, i), segmentStart(s, i+1), same), o)
	}
	m.gates = append(m.gates, gate{place: end})
	m.limit(s, same)
	return m
}

// placesWithin lists a segment's ends and the places of nodes between them.
func placesWithin(s *solver.Scenario, from, to, same float64) []float64 {
	places := []float64{from, to}
	add := func(x float64) {
		if !slices.ContainsFunc(places, func(y float64) bool { return math.Abs(x-y) <= same }) && x > from && x < to {
			places = append(places, x)
		}
	}
	for _, b := range s.Bottlenecks {
		add(b.Place)
	}
	for _, g := range s.Signals {
		add(g.Place)
	}
	return sorted(places)
}

// cut adds the stretches of one segment and the gate at the start of each.
func (m *mesh) cut(r solver.Relation, places []float64, o Options) {
	for i := 1; i < len(places); i++ {
		length := places[i] - places[i-1]
		cells := o.Refine * int(math.Ceil(length/o.Cell))
		st := stretch{relation: r, start: places[i-1], end: places[i], first: m.cells, next: m.cells + cells, width: length / float64(cells)}
		st.capacity = r.Capacity()
		st.criticalLo, st.criticalHi = r.CriticalDensity()
		m.stretches = append(m.stretches, st)
		m.gates = append(m.gates, gate{place: places[i-1]})
		m.cells += cells
	}
}

// limit hangs the scenario's restrictions on the gates.
func (m *mesh) limit(s *solver.Scenario, same float64) {
	for i := range m.gates {
		g := &m.gates[i]
		for _, b := range s.Bottlenecks {
			if math.Abs(b.Place-g.place) <= same {
				g.limits = append(g.limits, capacityOf(b.Capacity))
			}
		}
		for _, sig := range s.Signals {
			if math.Abs(sig.Place-g.place) <= same {
				g.limits = append(g.limits, passingOf(sig))
			}
		}
	}
	if exit := &m.gates[len(m.gates)-1]; len(s.Exit.Capacity) > 0 {
		exit.limits = append(exit.limits, capacityOf(s.Exit.Capacity))
	}
}

func capacityOf(c solver.Schedule) func(from, to float64) float64 {
	return func(from, to float64) float64 { return meanRate(c, math.Inf(1), from, to) }
}

func passingOf(g solver.Signal) func(from, to float64) float64 {
	return func(from, to float64) float64 {
		if GreenAt(g.Plan, (from+to)/2) {
			return g.SaturationFlow
		}
		return 0
	}
}

// longestStep is the greatest time step in which no wave crosses a cell.
func (m *mesh) longestStep() float64 {
	step := math.Inf(1)
	for _, st := range m.stretches {
		fastest := math.Max(st.relation.FreeSpeed(), -st.relation.WaveSpeed(st.relation.JamDensity()))
		step = math.Min(step, st.width/fastest)
	}
	return step
}

// fill returns the cells' mean densities of a profile.
func (m *mesh) fill(profile []solver.ProfilePiece) []float64 {
	density := make([]float64, m.cells)
	for _, st := range m.stretches {
		for c := st.first; c < st.next; c++ {
			density[c] = meanDensity(profile, st.edge(c), st.edge(c+1))
		}
	}
	return density
}

// edge is the upstream edge of a cell of the stretch.
func (st *stretch) edge(cell int) float64 {
	share := float64(cell-st.first) / float64(st.next-st.first)
	return st.start*(1-share) + st.end*share
}

func meanDensity(profile []solver.ProfilePiece, from, to float64) float64 {
	n := 0.0
	for _, p := range profile {
		if a, b := math.Max(from, p.Start), math.Min(to, p.End); a < b {
			n += vehiclesIn(p, a, b)
		}
	}
	return n / (to - from)
}
