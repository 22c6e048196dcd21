package solver

import "math"

// walker is a vehicle on its way.
type walker struct {
	sol    *Solution
	x, t   float64
	region int32
	left   bool
	// settled is when all is over that happened at the time at which the region was found: its bounds count from then.
	settled float64
}

// step takes the vehicle to the end of the region that it is in.
func (w *walker) step() leg {
	s := w.sol
	l := s.newLeg(w.region, w.x, w.t)
	died := min(s.bounds[w.region].died, s.horizon)
	for {
		limit, until := s.limitAt(w.region, max(w.t, w.settled))
		until = min(until, died)
		t := s.crossingTime(&l, limit, w.t, until)
		if !math.IsInf(t, 1) {
			w.cross(limit, t)
			break
		}
		w.t = max(w.t, until)
		if w.t >= died {
			w.x = l.place(w.t)
			w.relocate()
			break
		}
	}
	l.end = w.t
	return l
}

// relocate finds the region of a vehicle that is at the horizon, or rode along the bound of a region to the
// region's end. It looks a hair later, when whatever follows there has begun; should that be the same region, the
// vehicle has to wait for that hair, so that every step leads on.
func (w *walker) relocate() {
	s := w.sol
	w.settled = min(s.horizon, w.t+closeness*s.horizon)
	was := w.region
	_, w.region, _ = s.locate(w.x, w.settled)
	if w.region == was {
		w.t = w.settled
	}
}

// cross takes the vehicle over a front or node.
func (w *walker) cross(limit int32, t float64) {
	s := w.sol
	w.t = t
	if limit >= 0 {
		f := &s.fronts[limit]
		w.x, w.region = s.place(f, t), f.down
		return
	}
	n := &s.nodes[^limit]
	w.x, w.region = n.x, n.at(t).down
	w.left = w.region < 0
}

func (s *Solution) newLeg(g int32, x, t float64) leg {
	r := &s.regions[g]
	l := leg{x: x, t: t, region: g}
	// At the apex of a fan a vehicle is faster than all its waves and at once at the foremost one.
	label := r.edgeLabel(x, t, r.downLabel)
	if r.uniform() || label == 0 || r.spread(t) == 0 {
		l.speed = s.stateOf(r.seg, int(r.piece), label).Speed
		l.form = local{k: label, s: math.Inf(1), r: label * l.speed}
		return l
	}
	l.form = r.from(x, t)
	// On a straight branch through the origin all vehicles ride along with the waves.
	l.curved = l.form.r > s.segments[r.seg].flowTolerance
	l.speed = l.form.c
	return l
}

// limitAt is what bounds the region downstream at time t, and until when it does. A front that has ended by
// then has given way to the next one.
func (s *Solution) limitAt(g int32, t float64) (bound int32, until float64) {
	until = math.Inf(1)
	limits := s.limits
	i := s.bounds[g].limits
	for limits[i].since > t && limits[i].before >= 0 {
		until = limits[i].since
		i = limits[i].before
	}
	return limits[i].bound, until
}

// crossingTime is when the vehicle on the leg crosses the bound, between from and until; +Inf where it does not.
func (s *Solution) crossingTime(l *leg, bound int32, from, until float64) float64 {
	target, p := s.boundary(bound)
	if bound >= 0 && s.isAt(l, bound, from) {
		return from
	}
	switch {
	case p == nil && bound < 0:
		target.t0 = l.t
		return l.meets(target, from, until, closeness*s.horizon)
	case p == nil:
		return l.meets(target, from, until, closeness*s.horizon)
	case !l.curved:
		own := line{l.x, l.t, l.speed}
		along := neither
		if l.form.k == 0 {
			along = upSide
		}
		return p.crossing(target.x0, target.t0, own, along, -1, from, until, 0)
	}
	f := &s.fronts[bound]
	ahead := func(t float64) float64 { return -l.form.count(s.place(f, t)-l.x, t-l.t) }
	if ahead(until) > 0 {
		return math.Inf(1)
	}
	return fallingRoot(ahead, from, until)
}

// isAt reports whether the vehicle is at the front already and faster than it: both started at one point.
func (s *Solution) isAt(l *leg, bound int32, t float64) bool {
	f := &s.fronts[bound]
	seg := &s.segments[f.seg]
	if s.place(f, t)-l.place(t) > closeness*(seg.end-seg.start) {
		return false
	}
	return l.velocity(t) > s.velocity(f, t)+seg.speedTolerance
}

// velocity of the vehicle at time t.
func (l *leg) velocity(t float64) float64 {
	if !l.curved {
		return l.speed
	}
	T := t - l.t
	k := l.form.density(l.place(t)-l.x, T)
	if k <= 0 {
		return l.form.c
	}
	c := l.form.c + l.form.d*(k-l.form.k)
	return c + l.form.r/k - 0.5*l.form.d*(k-l.form.k)*(k+l.form.k)/k
}

// meets is when the leg reaches a straight line downstream of it: when as many vehicles have passed along the
// line as are ahead of this one.
func (l *leg) meets(o line, from, until, slack float64) float64 {
	e := o.at(l.t) - l.x
	var c cubic
	if !l.curved {
		c[0], c[1] = e, o.speed-l.speed
	} else {
		c[0] = l.form.k * e
		c[1] = o.speed*l.form.k - l.form.flow()
		bulge := l.form.bulge(e, o.speed)
		c = combineOne(&c, &bulge, 1)
	}
	begin := from - l.t
	if begin > 0 {
		begin = max(0, begin-slack) // what was found to be still ahead at from may round to just before it
	}
	T := c.descent(begin, until-l.t)
	if math.IsInf(T, 1) {
		return T
	}
	return max(from, l.t+T)
}
