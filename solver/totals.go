package solver

import (
	"math"
	"sort"
)

// Totals are exact integrals over a stretch of road from time 0.
type Totals struct {
	// VehicleTime is the time spent by all vehicles on the stretch [veh s].
	VehicleTime float64
	// VehicleDistance is the distance driven by all vehicles on the stretch [veh m].
	VehicleDistance float64
	// Delay is VehicleTime less the time that VehicleDistance takes at free-flow speed [veh s].
	Delay float64
	// Initial, Entered, Left and Stored are numbers of vehicles: there at time 0, come in, gone out, and there at
	// the end. Initial + Entered = Left + Stored.
	Initial, Entered, Left, Stored float64
}

// CorridorTotals are the totals of the corridor, with what happens outside beside them.
type CorridorTotals struct {
	Totals
	// Segments has the totals of each of the scenario's segments.
	Segments []Totals
	// Waiting is the number of vehicles in the entry queue at the end.
	Waiting float64
	// WaitingTime is the time spent in the entry queue by all vehicles [veh s]; it is no part of VehicleTime or Delay.
	WaitingTime float64
	// TurnedAway is the number of vehicles that could not enter and did not wait.
	TurnedAway float64
}

// Totals returns the totals from time 0 to t [s]. Errors: *[InvalidError] for a time outside the solved time.
//
// Vehicle time is the integral of the vehicles stored, N(start, t) - N(end, t); vehicle distance, the integral
// of flow, is that of N(x, t) - N(x, 0) over the stretch (Edie 1963; N_t = q). Both are sums of closed forms.
func (s *Solution) Totals(t float64) (CorridorTotals, error) {
	var v violations
	v.within("Time", t, 0, s.horizon*(1+closeness))
	if err := v.err(); err != nil {
		return CorridorTotals{}, err
	}
	out := CorridorTotals{Segments: make([]Totals, len(s.roadNames))}
	now, before := s.nodeCounts(t), s.nodeCounts(0)
	moments := s.nodeMoments(t)
	for i := range s.segments {
		part := Totals{
			VehicleTime:     moments[i] - moments[i+1],
			VehicleDistance: s.placeMoment(int32(i), t) - s.placeMoment(int32(i), 0),
			Initial:         before[i] - before[i+1],
			Stored:          now[i] - now[i+1],
			Entered:         now[i] - before[i],
			Left:            now[i+1] - before[i+1],
		}
		part.Delay = part.VehicleTime - part.VehicleDistance/s.segments[i].diagram.freeSpeed
		out.Segments[s.roads[i]].join(part)
		out.Totals.join(part)
	}
	s.outside(&out, t, moments[0])
	return out, nil
}

// join adds the stretch that follows downstream.
func (a *Totals) join(b Totals) {
	if a.VehicleTime == 0 && a.Initial == 0 && a.Entered == 0 && a.Left == 0 {
		a.Entered = b.Entered
	}
	a.VehicleTime += b.VehicleTime
	a.VehicleDistance += b.VehicleDistance
	a.Delay += b.Delay
	a.Initial += b.Initial
	a.Stored += b.Stored
	a.Left = b.Left
}

// outside adds what waits before the entry or was turned away.
func (s *Solution) outside(out *CorridorTotals, t, entered float64) {
	n := &s.nodes[0]
	excess := max(0, n.demand.total(t)-out.Entered)
	if excess <= closeness*(1+out.Entered) {
		excess = 0
	}
	if s.nodes[0].excess == TurnsAway {
		out.TurnedAway = excess
		return
	}
	out.Waiting = excess
	out.WaitingTime = max(0, n.demand.moment(t)-entered)
}

// nodeCounts are the counts at the nodes at time t.
func (s *Solution) nodeCounts(t float64) []float64 {
	out := make([]float64, len(s.nodes))
	for i := range s.nodes {
		n := &s.nodes[i]
		out[i] = s.regions[n.side(n.at(t))].count(n.x, t)
	}
	return out
}

// side is the region whose count is the node's: that upstream of it, at the entry that downstream.
func (n *node) side(p *passage) int32 {
	if p.up >= 0 {
		return p.up
	}
	return p.down
}

// nodeMoments are the integrals of the counts at the nodes from 0 to t.
func (s *Solution) nodeMoments(t float64) []float64 {
	out := make([]float64, len(s.nodes))
	for i := range s.nodes {
		out[i] = s.nodeMoment(&s.nodes[i], 0, t)
	}
	return out
}

// nodeMoment is the integral of the count at a node from a to b.
func (s *Solution) nodeMoment(n *node, a, b float64) float64 {
	sum := 0.0
	first := sort.Search(len(n.history), func(i int) bool { return n.history[i].from > a }) - 1
	for i := max(0, first); i < len(n.history) && n.history[i].from < b; i++ {
		p := &n.history[i]
		sum += s.timeMoment(n.side(p), n.x, max(a, p.from), min(b, s.until(n, i)))
	}
	return sum
}

// timeMoment is the integral of the count of a region at place x over time from a to b.
func (s *Solution) timeMoment(g int32, x, a, b float64) float64 {
	r := &s.regions[g]
	h := b - a
	if h <= 0 {
		return 0
	}
	// A standing characteristic brings a constant flow, as a uniform state does.
	if r.uniform() || math.Abs(r.waveSpeed(r.edgeLabel(x, a, r.k))) <= s.segments[r.seg].speedTolerance {
		return h * 0.5 * (r.count(x, a) + r.count(x, b))
	}
	form := r.from(x, a)
	// count = N(a) + q T - (c T)²/(2 (s + d T))
	linear := h*r.count(x, a) + 0.5*form.flow()*h*h
	return linear - 0.5*form.c*form.c*squareOverLine(h, form.s, form.d)
}

// squareOverLine is the integral of T²/(s + d T) over T from 0 to h. With u = d h/s it is h³/s * f(u),
// f(u) = ∫ z²/(1 + u z) dz over [0, 1] = (u²/2 - u + ln(1+u))/u³. Near u = 0, where that loses digits, its series
// Σ (-u)^j/(j+3).
func squareOverLine(h, s, d float64) float64 {
	u := d * h / s
	return h * h * h / s * squareRatio(u)
}

// seriesReach: below it the series of squareRatio reaches rounding within 60 terms; above it the closed form
// loses less than three digits.
const seriesReach = 0.5

func squareRatio(u float64) float64 {
	if math.Abs(u) > seriesReach {
		return (0.5*u*u - u + math.Log1p(u)) / (u * u * u)
	}
	sum, power := 0.0, 1.0
	for j := 3; math.Abs(power) > 0x1p-56 && j < 70; j++ {
		sum += power / float64(j)
		power *= -u
	}
	return sum
}

// placeMoment is the integral of N(x, t) over a segment at a time.
func (s *Solution) placeMoment(seg int32, t float64) float64 {
	x := s.segments[seg].start
	g := s.nodes[seg].at(t).down
	sum := 0.0
	for _, f := range s.frontsAt(seg, t) {
		to := min(s.segments[seg].end, max(x, s.place(f, t)))
		sum += s.regionMoment(g, x, to, t)
		x, g = to, f.down
	}
	return sum + s.regionMoment(g, x, s.segments[seg].end, t)
}

// regionMoment is the integral of the count of a region from place a to b at time t: a quadratic between
// whose ends Simpson's rule, with its middle, is exact for cubics and below.
func (s *Solution) regionMoment(g int32, a, b, t float64) float64 {
	if b <= a {
		return 0
	}
	r := &s.regions[g]
	return (b - a) / 6 * (r.count(a, t) + 4*r.count(0.5*(a+b), t) + r.count(b, t))
}
