package solver

import (
	"math"
	"sort"
)

// peakLength finds the earliest time at which the outermost tail is furthest from the node.
func (q *Queue) peakLength() {
	lowest, at := q.sol.furthestTail(q.strips, q.Start, q.End)
	q.PeakLength, q.PeakLengthTime = q.sol.nodes[q.node].x-lowest, at
}

// furthestTail is the most upstream place of any tail of the strips between two times, and the earliest time at
// which one is there; the place is +Inf where no tail is there at all.
func (s *Solution) furthestTail(strips []*strip, from, to float64) (lowest, at float64) {
	lowest, at = math.Inf(1), to
	slack := closeness * (s.nodes[len(s.nodes)-1].x - s.nodes[0].x)
	look := func(t, place float64) {
		if place < lowest-slack || place < lowest+slack && t < at {
			at, lowest = t, min(place, lowest)
		}
	}
	for _, p := range strips {
		for _, one := range s.parts(p, p.tails) {
			one.from, one.to = max(one.from, from), min(one.to, to)
			if one.to <= one.from {
				continue
			}
			look(one.from, s.boundPlace(one.bound, one.from))
			look(one.to, s.boundPlace(one.bound, one.to))
			if one.bound >= 0 && s.fronts[one.bound].path >= 0 {
				s.turningPoints(one, look)
			}
		}
	}
	return lowest, at
}

// turningParts is into how many parts the life of a curved front is cut in search of the places where it turns.
// The speed of a shock with a uniform side is monotone, so that one part would do; with profiles on both
// sides it may turn more often.
const turningParts = 16

// turningPoints calls look where a curved front turns back downstream.
func (s *Solution) turningPoints(p part, look func(t, place float64)) {
	f := &s.fronts[p.bound]
	speed := func(t float64) float64 { return -s.velocity(f, t) }
	forEachFall(speed, p.from, p.to, turningParts, func(t float64) { look(t, s.place(f, t)) })
}

// forEachFall calls found at the zeros in (a, b) where f goes from positive to negative, as far as they lie in
// different ones of n equal parts.
func forEachFall(f func(float64) float64, a, b float64, n int, found func(t float64)) {
	from, before := a, f(a)
	for i := 1; i <= n; i++ {
		to := a + (b-a)*float64(i)/float64(n)
		after := f(to)
		if before > 0 && after < 0 {
			found(fallingRoot(f, from, to))
		}
		from, before = to, after
	}
}

// peakVehicles finds the earliest time at which most vehicles are in the strips. Between the events of the
// strips their number is smooth; its extremes are at events or where its rate of change falls through zero.
func (q *Queue) peakVehicles() {
	times := q.eventTimes()
	w := watch{strips: q.strips}
	for i, t := range times {
		present := w.at(t)
		q.offerPeak(t, present)
		if i+1 < len(times) {
			q.peakBetween(t, times[i+1], present)
		}
	}
}

// watch follows which strips are there, for times that do not fall from call to call.
type watch struct {
	strips  []*strip // in order of birth
	born    int      // how many of them
	present []*strip
}

// at lists the strips born by time t that have not ended before it.
func (w *watch) at(t float64) []*strip {
	for ; w.born < len(w.strips) && w.strips[w.born].born <= t; w.born++ {
		w.present = append(w.present, w.strips[w.born])
	}
	kept := w.present[:0]
	for _, p := range w.present {
		if p.ended >= t {
			kept = append(kept, p)
		}
	}
	w.present = kept
	return kept
}

// offerPeak takes the number of vehicles at time t as the peak if it is more than the one found before. A strip
// that ends at t counts with what it has then.
func (q *Queue) offerPeak(t float64, present []*strip) {
	n := 0.0
	for _, p := range present {
		if p.born <= t && t <= p.ended && !(p.merged >= 0 && t == p.ended) {
			n += q.sol.stripAt(p, t).Vehicles
		}
	}
	if n > q.PeakVehicles*(1+closeness) {
		q.PeakVehicles, q.PeakVehiclesTime = n, t
	}
}

// eventTimes are the times at which an end of a strip becomes another front, in order.
func (q *Queue) eventTimes() []float64 {
	times := []float64{q.Start, q.End}
	for _, p := range q.strips {
		for _, marks := range [2][]mark{p.tails, p.heads} {
			for _, m := range marks {
				times = append(times, m.since)
			}
		}
		times = append(times, p.born, min(p.ended, q.End))
	}
	sort.Float64s(times)
	out := times[:1]
	for _, t := range times[1:] {
		if t > out[len(out)-1] {
			out = append(out, t)
		}
	}
	return out
}

// peakBetween looks at the zeros of the rate of change within a span without events.
func (q *Queue) peakBetween(a, b float64, present []*strip) {
	var ends []stripEnd
	for _, p := range present {
		if m := 0.5 * (a + b); p.stands(m) {
			ends = append(ends, q.sol.endAt(p.tails, m, 1), q.sol.endAt(p.heads, m, -1))
		}
	}
	curved := false
	for _, e := range ends {
		curved = curved || e.curved
	}
	if !curved {
		return // the number is linear in time
	}
	rate := func(t float64) float64 {
		sum := 0.0
		for _, e := range ends {
			sum += e.sign * q.sol.rateThrough(e, t)
		}
		return sum
	}
	forEachFall(rate, a, b, turningParts, func(t float64) { q.offerPeak(t, present) })
}

// stripEnd is the tail (sign 1) or head (sign -1) of a strip within a span without events.
type stripEnd struct {
	bound  int32
	region int32 // whose count it is taken from
	sign   float64
	curved bool
}

func (s *Solution) endAt(marks []mark, t, sign float64) stripEnd {
	i := sort.Search(len(marks), func(i int) bool { return marks[i].since > t }) - 1
	e := stripEnd{bound: marks[max(0, i)].bound, sign: sign}
	if e.bound < 0 {
		n := &s.nodes[^e.bound]
		e.region = n.side(n.at(t))
		e.curved = !s.regions[e.region].uniform()
		return e
	}
	f := &s.fronts[e.bound]
	e.region, e.curved = f.down, f.path >= 0
	if sign < 0 {
		e.region = f.up
	}
	return e
}

// rateThrough is the rate at which vehicles pass an end of a strip: q - v k of the state beside it.
func (s *Solution) rateThrough(e stripEnd, t float64) float64 {
	r := &s.regions[e.region]
	x, v := s.boundPlace(e.bound, t), 0.0
	if e.bound >= 0 {
		v = s.velocity(&s.fronts[e.bound], t)
	}
	k := r.edgeLabel(x, t, r.k)
	return r.flow(k) - v*k
}
