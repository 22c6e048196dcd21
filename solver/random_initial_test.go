package solver_test

import (
	"math"
	"slices"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// initial draws the traffic at time 0: a profile with jumps and ramps or a free-flow background, and standing
// queues over it.
func (d *dice) initial(c *corridor, f features) {
	c.scenario.Initial.BackgroundFlow = d.in(0, 0.9) * c.capacity()
	if f.profile && d.chance(0.5) {
		c.scenario.Initial.BackgroundFlow = 0
		c.scenario.Initial.Profile = d.profile(c)
	}
	if f.queues && d.chance(0.4) {
		c.scenario.Initial.Queues = d.queues(c)
	}
}

// profile draws one to four pieces a segment; each goes on from the last one's density, or jumps.
func (d *dice) profile(c *corridor) []solver.ProfilePiece {
	var out []solver.ProfilePiece
	edges := c.edges()
	for i, g := range c.scenario.Segments {
		kj := g.Relation.JamDensity()
		cuts := []float64{edges[i], edges[i+1]}
		for range d.IntN(4) {
			cuts = append(cuts, edges[i]+d.in(0.1, 0.9)*g.Length)
		}
		slices.Sort(cuts)
		cuts = slices.Compact(cuts)
		k := d.in(0, 1) * kj
		for j := 1; j < len(cuts); j++ {
			p := solver.ProfilePiece{Start: cuts[j-1], End: cuts[j], StartDensity: k, EndDensity: k}
			if d.chance(0.5) {
				p.EndDensity = d.in(0, 1) * kj
			}
			if k = p.EndDensity; d.chance(0.6) {
				k = d.in(0, 1) * kj
			}
			out = append(out, p)
		}
	}
	return out
}

// queues draws a standing queue behind some of the nodes within the corridor, each shorter than the way to
// the next node upstream.
func (d *dice) queues(c *corridor) []solver.StandingQueue {
	var out []solver.StandingQueue
	add := func(name string, place float64) {
		room := place - c.scenario.Origin
		for _, x := range append(c.placed(), c.edges()...) {
			if x < place {
				room = math.Min(room, place-x)
			}
		}
		if room > 0 && d.chance(0.6) {
			out = append(out, solver.StandingQueue{Node: name, Length: d.in(0.1, 0.9) * room})
		}
	}
	for _, b := range c.scenario.Bottlenecks {
		if rateAt(b.Capacity, math.Inf(1), 0) < 0.99*c.capacity() { // it holds traffic back at time 0
			add(b.Name, b.Place)
		}
	}
	for _, g := range c.scenario.Signals {
		add(g.Name, g.Place)
	}
	return out
}

// vehicles is the number that all errors in counts are relative to: those on the road at time 0, those that
// wish to enter, and one.
func (c *corridor) vehicles() float64 {
	n := 1 + wishing(c.scenario.Entry.Demand, c.scenario.Horizon)
	for _, p := range reference.InitialProfile(&c.scenario) {
		n += (p.End - p.Start) * (p.StartDensity + p.EndDensity) / 2
	}
	return n
}

// wishing is how many vehicles a schedule of demand brings from time 0 to t.
func wishing(s solver.Schedule, t float64) float64 {
	n := 0.0
	for i, p := range s {
		from, to := math.Max(0, p.Start), t
		if i+1 < len(s) {
			to = math.Min(t, s[i+1].Start)
		}
		if from < to {
			n += (to - from) * (p.Rate + p.Slope*((from+to)/2-p.Start))
		}
	}
	return n
}
