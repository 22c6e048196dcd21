package solver_test

import (
	"math"
	"slices"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// in returns the corridor in other units of length and time.
func (c *corridor) in(u units) solver.Scenario {
	s := c.scenario
	s.Origin, s.Horizon = s.Origin*u.metre, s.Horizon*u.second
	s.Segments, s.Bottlenecks, s.Signals = slices.Clone(s.Segments), slices.Clone(s.Bottlenecks), slices.Clone(s.Signals)
	for i := range s.Segments {
		s.Segments[i].Length *= u.metre
		s.Segments[i].Relation = c.specs[i].in(u).relation()
	}
	for i := range s.Bottlenecks {
		b := &s.Bottlenecks[i]
		b.Place, b.Capacity = b.Place*u.metre, u.schedule(b.Capacity)
	}
	for i := range s.Signals {
		g := &s.Signals[i]
		g.Place, g.SaturationFlow, g.Plan = g.Place*u.metre, g.SaturationFlow/u.second, u.plan(g.Plan)
	}
	s.Entry.Demand, s.Exit.Capacity = u.schedule(s.Entry.Demand), u.schedule(s.Exit.Capacity)
	s.Initial = u.initial(s.Initial)
	return s
}

func (u units) schedule(s solver.Schedule) solver.Schedule {
	s = slices.Clone(s)
	for i := range s {
		s[i] = solver.SchedulePiece{Start: s[i].Start * u.second, Rate: s[i].Rate / u.second, Slope: s[i].Slope / (u.second * u.second)}
	}
	return s
}

func (u units) plan(p solver.Plan) solver.Plan {
	p.Cycle, p.Offset, p.Greens = p.Cycle*u.second, p.Offset*u.second, slices.Clone(p.Greens)
	for i := range p.Greens {
		p.Greens[i].Start *= u.second
		p.Greens[i].End *= u.second
		if p.Cycle > 0 {
			p.Greens[i].End = math.Min(p.Greens[i].End, p.Cycle) // a product may round up
		}
	}
	return p
}

func (u units) initial(in solver.Initial) solver.Initial {
	in.BackgroundFlow /= u.second
	in.Profile, in.Queues = slices.Clone(in.Profile), slices.Clone(in.Queues)
	for i, p := range in.Profile {
		in.Profile[i] = solver.ProfilePiece{Start: p.Start * u.metre, End: p.End * u.metre,
			StartDensity: p.StartDensity / u.metre, EndDensity: p.EndDensity / u.metre}
	}
	for i := range in.Queues {
		in.Queues[i].Length *= u.metre
	}
	return in
}

// fromSteadyFlow lets the scenario begin in free flow that is restricted nowhere for the first tenth of its
// time: demand is the background flow, capacities are open, signals are green.
func fromSteadyFlow(s solver.Scenario) solver.Scenario {
	quiet := 0.1 * s.Horizon
	flow := s.Initial.BackgroundFlow
	s.Entry.Demand = opened(s.Entry.Demand, flow, quiet)
	if len(s.Exit.Capacity) > 0 {
		s.Exit.Capacity = opened(s.Exit.Capacity, math.Inf(1), quiet)
	}
	s.Bottlenecks, s.Signals = slices.Clone(s.Bottlenecks), slices.Clone(s.Signals)
	for i := range s.Bottlenecks {
		s.Bottlenecks[i].Capacity = opened(s.Bottlenecks[i].Capacity, math.Inf(1), quiet)
	}
	for i := range s.Signals {
		greens := []solver.Window{{Start: 0, End: quiet}}
		for _, w := range reference.Greens(s.Signals[i].Plan, s.Horizon) {
			if w.Start > quiet {
				greens = append(greens, w)
			}
		}
		s.Signals[i].SaturationFlow, s.Signals[i].Plan = math.Inf(1), solver.Plan{Greens: greens}
	}
	return s
}

// opened is the schedule with another rate until a time.
func opened(s solver.Schedule, rate, until float64) solver.Schedule {
	out := solver.Schedule{{Rate: rate}}
	for _, p := range s {
		if p.Start > until {
			out = append(out, p)
		}
	}
	return out
}

// delayed lets everything but the beginning happen later.
func delayed(s solver.Scenario, by float64) solver.Scenario {
	s.Horizon += by
	s.Entry.Demand, s.Exit.Capacity = delay(s.Entry.Demand, by), delay(s.Exit.Capacity, by)
	s.Bottlenecks, s.Signals = slices.Clone(s.Bottlenecks), slices.Clone(s.Signals)
	for i := range s.Bottlenecks {
		s.Bottlenecks[i].Capacity = delay(s.Bottlenecks[i].Capacity, by)
	}
	for i := range s.Signals {
		greens := slices.Clone(s.Signals[i].Plan.Greens)
		for j := range greens {
			greens[j].End += by
			if j > 0 {
				greens[j].Start += by
			}
		}
		s.Signals[i].Plan.Greens = greens
	}
	return s
}

func delay(s solver.Schedule, by float64) solver.Schedule {
	s = slices.Clone(s)
	for i := 1; i < len(s); i++ {
		s[i].Start += by
	}
	return s
}
