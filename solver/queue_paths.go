package solver

import "math"

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
			first = min(first, s.reaches(part, x))
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
	if s.place(f, p.from) <= x {
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
	end := min(p.ended, s.horizon)
	out := make([]part, 0, len(marks))
	for i, m := range marks {
		to := end
		if i+1 < len(marks) {
			to = min(end, marks[i+1].since)
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
	w := watch{strips: q.strips}
	for i := 1; i < len(times); i++ {
		middle := 0.5 * (times[i-1] + times[i])
		bound, ok := q.sol.outermostTail(w.at(middle), middle)
		if !ok {
			continue
		}
		if n := len(outer); n > 0 && outer[n-1].bound == bound && outer[n-1].to == times[i-1] {
			outer[n-1].to = times[i]
			continue
		}
		outer = append(outer, part{bound, times[i-1], times[i]})
	}
	return q.sol.points(outer, tolerance)
}

// outermostTail is the front or node that is the most upstream tail of the strips at time t. Tails never cross,
// so it stays that between two events.
func (s *Solution) outermostTail(present []*strip, t float64) (bound int32, ok bool) {
	lowest := math.Inf(1)
	for _, p := range present {
		if !p.stands(t) || len(p.tails) == 0 {
			continue
		}
		tail := s.endAt(p.tails, t, 1).bound
		if place := s.boundPlace(tail, t); place < lowest {
			lowest, bound, ok = place, tail, true
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
	return s.place(&s.fronts[bound], t)
}
