package reference

import (
	"math"

	"github.com/roadswell/roadswell/solver"
)

// LeastCount is the variational solution of a whole scenario: at every node the count is the least of what can
// have come from upstream, what the road downstream can have taken, and what the node has let pass,
//
//	C(t) = min( S(t), R(t), C(t-dt) + capacity dt ),
//
// where S and R are least counts over the neighbouring stretch's state at time 0 and the other end's count at
// all earlier times, by the Legendre transform of the stretch's law. Between nodes the count is the same
// minimum. Nothing travels from cell to cell, so nothing is smeared: the counts at the nodes are known at the
// steps' ends and linear between them, which is wrong by at most the flow times dt where the flow jumps within
// a step. The minimum passes an error on undiminished but does not enlarge it, so the greatest error of a count is
// at most that times the number of nodes that a wave passes: first order, everywhere and for all relations.
//
// Source: the solution of LWR by least cost paths, Daganzo 2005, Transp. Res. B 39, 187-196.
type LeastCount struct {
	scenario *solver.Scenario
	links    []link
	gates    []gate
	times    []float64   // ends of the steps
	counts   [][]float64 // of each gate at each of the times
}

// link is the stretch between two neighbouring gates.
type link struct {
	law        Law
	start, end float64
	initial    LaxHopf
}

// SolveLeastCount solves the scenario with steps of at most step. The laws are those of its segments.
func SolveLeastCount(s solver.Scenario, laws []Law, step float64) *LeastCount {
	m := newMesh(&s, Options{Cell: math.Inf(1), Refine: 1})
	l := &LeastCount{scenario: &s, gates: m.gates}
	profile := InitialProfile(&s)
	for _, st := range m.stretches {
		law := laws[segmentOf(&s, st.start, st.end)]
		l.links = append(l.links, link{law: law, start: st.start, end: st.end, initial: LaxHopf{Law: law, Profile: within(profile, st.start, st.end)}})
		step = math.Min(step, (st.end-st.start)/law.fastest())
	}
	l.begin()
	from := 0.0
	for _, to := range sorted(append(switches(&s), s.Horizon)) {
		n := math.Ceil((to - from) / step)
		for i := 1.0; i <= n; i++ {
			l.advance(from + (to-from)*i/n)
		}
		from = to
	}
	return l
}

// fastest is the greatest speed of a wave either way.
func (l Law) fastest() float64 {
	k := l.Kinks()
	return math.Max(k[0], -k[len(k)-1])
}

func segmentOf(s *solver.Scenario, from, to float64) int {
	for i := range s.Segments {
		if (from+to)/2 < segmentStart(s, i+1) {
			return i
		}
	}
	return len(s.Segments) - 1
}

// within cuts a profile to a stretch.
func within(profile []solver.ProfilePiece, from, to float64) []solver.ProfilePiece {
	var out []solver.ProfilePiece
	for _, p := range profile {
		out = appendPart(out, p, math.Max(from, p.Start), math.Min(to, p.End))
	}
	return out
}

// begin sets the counts at time 0: 0 at the entry, falling by the vehicles on each link.
func (l *LeastCount) begin() {
	l.times = []float64{0}
	l.counts = make([][]float64, len(l.gates))
	n := 0.0
	for g := range l.gates {
		l.counts[g] = []float64{n}
		if g < len(l.links) {
			n += l.links[g].initial.initialCount(l.links[g].end)
		}
	}
}

// advance takes one step to time t, at every gate from what is known up to the step before.
func (l *LeastCount) advance(t float64) {
	last := len(l.times) - 1
	from := l.times[last]
	next := make([]float64, len(l.gates))
	for g := range l.gates {
		before := l.counts[g][last]
		next[g] = before + l.gates[g].passes(from, t)
		if g == 0 {
			next[g] = math.Min(next[g], l.wishing(before, from, t))
		} else {
			next[g] = math.Min(next[g], l.reaching(g-1, l.gates[g].place, t))
		}
		if g < len(l.links) {
			next[g] = math.Min(next[g], l.reaching(g, l.gates[g].place, t))
		}
	}
	l.times = append(l.times, t)
	for g := range next {
		l.counts[g] = append(l.counts[g], next[g])
	}
}

