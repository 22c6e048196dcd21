package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// rateAt is the schedule's rate at a time, before it begins as given.
func rateAt(s solver.Schedule, before, time float64) float64 {
	for _, p := range s {
		if p.Start > time {
			break
		}
		if before = p.Rate; p.Slope != 0 {
			before += p.Slope * (time - p.Start)
		}
	}
	return before
}

// lets is what all that stands at a place lets pass at a time.
func (s *solved) lets(place, time float64) float64 {
	c := math.Inf(1)
	for _, b := range s.scenario.Bottlenecks {
		if b.Place == place {
			c = math.Min(c, rateAt(b.Capacity, math.Inf(1), time))
		}
	}
	for _, g := range s.scenario.Signals {
		if g.Place != place {
			continue
		}
		if !reference.GreenAt(g.Plan, time) {
			return 0
		}
		c = math.Min(c, g.SaturationFlow)
	}
	if place == s.exit() {
		c = math.Min(c, rateAt(s.scenario.Exit.Capacity, math.Inf(1), time))
	}
	return c
}

// crossing is the flow through a place at a time when no wave leaves or reaches it (at random times none
// does), and whether it is such a time: N then grows evenly.
func (s *solved) crossing(t testing.TB, place, time float64) (flow float64, even bool) {
	a := s.sample(t, place, time)
	if place == s.scenario.Origin {
		return a.Down.Flow, true
	}
	if place == s.exit() {
		return a.Up.Flow, true
	}
	return a.Up.Flow, math.Abs(a.Up.Flow-a.Down.Flow) <= promised*s.flowAtMost()
}

// TestNodesPassTheLeastOfDemandSupplyAndCapacity: the rule of every inner node. Each state is asked for well
// inside the region next to the node, by linear extension.
func TestNodesPassTheLeastOfDemandSupplyAndCapacity(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		for _, place := range append(s.edges(), s.placed()...) {
			time := s.sometime()
			if place == s.scenario.Origin || place == s.exit() {
				continue
			}
			flow, even := s.crossing(t, place, time)
			if !even {
				t.Errorf("node at %g m, %g s: flow %v upstream and downstream differ", place, time, s.sample(t, place, time))
			}
			a := s.sample(t, place, time)
			demand := s.relationBefore(place).Demand(a.Up.Density)
			supply := s.relationAt(place).Supply(a.Down.Density)
			least := math.Min(math.Min(demand, supply), s.lets(place, time))
			within(t, "flow through a node; least of demand, supply and capacity", flow, least, promised*s.flowAtMost())
		}
	})
}

// relationBefore is the relation of the road that ends at x or holds it.
func (s *solved) relationBefore(x float64) solver.Relation {
	edges := s.edges()
	for i, g := range s.scenario.Segments {
		if x <= edges[i+1] {
			return g.Relation
		}
	}
	panic("beyond the corridor")
}

// TestTheExitPassesTheLeastOfDemandAndCapacity, and the entry the least of what wishes to enter, supply and
// capacity; what waits outside wishes to enter at once.
func TestTheEndsPassTheLeastOfDemandSupplyAndCapacity(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		time := s.sometime()
		out := s.sample(t, s.exit(), time).Up
		least := math.Min(s.relationBefore(s.exit()).Demand(out.Density), s.lets(s.exit(), time))
		within(t, "flow through the exit", out.Flow, least, promised*s.flowAtMost())

		in := s.sample(t, s.scenario.Origin, time).Down
		wish := rateAt(s.scenario.Entry.Demand, 0, time)
		if waiting := s.totalsAt(t, time).Waiting; waiting > s.count {
			wish = math.Inf(1)
		} else if waiting > 0 {
			return // less than rounding tells: the queue may be ending just now
		}
		least = math.Min(math.Min(wish, s.relationAt(s.scenario.Origin).Supply(in.Density)), s.lets(s.scenario.Origin, time))
		within(t, "flow through the entry", in.Flow, least, promised*s.flowAtMost())
	})
}

// TestNodesStayWithinCapacity: over any span of time no more passes than capacity times time allows, and N
// never falls.
func TestNodesStayWithinCapacity(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		const steps = 50
		for _, place := range append(s.edges(), s.placed()...) {
			h := s.scenario.Horizon / steps
			before := s.n(t, place, 0)
			for i := range steps {
				now := s.n(t, place, float64(i+1)*h)
				if passed := now - before; passed < -s.count || passed > s.most(place, float64(i)*h, float64(i+1)*h)+s.count {
					t.Errorf("%g vehicles passed %g m from %g to %g s, allowed %g", passed, place, float64(i)*h, float64(i+1)*h, s.most(place, float64(i)*h, float64(i+1)*h))
				}
				before = now
			}
		}
	})
}

// most is how many vehicles may pass a place from one time to another. It is a sum over the spans between
// switches, on each of which the capacity is linear.
func (s *solved) most(place, from, to float64) float64 {
	road := math.Min(s.relationBefore(place).Capacity(), s.relationAt(place).Capacity())
	n := 0.0
	cuts := s.switches(from, to)
	for i := 1; i < len(cuts); i++ {
		a, b := cuts[i-1], cuts[i]
		n += (b - a) * math.Min(road, s.mean(place, a, b))
	}
	return n
}
