package solver_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"github.com/roadswell/roadswell/solver"
)

// dice draw the numbers of a random corridor. Coarse dice draw eighths of each range only, so that waves,
// switches and places coincide.
type dice struct {
	*rand.Rand
	coarse bool
}

func newDice(seed uint64) *dice {
	d := &dice{Rand: rand.New(rand.NewPCG(seed, 0x726f6164))}
	d.coarse = d.chance(0.3)
	return d
}

// in draws from [lo, hi].
func (d *dice) in(lo, hi float64) float64 {
	u := d.Float64()
	if d.coarse {
		u = float64(d.IntN(9)) / 8
	}
	return lo + u*(hi-lo)
}

func (d *dice) chance(p float64) bool { return d.Float64() < p }

// features says what a random corridor may contain.
type features struct {
	kinds                       []relationKind
	segments                    int  // at most
	same                        bool // all of one relation
	bottlenecks, signals        int  // at most
	atEnds                      bool
	profile, queues             bool
	steps, slopes, exit, refuse bool // demand steps, linear pieces, exit restricted, demand turned away
}

// anything is all that the solver takes.
var anything = features{kinds: allKinds, segments: 6, bottlenecks: 2, signals: 3, atEnds: true,
	profile: true, queues: true, steps: true, slopes: true, exit: true, refuse: true}

// corridor is a random scenario with the numbers it was made of.
type corridor struct {
	seed     uint64
	specs    []relationSpec // by segment
	scenario solver.Scenario
}

// drawCorridor makes the corridor of a seed. Corridors of one seed and the same features are the same.
func drawCorridor(seed uint64, f features) corridor {
	d := newDice(seed)
	c := corridor{seed: seed}
	c.scenario = solver.Scenario{Origin: d.in(-500, 500), Horizon: d.in(100, 900)}
	d.road(&c, f)
	d.nodes(&c, f)
	d.ends(&c, f)
	d.initial(&c, f)
	return c
}

// road draws the segments. All have one relation where it is curved: a fan that crosses a change of a curved
// relation has no closed form, and is refused.
func (d *dice) road(c *corridor, f features) {
	kind := f.kinds[d.IntN(len(f.kinds))]
	spec := d.relation(kind)
	for i := range 1 + d.IntN(f.segments) {
		if i > 0 && !f.same && !kind.curved() && d.chance(0.7) {
			spec.lanes = float64(1 + d.IntN(4))
			if d.chance(0.5) {
				spec = d.relation(straightKinds[d.IntN(len(straightKinds))])
			}
		}
		c.specs = append(c.specs, spec)
		c.scenario.Segments = append(c.scenario.Segments, solver.Segment{
			Name: fmt.Sprintf("s%d", i+1), Length: d.in(200, 1500), Relation: spec.relation()})
	}
}

// straight reports whether every relation consists of straight lines.
func (c *corridor) straight() bool {
	return !slices.ContainsFunc(c.specs, func(s relationSpec) bool { return s.kind.curved() })
}

// edges are the ends of the segments, from upstream.
func (c *corridor) edges() []float64 {
	x := []float64{c.scenario.Origin}
	for _, g := range c.scenario.Segments {
		x = append(x, x[len(x)-1]+g.Length)
	}
	return x
}

func (c *corridor) exit() float64 { e := c.edges(); return e[len(e)-1] }

func (c *corridor) segmentAt(x float64) int {
	edges := c.edges()
	for i := range c.scenario.Segments {
		if x < edges[i+1] {
			return i
		}
	}
	return len(c.scenario.Segments) - 1
}

// capacity is the least capacity of the road.
func (c *corridor) capacity() float64 {
	least := math.Inf(1)
	for _, g := range c.scenario.Segments {
		least = math.Min(least, g.Relation.Capacity())
	}
	return least
}

// nodes draws bottlenecks and signals, at least 40 m apart; now and then one stands at an end.
func (d *dice) nodes(c *corridor, f features) {
	taken := c.edges()
	place := func() (float64, bool) {
		x := d.in(c.scenario.Origin, c.exit())
		if f.atEnds && d.chance(0.05) {
			x = taken[[2]int{0, len(c.scenario.Segments)}[d.IntN(2)]]
			return x, !slices.ContainsFunc(c.placed(), func(y float64) bool { return x == y })
		}
		near := slices.ContainsFunc(append(slices.Clone(taken), c.placed()...), func(y float64) bool { return math.Abs(x-y) < 40 })
		return x, !near
	}
	for i := range d.IntN(f.bottlenecks + 1) {
		if x, ok := place(); ok {
			c.scenario.Bottlenecks = append(c.scenario.Bottlenecks, solver.Bottleneck{
				Name: fmt.Sprintf("b%d", i+1), Place: x, Capacity: d.restriction(c, f)})
		}
	}
	for i := range d.IntN(f.signals + 1) {
		if x, ok := place(); ok {
			c.scenario.Signals = append(c.scenario.Signals, solver.Signal{
				Name: fmt.Sprintf("l%d", i+1), Place: x, SaturationFlow: d.saturation(c), Plan: d.plan(c)})
		}
	}
}

