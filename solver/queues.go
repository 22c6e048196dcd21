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
	// which it is attained [s].
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
// queue, of the node where it formed; where it reaches the queue of another node, that one ends and its vehicles
// are in this one. Errors: *[InvalidError] for an unknown node.
func (s *Solution) Queues(node string) ([]Queue, error) {
	i, err := s.node(node)
	if err != nil {
		return nil, err
	}
	var out []Queue
	for _, run := range s.episodes(i) {
		q := Queue{Node: node, Start: run[0].born, sol: s, node: i, strips: run}
		for _, p := range run {
			q.End = math.Max(q.End, p.ended)
		}
		q.Cleared = q.End <= s.horizon
		q.End = math.Min(q.End, s.horizon)
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
		if p := &set.list[id]; math.Min(p.ended, s.horizon)-p.born > closeness*s.horizon {
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
		until = math.Max(until, p.ended)
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
	tail, before := set.end(p, p.tails, t, true)
	head, after := set.end(p, p.heads, t, false)
	return Strip{Tail: tail, Head: head, Vehicles: math.Max(0, before-after)}
}

// QueueReaches returns the first time at which a tail of the node's queues is at or upstream of place x [s]; ok is
// false where that does not happen within the solved time. Errors: *[InvalidError] for an unknown node or a place
// outside the corridor.
func (s *Solution) QueueReaches(node string, x float64) (t float64, ok bool, err error) {
	i, err := s.node(node)
	if err != nil {
		return 0, false, err
	}
	if err := s.checkPoint(x, 0); err != nil {
		return 0, false, err
	}
	first := math.Inf(1)
	for _, p := range s.stripsOf(i) {
		for _, part := range s.parts(p, p.tails) {
			first = math.Min(first, s.reaches(part, x))
		}
	}
	return first, first <= s.horizon, nil
}

// reaches is when the end of a strip, during one part of its life, first is at or upstream of x.
func (s *Solution) reaches(p part, x float64) float64 {
	if p.bound < 0 {
		if s.nodes[^p.bound].x <= x {
			return p.from
		}
		return math.Inf(1)
	}
	f := &s.fronts[p.bound]
	if s.kernel.place(f, p.from) <= x {
		return p.from
	}
	at := line{x0: x}
	if f.path < 0 {
		if f.speed >= 0 {
			return math.Inf(1)
		}
		return within(f.t0+(x-f.x0)/f.speed, p.to)
	}
	return s.paths[f.path].crossing(f.x0, f.t0, at, neither, -1, p.from, p.to, 0)
}

// part is an end of a strip over a span of time in which it is one front or node.
type part struct {
	bound    int32
	from, to float64
}

// parts lists what an end of the strip is over its life.
func (s *Solution) parts(p *strip, marks []mark) []part {
	end := math.Min(p.ended, s.horizon)
	out := make([]part, 0, len(marks))
	for i, m := range marks {
		to := end
		if i+1 < len(marks) {
			to = math.Min(end, marks[i+1].since)
		}
		if to > m.since {
			out = append(out, part{m.bound, m.since, to})
		}
	}
	return out
}

// StripPath is a strip over its life: the paths of its tail and its head.
type StripPath struct {
	Tail, Head []Point
}

// Strips returns the paths of all strips of the queue, in order of birth, as points between which straight
// lines stay within tolerance [m] of the exact paths. A tail that takes over another strip's jumps: two
// points at one time.
func (q Queue) Strips(tolerance float64) []StripPath {
	out := make([]StripPath, len(q.strips))
	for i, p := range q.strips {
		out[i] = StripPath{q.sol.points(q.sol.parts(p, p.tails), tolerance), q.sol.points(q.sol.parts(p, p.heads), tolerance)}
	}
	return out
}

// TailPoints returns the path of the outermost tail over the queue's life, as points between which straight lines
// stay within tolerance [m] of the exact path. Where another strip becomes the outermost one it jumps: two
// points at one time.
func (q Queue) TailPoints(tolerance float64) []Point {
	var outer []part
	times := q.eventTimes()
	for i := 1; i < len(times); i++ {
		bound, ok := q.outermost(0.5 * (times[i-1] + times[i]))
		if !ok {
			continue
		}
		if n := len(outer); n > 0 && outer[n-1].bound == bound {
			outer[n-1].to = times[i]
			continue
		}
		outer = append(outer, part{bound, times[i-1], times[i]})
	}
	return q.sol.points(outer, tolerance)
}

// outermost is the front or node that is the most upstream tail at time t. Tails never cross, so it stays that
// between two events.
func (q Queue) outermost(t float64) (bound int32, ok bool) {
	lowest := math.Inf(1)
	for _, p := range q.strips {
		if !p.stands(t) {
			continue
		}
		for _, one := range q.sol.parts(p, p.tails) {
			if one.from > t || one.to < t {
				continue
			}
			if place := q.sol.boundPlace(one.bound, t); place < lowest {
				lowest, bound, ok = place, one.bound, true
			}
		}
	}
	return bound, ok
}

func (s *Solution) points(parts []part, tolerance float64) []Point {
	var out []Point
	for _, p := range parts {
		path := func(t float64) float64 { return s.boundPlace(p.bound, t) }
		start := Point{path(p.from), p.from}
		if n := len(out); n == 0 || math.Abs(out[n-1].Place-start.Place) > samePlace {
			out = append(out, start)
		}
		if p.bound < 0 || s.fronts[p.bound].path < 0 {
			out = append(out, Point{path(p.to), p.to})
			continue
		}
		out = appendArc(out, path, p.from, p.to, tolerance)
	}
	return out
}

// boundPlace is the place of a front or node at time t.
func (s *Solution) boundPlace(bound int32, t float64) float64 {
	if bound < 0 {
		return s.nodes[^bound].x
	}
	return s.kernel.place(&s.fronts[bound], t)
}
