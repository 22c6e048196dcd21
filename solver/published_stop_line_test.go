package solver_test

import (
	"math"

	"github.com/roadswell/roadswell/solver"
)

// A second solution of everything upstream of one node, on a homogeneous road in steady arrivals: count first what
// the node lets pass (a deterministic queue), then spread that count over the road by the least-count principle
// (Newell 1993, Transp. Res. B 27, 281-287; Daganzo 2005, Transp. Res. B 39, 187-196): with z the distance back
// from the node,
//
//	N(z, t) = min( q t + k z,  min over s <= t of  D(s) + cost(z, t-s) ),
//
// where D counts what has passed and cost is the most that can pass a line from the node at s to z at t:
//
//	triangular:  cost = C T + kc z  for T >= z/w, least at T = z/w:  D(t - z/w) + kj z;
//	linear law:  cost = C T (1 + z/(vf T))²  for T >= z/vf, C = vf kj/4; over a span in which D rises at the
//	             rate c the sum is least at T = z / (vf sqrt(1 - c/C)), or at an end of the span.
//
// Nothing of this knows of waves, fronts or events.

// passing is a stretch of time in which the node lets vehicles pass at one rate.
type passing struct {
	start, end float64
	count      float64 // passed at start
	rate       float64
	held       bool // a queue stands, so the rate is the node's, not that of arrivals
}

// passings is D: arrivals at one rate, served at the given rates.
func passings(arrivals float64, service solver.Schedule, horizon float64) []passing {
	var d []passing
	waiting, count := 0.0, 0.0
	add := func(start, end, rate float64, held bool) {
		if end > start {
			d = append(d, passing{start, end, count, rate, held})
			count += rate * (end - start)
		}
	}
	for i, s := range service {
		end := horizon
		if i+1 < len(service) {
			end = min(horizon, service[i+1].Start)
		}
		growth := arrivals - s.Rate
		switch clears := s.Start + waiting/-growth; {
		case growth >= 0 && (growth > 0 || waiting > 0):
			add(s.Start, end, s.Rate, true)
			waiting += growth * (end - s.Start)
		case waiting > 0 && clears >= end:
			add(s.Start, end, s.Rate, true)
			waiting += growth * (end - s.Start)
		default:
			if waiting > 0 {
				add(s.Start, clears, s.Rate, true)
			} else {
				clears = s.Start
			}
			add(clears, end, arrivals, false)
			waiting = 0
		}
	}
	return d
}

// clearing is the end of the last queue, and the delay until then.
func clearing(d []passing, arrivals float64) (clears, delay float64) {
	for _, p := range d {
		if p.held {
			clears = p.end
			before, after := arrivals*p.start-p.count, arrivals*p.end-p.count-p.rate*(p.end-p.start)
			delay += (before + after) / 2 * (p.end - p.start)
		}
	}
	return clears, delay
}

// stopLine is the road upstream of the node.
type stopLine struct {
	arrivals, density float64
	passings          []passing
	cost              leastCost
}

// leastCost is the least count at distance z and time t that follows from one stretch of passing.
type leastCost interface {
	count(p passing, z, t float64) float64
}

// triangularCost is that of a triangular relation.
type triangularCost struct{ wave, jam float64 }

func (c triangularCost) count(p passing, z, t float64) float64 {
	s := t - z/c.wave
	if s < p.start {
		return math.Inf(1)
	}
	return p.count + p.rate*(min(s, p.end)-p.start) + c.jam*z + c.after(s-p.end)
}

// after is 0 at the end of the span; later spans take over there.
func (c triangularCost) after(beyond float64) float64 {
	if beyond > 0 {
		return math.Inf(1)
	}
	return 0
}

// linearCost is that of the linear speed-density law.
type linearCost struct{ freeSpeed, jam float64 }

func (c linearCost) count(p passing, z, t float64) float64 {
	longest := t - p.start
	shortest := max(t-p.end, z/c.freeSpeed)
	if longest < z/c.freeSpeed {
		return math.Inf(1)
	}
	capacity := c.freeSpeed * c.jam / 4
	span := longest
	if p.rate < capacity {
		span = min(longest, max(shortest, z/(c.freeSpeed*math.Sqrt(1-p.rate/capacity))))
	}
	stretch := 1 + z/(c.freeSpeed*span)
	if span == 0 { // z = 0 at time t itself
		stretch = 0
	}
	return p.count + p.rate*(longest-span) + capacity*span*stretch*stretch
}

// queued is the least count that follows from what passed.
func (l stopLine) queued(z, t float64) float64 {
	least := math.Inf(1)
	for _, p := range l.passings {
		if p.start <= t {
			least = min(least, l.cost.count(p, z, t))
		}
	}
	return least
}

// arriving is the count that arrivals alone would make.
func (l stopLine) arriving(z, t float64) float64 { return l.arrivals*t + l.density*z }

// reach is about how far the queue ever reaches back, found by looking often.
func (l stopLine) reach(horizon float64, tail func(t float64) float64) float64 {
	const looks = 400
	most := 0.0
	for i := range looks {
		most = max(most, tail(horizon*(float64(i)+0.5)/looks))
	}
	return most
}

// count is N at distance z back from the node, 0 at the node at time 0.
func (l stopLine) count(z, t float64) float64 { return min(l.arriving(z, t), l.queued(z, t)) }

// tail is how far the queue reaches back under the linear law: there every state between tail and node is denser
// than critical, and arriving - queued falls with z.
func (l stopLine) tail(t, longest float64) float64 {
	lo, hi := 0.0, longest
	for range 100 {
		middle := (lo + hi) / 2
		if l.arriving(middle, t) > l.queued(middle, t) {
			lo = middle
		} else {
			hi = middle
		}
	}
	return lo
}

// strips are the lengths from tail to head, as distances back from the node, of what is denser than critical under a
// triangular relation: each stretch of passing below capacity makes its own, bounded by arrivals.
func (l stopLine) strips(t float64, c triangularCost, capacity float64) (tails, heads []float64) {
	for _, p := range l.passings {
		if !p.held || p.rate >= capacity || p.start >= t {
			continue
		}
		dense := c.jam - p.rate/c.wave
		meets := (l.arrivals*t - p.count - p.rate*(t-p.start)) / (dense - l.density)
		tail := min(meets, c.wave*(t-p.start))
		head := max(0, c.wave*(t-p.end))
		if tail > head {
			tails, heads = append(tails, tail), append(heads, head)
		}
	}
	return tails, heads
}