func (c *corridor) placed() []float64 {
	var out []float64
	for _, b := range c.scenario.Bottlenecks {
		out = append(out, b.Place)
	}
	for _, g := range c.scenario.Signals {
		out = append(out, g.Place)
	}
	return out
}

func (d *dice) saturation(c *corridor) float64 {
	if d.chance(0.4) {
		return math.Inf(1)
	}
	return d.in(0.5, 1.2) * c.capacity()
}

// restriction draws a capacity over time: permanent, a staged incident, a closure, a window, or a changing one.
func (d *dice) restriction(c *corridor, f features) solver.Schedule {
	full, h := c.capacity(), c.scenario.Horizon
	start, middle, end := d.in(0, 0.3)*h, d.in(0.31, 0.5)*h, d.in(0.51, 0.9)*h
	some := func() float64 { return d.in(0.1, 0.9) * full }
	switch kind := d.IntN(5); {
	case kind == 0:
		return solver.Schedule{{Rate: some()}}
	case kind == 1:
		return solver.Schedule{{Start: start, Rate: some()}, {Start: middle, Rate: some()}, {Start: end, Rate: math.Inf(1)}}
	case kind == 2:
		return solver.Schedule{{Start: start}, {Start: middle, Rate: some()}, {Start: end, Rate: full}}
	case kind == 3 || !f.slopes || !c.straight():
		return solver.Schedule{{Start: start, Rate: some()}, {Start: end, Rate: math.Inf(1)}}
	}
	return d.polyline(0, some(), middle, some(), h, some())
}

// polyline joins (time, rate) pairs by linear pieces.
func (d *dice) polyline(pairs ...float64) solver.Schedule {
	var out solver.Schedule
	for i := 0; i+3 < len(pairs); i += 2 {
		out = append(out, solver.SchedulePiece{Start: pairs[i], Rate: pairs[i+1], Slope: (pairs[i+3] - pairs[i+1]) / (pairs[i+2] - pairs[i])})
	}
	return append(out, solver.SchedulePiece{Start: pairs[len(pairs)-2], Rate: pairs[len(pairs)-1]})
}

// plan draws a fixed cycle with one or two greens, or a few explicit windows.
func (d *dice) plan(c *corridor) solver.Plan {
	cycle := d.in(40, 120)
	if d.chance(0.2) {
		h := c.scenario.Horizon
		return solver.Plan{Greens: []solver.Window{{Start: d.in(-0.1, 0.1) * h, End: d.in(0.2, 0.4) * h}, {Start: d.in(0.45, 0.6) * h, End: d.in(0.7, 1.1) * h}}}
	}
	greens := []solver.Window{{Start: d.in(0, 0.2) * cycle, End: d.in(0.25, 0.6) * cycle}}
	if d.chance(0.3) {
		greens = append(greens, solver.Window{Start: d.in(0.65, 0.75) * cycle, End: d.in(0.8, 1) * cycle})
	}
	return solver.Plan{Cycle: cycle, Offset: d.in(-1, 1) * cycle, Greens: greens}
}

// ends draws demand and what the exit lets out.
func (d *dice) ends(c *corridor, f features) {
	h, full := c.scenario.Horizon, c.capacity()
	rate := func() float64 { return d.in(0, 1.3) * full }
	switch {
	case !f.steps:
		c.scenario.Entry.Demand = solver.Schedule{{Rate: d.in(0.2, 0.9) * full}}
	case f.slopes && c.straight() && d.chance(0.4):
		c.scenario.Entry.Demand = d.polyline(0, rate(), d.in(0.2, 0.4)*h, rate(), d.in(0.5, 0.7)*h, rate())
	default:
		c.scenario.Entry.Demand = solver.Schedule{{Rate: rate()}, {Start: d.in(0.1, 0.4) * h, Rate: rate()}, {Start: d.in(0.5, 0.8) * h, Rate: rate()}}
	}
	if f.refuse && d.chance(0.3) {
		c.scenario.Entry.Excess = solver.TurnsAway
	}
	if f.exit && d.chance(0.3) {
		c.scenario.Exit.Capacity = d.restriction(c, f)
	}
}
