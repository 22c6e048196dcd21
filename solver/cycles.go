package solver

import (
	"fmt"
	"math"
	"sort"
)

// Cycle is what happens at a signal from the beginning of one red to the beginning of the next. A plan with several
// greens in its cycle has as many of these. Its queue is that of the signal (see [Queue]): where a queue from further
// downstream has grown back over the signal, what stands there belongs to that one, and only Departed and Delay tell of
// it.
type Cycle struct {
	// Start is when red begins, Green when green does, and End when that ends [s]; as far as they lie within the
	// solved time, else its nearest end.
	Start, Green, End float64
	// Complete is false where the cycle began before time 0 or goes on at the horizon. The rest is then about its part
	// within.
	Complete bool
	// BackOfQueue is the greatest distance from the stop line back to the outermost tail of the signal's queue during
	// the cycle [m], and BackOfQueueTime the earliest time at which it is attained [s]; both are 0 without a queue.
	BackOfQueue, BackOfQueueTime float64
	// Ended is whether green ends by the horizon. Only then there is a Residual.
	Ended bool
	// Residual is the number of vehicles in the signal's queue when green ends: those that it did not serve. More than
	// none is a cycle failure.
	Residual float64
	// Departed is the number of vehicles that crossed the stop line during the cycle.
	Departed float64
	// Delay is the time lost on the approach during the cycle by all vehicles, beyond what the distance that they
	// drive there takes at free-flow speed [veh s]. The approach reaches back to the next node upstream that is no
	// join.
	Delay float64
}

// Failed reports whether green ended before it had served the queue.
func (c Cycle) Failed() bool { return c.Residual > 0 }

// Cycles lists the cycles of a signal within the solved time, in order. Errors: *[InvalidError] for a name that is no
// signal's.
func (s *Solution) Cycles(signal string) ([]Cycle, error) {
	i := nodeNamed(s.nodes, signal)
	if i < 0 || s.nodes[i].kind != SignalNode {
		var v violations
		v.add("Signal", RuleUnknown, signal, fmt.Sprintf("one of the signals %q", s.signalNames()))
		return nil, v.err()
	}
	cycles := s.nodes[i].cycles(s.horizon)
	strips := s.stripsOf(i)
	first := 0
	for j := range cycles {
		c := &cycles[j]
		// Strips are in order of birth; those that ended before the cycle began are left behind where they can be.
		for first < len(strips) && strips[first].ended < c.Start {
			first++
		}
		s.fill(c, i, strips[first:])
	}
	return cycles, nil
}

func (s *Solution) signalNames() []string {
	var names []string
	for i := range s.nodes {
		if s.nodes[i].kind == SignalNode {
			names = append(names, s.nodes[i].name)
		}
	}
	return names
}

// cycles lists when the signal's reds and greens begin and end within the horizon.
func (n *node) cycles(horizon float64) []Cycle {
	within := func(t float64) float64 { return max(0, min(t, horizon)) }
	var out []Cycle
	red, green := math.Inf(-1), math.NaN() // when the phase that goes on began; green is NaN in red
	add := func(end float64) {
		if end > 0 && red < horizon {
			ended := end <= horizon
			out = append(out, Cycle{Start: within(red), Green: within(green), End: within(end), Complete: red >= 0 && ended, Ended: ended})
		}
	}
	for _, p := range n.capacity.schedule {
		switch {
		case p.Rate > 0 && math.IsNaN(green):
			green = p.Start
		case p.Rate == 0 && !math.IsNaN(green):
			add(p.Start)
			red, green = p.Start, math.NaN()
		}
	}
	if math.IsNaN(green) {
		green = math.Inf(1)
	}
	add(math.Inf(1))
	return out
}

// fill sets what happens during a cycle of signal i, whose queue has these strips.
func (s *Solution) fill(c *Cycle, i int, strips []*strip) {
	born := sort.Search(len(strips), func(j int) bool { return strips[j].born >= c.End })
	strips = strips[:born]
	if lowest, at := s.furthestTail(strips, c.Start, c.End); !math.IsInf(lowest, 1) {
		c.BackOfQueue, c.BackOfQueueTime = s.nodes[i].x-lowest, at
	}
	n := &s.nodes[i]
	c.Departed = s.countPast(n, c.End) - s.countPast(n, c.Start)
	if left := s.queueState(i, strips, c.End).Vehicles; c.Ended && left > closeness*(1+math.Abs(s.countPast(n, c.End))) {
		c.Residual = left
	}
	c.Delay = max(0, s.approachDelay(i, c.Start, c.End))
}

// countPast is the count at a node.
func (s *Solution) countPast(n *node, t float64) float64 {
	return s.regions[n.side(n.at(t))].count(n.x, t)
}

// approachDelay is the time lost from a to b on the road between node i and the next one upstream that is no join.
func (s *Solution) approachDelay(i int, a, b float64) float64 {
	sum := 0.0
	for seg := i - 1; seg >= 0; seg-- {
		distance := s.placeMoment(int32(seg), b) - s.placeMoment(int32(seg), a)
		time := s.nodeMoment(&s.nodes[seg], a, b) - s.nodeMoment(&s.nodes[seg+1], a, b)
		sum += time - distance/s.segments[seg].diagram.freeSpeed
		if s.nodes[seg].kind != JoinNode {
			break
		}
	}
	return sum
}
