package solver

import (
	"math"
	"sort"
)

// TravelTime is the answer for a trip.
type TravelTime struct {
	// Departure is the time at which the trip starts [s]; at the entry, at which it joins the entry queue.
	Departure float64
	// Arrived is false where the vehicle has not arrived by the horizon; Arrival, Duration and Delay are then those
	// up to the horizon, not a forecast of the arrival.
	Arrived bool
	// Arrival [s].
	Arrival float64
	// WaitOutside is the time spent in the entry queue, for a trip from the entry [s]. It is no part of Duration.
	WaitOutside float64
	// Duration on the road [s].
	Duration float64
	// FreeFlow is the time the trip takes at the free-flow speeds of the segments [s].
	FreeFlow float64
	// Delay is Duration less FreeFlow [s]; for a trip that has not arrived, less the free-flow time of the part done.
	Delay float64
}

// TravelTime follows a trip from place from to place to, starting at the departure time. Errors: *[InvalidError] for
// places outside the corridor or in the wrong order, and times outside the solved time.
func (s *Solution) TravelTime(from, to, departure float64) (TravelTime, error) {
	var v violations
	entry, exit := s.Extent()
	v.within("From", from, entry-samePlace, exit+samePlace)
	v.within("To", to, from, exit+samePlace)
	v.within("Departure", departure, 0, s.horizon*(1+closeness))
	if err := v.err(); err != nil {
		return TravelTime{}, err
	}
	out := TravelTime{Departure: departure, Arrival: s.horizon, FreeFlow: s.freeFlow(from, to)}
	start := departure
	if from <= entry+samePlace {
		enters, ok := s.entersAt(departure)
		out.WaitOutside = enters - departure
		if !ok {
			return out, nil
		}
		start = enters
	}
	tr, err := s.Trajectory(from, start)
	if err != nil {
		return out, err
	}
	done := to
	out.Arrival, out.Arrived = tr.PassingTime(to)
	if !out.Arrived {
		out.Arrival, done = tr.End.Time, tr.End.Place
	}
	out.Duration = out.Arrival - start
	out.Delay = out.Duration - s.freeFlow(from, max(from, done))
	return out, nil
}

// freeFlow is the time from a to b at the free-flow speeds.
func (s *Solution) freeFlow(a, b float64) float64 {
	sum := 0.0
	for i := range s.segments {
		seg := &s.segments[i]
		if length := min(b, seg.end) - max(a, seg.start); length > 0 {
			sum += length / seg.diagram.freeSpeed
		}
	}
	return sum
}

// entersAt is when the vehicle that comes to the entry at time t gets in; ok is false, and the time the
// horizon, where it does not by then. Vehicles that arrive while none waits enter at once.
func (s *Solution) entersAt(t float64) (enters float64, ok bool) {
	n := &s.nodes[0]
	arrived := n.demand.total(t)
	entered := s.regions[n.at(t).down].count(n.x, t)
	if s.nodes[0].excess == TurnsAway || arrived-entered <= closeness*(1+arrived) {
		return t, true
	}
	// The first stretch of the entry's history at whose end the vehicle is in.
	i := sort.Search(len(n.history), func(i int) bool {
		until := s.until(n, i)
		return until > t && s.regions[n.history[i].down].count(n.x, until) >= arrived
	})
	if i == len(n.history) {
		return s.horizon, false
	}
	from := max(t, n.history[i].from)
	return s.countReached(n.history[i].down, n.x, arrived, from, s.until(n, i)), true
}

// until is the time at which the i-th stretch of the node's history ends.
func (s *Solution) until(n *node, i int) float64 {
	if i+1 < len(n.history) {
		return min(s.horizon, n.history[i+1].from)
	}
	return s.horizon
}

// countReached is when the count at a place inside the region reaches a number that it reaches in [from, until].
func (s *Solution) countReached(g int32, x, count, from, until float64) float64 {
	r := &s.regions[g]
	missing := count - r.count(x, from)
	if missing <= 0 {
		return from
	}
	label := r.edgeLabel(x, from, r.k)
	if r.uniform() || math.Abs(r.waveSpeed(label)) <= s.segments[r.seg].speedTolerance {
		return min(until, from+missing/r.flow(label))
	}
	form := r.from(x, from)
	bulge := form.bulge(0, 0)
	T := combineOne(&cubic{missing, -form.flow()}, &bulge, 1).descent(0, until-from)
	return min(until, from+T)
}
