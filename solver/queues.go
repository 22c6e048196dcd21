package solver

import (
	"math"
	"sort"
)

// Queue is one episode of queueing at a node: from when a queue forms until it has cleared. The queue
// belongs to the node where it formed and reaches from its tail, upstream, to its head; the head is the node
// while that holds traffic back and recedes after it has recovered. Behind a signal it may be several strips.
type Queue struct {
	// Node that the queue belongs to.
	Node string
	// Start [s].
	Start float64
	// Cleared is false where the queue still stands at the horizon.
	Cleared bool
	// End is when it cleared: when the last head met its tail; the horizon where it did not [s].
	End float64
	// PeakLength is the greatest distance from the node back to the outermost tail [m], and PeakLengthTime the
	// earliest time at which it is attained [s].
	PeakLength, PeakLengthTime float64
	// PeakVehicles is the greatest number of vehicles in all strips, and PeakVehiclesTime the earliest time at
	// which it is attained [s]. Both peaks are exact but for one case: where a tail lies between two profiles (which
	// takes a curved relation), turning points are sought in sixteen parts of its life, and two within one part
	// are passed over.
	PeakVehicles, PeakVehiclesTime float64

	sol    *Solution
	node   int
	strips []*strip
}

// QueueState is a queue at one time.
type QueueState struct {
	// Present is false where there is no queue; the rest is then zero.
	Present bool
	// Tail is the outermost (most upstream) tail, Head the most downstream head [m].
	Tail, Head float64
	// Length is the distance from the node back to Tail [m].
	Length float64
	// Vehicles in all strips.
	Vehicles float64
	// Strips of congested traffic, upstream first.
	Strips []Strip
}

// Strip is a stretch of congested traffic at one time, on one segment.
type Strip struct {
	Tail, Head float64 // [m]
	Vehicles   float64
}

// Queues lists the queues of a node in order of time. A queue that spills back over a node upstream stays one
// queue, of the node where it formed, unless a queue of that node stands there: each keeps its own, and the
// downstream one reaches up to the node. Where its tail comes to the head of a queue that has left its node, the two
// are one: the upstream one ends and its vehicles are in the downstream one. Errors: *[InvalidError] for an unknown node.
func (s *Solution) Queues(node string) ([]Queue, error) {
	i, err := s.node(node)
	if err != nil {
		return nil, err
	}
	var out []Queue
	for _, run := range s.episodes(i) {
		q := Queue{Node: node, Start: run[0].born, sol: s, node: i, strips: run}
		for _, p := range run {
			q.End = max(q.End, p.ended)
		}
		q.Cleared = q.End <= s.horizon
		q.End = min(q.End, s.horizon)
		q.peakLength()
		q.peakVehicles()
		out = append(out, q)
	}
	return out, nil
}

// stripsOf lists the strips of a node in order of birth, without those that never had any length or begin at the
// horizon.
func (s *Solution) stripsOf(node int) []*strip {
	set := s.strips()
	var out []*strip
	for _, id := range set.byNode[node] {
		if p := &set.list[id]; min(p.ended, s.horizon)-p.born > closeness*s.horizon {
			out = append(out, p)
		}
	}
	return out
}

// episodes cuts the strips of a node into runs that follow each other without a gap.
func (s *Solution) episodes(node int) [][]*strip {
	var out [][]*strip
	until := math.Inf(-1)
	for _, p := range s.stripsOf(node) {
		if len(out) == 0 || p.born > until+closeness*s.horizon {
			out = append(out, nil)
		}
		out[len(out)-1] = append(out[len(out)-1], p)
		until = max(until, p.ended)
	}
	return out
}

// QueueAt returns the queue of a node at time t. Errors: *[InvalidError] for an unknown node or a time
// outside the solved time.
func (s *Solution) QueueAt(node string, t float64) (QueueState, error) {
	i, err := s.node(node)
	if err != nil {
		return QueueState{}, err
	}
	var v violations
	v.within("Time", t, 0, s.horizon*(1+closeness))
	if err := v.err(); err != nil {
		return QueueState{}, err
	}
	return s.queueState(i, s.stripsOf(i), t), nil
}

func (s *Solution) queueState(node int, strips []*strip, t float64) QueueState {
	var out QueueState
	for _, p := range strips {
		if p.stands(t) {
			if one := s.stripAt(p, t); one.Head > one.Tail {
				out.Strips = append(out.Strips, one)
			}
		}
	}
	if len(out.Strips) == 0 {
		return out
	}
	sort.Slice(out.Strips, func(i, j int) bool { return out.Strips[i].Tail < out.Strips[j].Tail })
	out.Present, out.Tail = true, out.Strips[0].Tail
	out.Head = out.Strips[len(out.Strips)-1].Head
	out.Length = s.nodes[node].x - out.Tail
	for _, one := range out.Strips {
		out.Vehicles += one.Vehicles
	}
	return out
}

// stands reports whether the strip exists at time t; at the end of its life it does not.
func (p *strip) stands(t float64) bool { return p.born <= t && t < p.ended }

func (s *Solution) stripAt(p *strip, t float64) Strip {
	set := s.strips()
	tail, before := set.end(p.tails, t, true)
	head, after := set.end(p.heads, t, false)
	return Strip{Tail: tail, Head: head, Vehicles: max(0, before-after)}
}