// passes is what a gate lets pass in a step in which nothing switches.
func (g *gate) passes(from, to float64) float64 {
	if c := g.capacity(from, to); !math.IsInf(c, 1) {
		return c * (to - from)
	}
	return math.Inf(1)
}

// wishing is how many wish to have entered by t: all that came, or, where excess demand is turned away, those
// who come in this step besides those who did enter.
func (l *LeastCount) wishing(entered, from, to float64) float64 {
	demand := l.scenario.Entry.Demand
	if l.scenario.Entry.Excess == solver.TurnsAway {
		return entered + meanRate(demand, 0, from, to)*(to-from)
	}
	n := 0.0
	for _, x := range l.spans(to) {
		n += meanRate(demand, 0, x[0], x[1]) * (x[1] - x[0])
	}
	return n
}

// spans cuts [0, t] where demand changes.
func (l *LeastCount) spans(t float64) [][2]float64 {
	cuts := sorted(append(startsWithin(l.scenario.Entry.Demand, 0, t), 0, t))
	var out [][2]float64
	for i := 1; i < len(cuts); i++ {
		out = append(out, [2]float64{cuts[i-1], cuts[i]})
	}
	return out
}

// Count is N at the horizon at a place.
func (l *LeastCount) Count(x float64) float64 {
	t := l.times[len(l.times)-1]
	i := 0
	for i < len(l.links)-1 && x > l.links[i].end {
		i++
	}
	return l.reaching(i, x, t)
}

// Passed is the count at gate g at every step.
func (l *LeastCount) Passed(g int) (times, counts []float64) { return l.times, l.counts[g] }

// Places of the gates, from upstream.
func (l *LeastCount) Places() []float64 {
	var out []float64
	for _, g := range l.gates {
		out = append(out, g.place)
	}
	return out
}

// reaching is the least count that can reach (x, t) on link i, from its state at time 0 and from the counts at
// its ends at earlier times.
func (l *LeastCount) reaching(i int, x, t float64) float64 {
	k := &l.links[i]
	n := l.counts[i][0] + k.fromStart(x, t)
	n = math.Min(n, l.fromGate(i, k, x-k.start, t))
	return math.Min(n, l.fromGate(i+1, k, x-k.end, t))
}

// fromStart is the least count from the link's own state at time 0, relative to the count at its start then.
func (k *link) fromStart(x, t float64) float64 {
	h := k.initial
	best := math.Inf(1)
	cost := func(y float64) float64 { return h.initialCount(y) + t*k.law.Transform((x-y)/t) }
	cuts := []float64{k.start, k.end}
	for _, y := range h.cuts(x, t) {
		if y > k.start && y < k.end {
			cuts = append(cuts, y)
		}
	}
	cuts = sorted(cuts)
	for j := 1; j < len(cuts); j++ {
		best = math.Min(best, leastBetween(cost, cuts[j-1], cuts[j]))
	}
	return best
}

// fromGate is the least count that can have come from gate g over a distance (negative: against the
// direction of travel): from all steps before t, and from the moments that the law's corners point at. At the
// gate itself only the step before counts: no more than capacity has passed in any step.
func (l *LeastCount) fromGate(g int, k *link, distance, t float64) float64 {
	best, first := math.Inf(1), 0
	if distance == 0 {
		first = max(0, len(l.times)-2)
	}
	for j := first; j < len(l.times); j++ {
		s := l.times[j]
		if span := t - s; span > 0 {
			best = math.Min(best, l.counts[g][j]+span*k.law.Transform(distance/span))
		}
	}
	for _, v := range k.law.Kinks() {
		if span := distance / v; span > 0 && span <= t {
			best = math.Min(best, l.countAt(g, t-span)+span*k.law.Transform(v))
		}
	}
	return best
}

// countAt is the count at a gate at a time among the steps, linear between their ends.
func (l *LeastCount) countAt(g int, s float64) float64 {
	j := len(l.times) - 1
	for j > 0 && l.times[j-1] >= s {
		j--
	}
	if j == 0 {
		return l.counts[g][0]
	}
	share := math.Min(1, (s-l.times[j-1])/(l.times[j]-l.times[j-1]))
	return l.counts[g][j-1]*(1-share) + l.counts[g][j]*share
}
