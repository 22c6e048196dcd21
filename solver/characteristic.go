package solver

import "math"

// Characteristic is the path of a wave that carries one density: straight between nodes.
type Characteristic struct {
	// Points of the path; straight lines between them are exact.
	Points []Point
	// EndsBy says what ended it: a front that swallowed it (Merged), a node that it does not pass (AtNode; also
	// the two ends of the corridor), or the horizon.
	EndsBy FrontEnd
}

// Characteristic follows the wave that is at place x at time t forward in time. At a node it goes on where the node
// just passes on what arrives (its density then becomes that of the same flow on the other side), and ends where
// the node governs the flow. On a front that waves run into it is the front's place alone; on the edge
// of a fan, the edge. Errors: *[InvalidError] outside the corridor or the solved time.
func (s *Solution) Characteristic(x, t float64) (Characteristic, error) {
	if err := s.checkPoint(x, t); err != nil {
		return Characteristic{}, err
	}
	up, down, onFront := s.locate(x, t)
	out := Characteristic{Points: []Point{{x, t}}}
	into, from := s.waveAt(up, x, t), s.waveAt(down, x, t)
	_, atNode := s.nodeAt(x)
	sentOut := atNode && from > 0 // by the node, whatever rests on its upstream side
	if onFront && up != down && into > from && !sentOut {
		out.EndsBy = Merged
		return out, nil
	}
	w := wavePath{sol: s, x: x, t: t, region: down}
	for hop := 0; hop <= len(s.nodes); hop++ {
		ends := w.follow()
		out.Points = append(out.Points, Point{w.x, w.t})
		out.EndsBy = ends
		if ends != AtNode || !w.pass() {
			break
		}
	}
	return out, nil
}

// waveAt is the wave speed in the region at a point.
func (s *Solution) waveAt(g int32, x, t float64) float64 {
	r := &s.regions[g]
	if r.uniform() {
		return s.segments[r.seg].diagram.pieces[r.piece].waveSpeed(r.k)
	}
	return r.waveSpeed(r.edgeLabel(x, t, r.k))
}

// wavePath is a wave on its way.
type wavePath struct {
	sol    *Solution
	x, t   float64
	region int32
	node   int32 // that it arrived at
	fromUp bool
}

// follow takes the wave to where it leaves its region. Waves never leave the region of their density but into
// a shock, a node or the horizon.
func (w *wavePath) follow() FrontEnd {
	s := w.sol
	own := line{w.x, w.t, s.waveAt(w.region, w.x, w.t)}
	seg := s.regions[w.region].seg
	until, ends := s.horizon, AtHorizon
	if t, node := s.nodeReached(own, seg); t <= until {
		until, ends, w.node, w.fromUp = t, AtNode, node, own.speed > 0
	}
	if t := s.swallowed(w.region, own, until); t < until {
		until, ends = t, Merged
	}
	w.x, w.t = own.at(until), until
	if ends == AtNode {
		w.x = s.nodes[w.node].x
	}
	return ends
}

// nodeReached is when a wave comes to the end of its segment, and which node is there.
func (s *Solution) nodeReached(l line, seg int32) (float64, int32) {
	switch {
	case l.speed > 0:
		return l.t0 + (s.segments[seg].end-l.x0)/l.speed, seg + 1
	case l.speed < 0:
		return l.t0 + (s.segments[seg].start-l.x0)/l.speed, seg
	}
	return math.Inf(1), -1
}

// swallowed is the first time before until at which a shock meets the wave of a region. Waves never meet other
// fronts: edges and contacts are waves themselves.
func (s *Solution) swallowed(g int32, l line, until float64) float64 {
	index := &s.index[s.regions[g].seg]
	for i := range index.starts {
		if i+1 < len(index.starts) && index.starts[i+1] < l.t0 {
			continue
		}
		if index.starts[i] > until {
			break
		}
		for _, id := range index.fronts[index.first[i]:index.first[i+1]] {
			if f := &s.fronts[id]; f.kind == Shock {
				until = min(until, s.shockMeets(f, g, l, until))
			}
		}
	}
	return until
}

// shockMeets is when a shock meets a wave of a region within the life of both, +Inf where it does not.
func (s *Solution) shockMeets(f *front, g int32, l line, until float64) float64 {
	from, until := max(l.t0, f.t0), min(until, f.end)
	if from >= until {
		return math.Inf(1)
	}
	ahead := l.at(from) - s.place(f, from)
	if math.Abs(ahead) <= closeness*(1+math.Abs(l.x0)) {
		if from > l.t0 {
			return from // the wave is at the place where the shock is born
		}
		ahead = l.speed - s.velocity(f, from)
		// Between a node and a shock that rests on it a region has no width: its waves run into the shock at once.
		tolerance := s.segments[f.seg].speedTolerance
		if g == f.up && ahead > tolerance || g == f.down && ahead < -tolerance {
			return from
		}
	}
	if f.path < 0 {
		closing := f.speed - l.speed
		if ahead*closing <= 0 {
			return math.Inf(1)
		}
		return within(from+ahead/closing, until)
	}
	return s.paths[f.path].crossing(f.x0, f.t0, l, neither, math.Copysign(1, ahead), from, until, 0)
}

func within(t, until float64) float64 {
	if t <= until {
		return t
	}
	return math.Inf(1)
}

// pass takes the wave over the node that it arrived at; false where it ends there: where the node governs, or a shock
// arrives at the node together with the wave, so that beyond it waves come the other way.
func (w *wavePath) pass() bool {
	s := w.sol
	n := &s.nodes[w.node]
	p := n.at(w.t)
	next, governs, direction := p.up, BySupply, -1.0
	if w.fromUp {
		next, governs, direction = p.down, ByDemand, 1
	}
	if p.governs != governs || next < 0 || s.waveAt(next, n.x, w.t)*direction < 0 {
		return false
	}
	w.region = next
	return true
}
