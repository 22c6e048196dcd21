package solver

import (
	"fmt"
	"math"
	"sort"
	"sync"
)

// Solution is the exact solution of a scenario from time 0 to its horizon. It is immutable and may be asked by
// any number of goroutines at once.
type Solution struct {
	plane
	roads        []int    // the scenario's segment that each segment is a part of
	roadNames    []string // of the scenario's segments
	interactions int64
	bytes        int64
	index        []segmentIndex
	strips       func() *stripSet
}

func newSolution(s *Scenario, l layout, k *kernel) *Solution {
	sol := &Solution{plane: k.plane, roads: l.roads, interactions: k.interactions, bytes: k.bytes()}
	for i := range s.Segments {
		sol.roadNames = append(sol.roadNames, s.segmentName(i))
	}
	sol.index = newIndex(&sol.plane)
	sol.strips = sync.OnceValue(func() *stripSet { return newStripSet(sol) })
	return sol
}

// Horizon is the time up to which the scenario was solved [s].
func (s *Solution) Horizon() float64 { return s.horizon }

// Extent returns the places of the entry and the exit [m].
func (s *Solution) Extent() (entry, exit float64) {
	return s.nodes[0].x, s.nodes[len(s.nodes)-1].x
}

// Stats says what the solve cost.
func (s *Solution) Stats() Stats {
	return Stats{Interactions: s.interactions, Fronts: len(s.fronts), Regions: len(s.regions), Bytes: s.bytes}
}

// NodeInfo describes a node of the corridor.
type NodeInfo struct {
	// Name: that of the bottleneck or signal, [EntryName], [ExitName], or "join A/B" between segments A and B.
	Name string
	// Kind of the node.
	Kind NodeKind
	// Place [m].
	Place float64
}

// Nodes lists the nodes, upstream first.
func (s *Solution) Nodes() []NodeInfo {
	out := make([]NodeInfo, len(s.nodes))
	for i := range s.nodes {
		out[i] = NodeInfo{s.nodes[i].name, s.nodes[i].kind, s.nodes[i].x}
	}
	return out
}

// State is the traffic at a point.
type State struct {
	Density float64 // [veh/m]
	Flow    float64 // [veh/s]
	Speed   float64 // [m/s]; on an empty road the free-flow speed
	// Congested: strictly denser than critical (with a capacity plateau: than its upper end). Flow at capacity
	// is not congested.
	Congested bool
}

// Sample is the answer at a point of the time-space plane.
type Sample struct {
	// Up and Down are the states just upstream and just downstream of the place. They differ on a front and at a node.
	Up, Down State
	// OnFront is true where the point lies on a front (to rounding); both sides are then given.
	OnFront bool
	// Count is N(x, t), the number of vehicles that have passed the place since time 0, less those that were
	// between the entry and the place at time 0: it is 0 at the entry at time 0, grows in time with the
	// flow and falls downstream by the density. At a node it is that of the upstream side; at the entry, the vehicles
	// that have entered.
	Count float64
}

// At answers for the point (x, t). Within a micrometre of a node it answers as at the node, whose count is taken on its
// upstream side: there the count is off by at most a micrometre of jam. Errors: *[InvalidError] outside the corridor or
// the solved time.
func (s *Solution) At(x, t float64) (Sample, error) {
	if err := s.checkPoint(x, t); err != nil {
		return Sample{}, err
	}
	up, down, on := s.locate(x, t)
	return Sample{
		Up: s.state(up, x, t), Down: s.state(down, x, t), OnFront: on,
		Count: s.regions[up].count(x, t),
	}, nil
}

func (s *Solution) checkPoint(x, t float64) error {
	var v violations
	entry, exit := s.Extent()
	v.within("Place", x, entry-samePlace, exit+samePlace)
	v.within("Time", t, 0, s.horizon*(1+closeness))
	return v.err()
}

// state of a region at a point.
func (s *Solution) state(g int32, x, t float64) State {
	r := &s.regions[g]
	return s.stateOf(r.seg, int(r.piece), r.edgeLabel(x, t, r.k))
}

func (s *Solution) stateOf(seg int32, piece int, k float64) State {
	d := s.segments[seg].diagram
	q := min(d.capacity, max(0, d.pieces[piece].flow(k)))
	speed := d.freeSpeed
	if k > 0 && piece > 0 {
		speed = min(speed, q/k)
	} else {
		speed = d.speed(k)
	}
	return State{Density: k, Flow: q, Speed: speed, Congested: piece >= d.congested && k > d.criticalHi}
}

// locate returns the regions just upstream and just downstream of the point, and whether it lies on a front.
func (s *Solution) locate(x, t float64) (up, down int32, onFront bool) {
	i, there := s.nodeAt(x)
	if there {
		return s.locateAt(&s.nodes[i], t)
	}
	return s.locateWithin(int32(i-1), x, t)
}

// nodeAt is the first node that does not lie upstream of a place, and whether it is there.
func (s *Solution) nodeAt(x float64) (i int, there bool) {
	i = sort.Search(len(s.nodes), func(i int) bool { return s.nodes[i].x >= x-samePlace })
	return i, i < len(s.nodes) && math.Abs(s.nodes[i].x-x) <= samePlace
}

// locateAt does so at a node: where a front rests on it, what stands between the two has no width and is passed over.
func (s *Solution) locateAt(n *node, t float64) (up, down int32, onFront bool) {
	p := n.at(t)
	up, down = p.up, p.down
	if n.upSeg >= 0 {
		if lowest, _ := s.restingOn(n, n.upSeg, t); lowest >= 0 {
			up, onFront = s.fronts[lowest].up, true
		}
	}
	if n.downSeg >= 0 {
		if _, highest := s.restingOn(n, n.downSeg, t); highest >= 0 {
			down, onFront = s.fronts[highest].down, true
		}
	}
	if up < 0 {
		up = down
	}
	if down < 0 {
		down = up
	}
	return up, down, onFront
}

// at is what stands on the two sides of the node at time t.
func (n *node) at(t float64) *passage {
	i := sort.Search(len(n.history), func(i int) bool { return n.history[i].from > t })
	return &n.history[max(0, i-1)]
}

func (s *Solution) node(name string) (int, error) {
	if i := nodeNamed(s.nodes, name); i >= 0 {
		return i, nil
	}
	var v violations
	v.add("Node", RuleUnknown, name, fmt.Sprintf("one of the nodes %q", s.nodeNames()))
	return 0, v.err()
}

func (s *Solution) nodeNames() []string {
	names := make([]string, len(s.nodes))
	for i := range s.nodes {
		names[i] = s.nodes[i].name
	}
	return names
}
