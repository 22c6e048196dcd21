package solver

import "math"

// meeting is when the bounds of a live region meet, +Inf where they do not before the horizon. Those of a profile
// meet at its focus at the latest: nothing of it is left then.
func (k *kernel) meeting(g int32) float64 {
	b := k.bounds[g]
	if b.up < 0 && b.down < 0 {
		return math.Inf(1)
	}
	return max(k.now, min(k.boundsMeet(g, b), k.regions[g].focus()))
}

func (k *kernel) boundsMeet(g int32, b bound) float64 {
	upLine, upPath := k.boundary(b.up)
	downLine, downPath := k.boundary(b.down)
	r := &k.regions[g]
	switch {
	case upPath == nil && downPath == nil:
		return k.linesMeet(r, b, upLine, downLine)
	case downPath == nil && k.fallsBehind(b.up, downLine.speed), upPath == nil && k.runsAhead(b.down, upLine.speed):
		return math.Inf(1)
	case downPath == nil:
		return upPath.crossing(upLine.x0, upLine.t0, downLine, alongIf(r, b.down, downSide), 1, k.now, k.limit(b, r), k.slack())
	case upPath == nil:
		return downPath.crossing(downLine.x0, downLine.t0, upLine, alongIf(r, b.up, upSide), -1, k.now, k.limit(b, r), k.slack())
	case r.uniform():
		return k.pathsMeet(b.up, b.down, k.limit(b, r))
	default:
		return k.labelsMeet(b.up, b.down, k.limit(b, r))
	}
}

// boundary of a region: a straight line, or a path that starts at the line's origin.
func (p *plane) boundary(id int32) (line, *path) {
	if id < 0 {
		return line{x0: p.nodes[^id].x, t0: 0}, nil
	}
	f := &p.fronts[id]
	if f.path < 0 {
		return p.line(f), nil
	}
	return p.line(f), &p.paths[f.path]
}

// alongIf says that a straight bound of a profile is one of the profile's characteristics, unless it is a node.
func alongIf(r *region, bound int32, s side) side {
	if bound < 0 || r.uniform() {
		return neither
	}
	return s
}

// limit is the time up to which the paths around a region can be followed: a little beyond the horizon, or
// when the characteristics of a profile involved meet.
func (k *kernel) limit(b bound, r *region) float64 {
	t := min(k.lookahead(), r.focus())
	if b.up >= 0 {
		t = min(t, k.regions[k.fronts[b.up].up].focus())
	}
	if b.down >= 0 {
		t = min(t, k.regions[k.fronts[b.down].down].focus())
	}
	return t
}

// fallsBehind reports whether a curved shock never gets any closer to a line of that speed ahead of it. The chord slope
// on a parabola is the mean of the wave speeds of both sides, and these lie between those of the sides' labels.
func (k *kernel) fallsBehind(id int32, speed float64) bool {
	f := &k.fronts[id]
	p := &k.paths[f.path]
	return p.oneCurve && 0.5*(k.regions[f.up].fastest(p.upWave)+k.regions[f.down].fastest(p.upWave+p.waveGap)) <= speed
}

// runsAhead reports the same for a line of that speed behind it.
func (k *kernel) runsAhead(id int32, speed float64) bool {
	f := &k.fronts[id]
	p := &k.paths[f.path]
	return p.oneCurve && 0.5*(k.regions[f.up].slowest(p.upWave)+k.regions[f.down].slowest(p.upWave+p.waveGap)) >= speed
}

// fastest of the waves that a region holds; its only one, given, where it is uniform.
func (g *region) fastest(only float64) float64 {
	if g.uniform() {
		return only
	}
	return max(g.waveSpeed(g.upLabel), g.waveSpeed(g.downLabel))
}

// slowest of the waves that a region holds; its only one, given, where it is uniform.
func (g *region) slowest(only float64) float64 {
	if g.uniform() {
		return only
	}
	return min(g.waveSpeed(g.upLabel), g.waveSpeed(g.downLabel))
}

// lookahead is the time up to which paths are followed: a little beyond the horizon.
func (k *kernel) lookahead() float64 { return k.horizon * (1 + closeness) }

// exhausts is when a shock has consumed the last density of the profile on one side of it, +Inf where it never
// does. Up to then the densities beside it lie on the relation, so that it is a true shock and consumes more.
func (k *kernel) exhausts(id int32, s side) float64 {
	f := &k.fronts[id]
	p := &k.paths[f.path]
	up, down := &k.regions[f.up], &k.regions[f.down]
	l, last, direction, focus := &p.up, up.upLabel, -1.0, up.focus()
	if s == downSide {
		l, last, direction, focus = &p.down, down.downLabel, 1, down.focus()
	}
	if l.uniform() {
		return focus
	}
	limit := min(k.lookahead(), min(up.focus(), down.focus()))
	dk := last - l.k
	edge := line{x0: f.x0 + dk*l.s, t0: f.t0, speed: l.c + l.d*dk}
	return min(focus, p.crossing(f.x0, f.t0, edge, s, direction, f.t0, limit, 0))
}

// linesMeet: straight bounds meet where they cross.
func (k *kernel) linesMeet(r *region, b bound, up, down line) float64 {
	closing := up.speed - down.speed
	from := max(up.t0, down.t0)
	gap := down.at(from) - up.at(from)
	if up.t0 == down.t0 {
		gap = down.x0 - up.x0
	}
	between := b.up >= 0 && b.down >= 0
	switch {
	case between && k.coincide(r, gap, closing):
		return k.now
	case between && !r.uniform():
		return math.Inf(1) // characteristics of one profile meet only at its focus
	case closing <= 0:
		return math.Inf(1)
	}
	return max(k.now, from+gap/closing)
}

// coincide reports whether two fronts run along one line: what is between them has no width and never gets any.
func (k *kernel) coincide(r *region, gap, closing float64) bool {
	seg := &k.segments[r.seg]
	return math.Abs(closing) <= seg.speedTolerance && gap <= closeness*(seg.end-seg.start)
}

// labelsMeet: both bounds of a profile are curved shocks. They only ever consume its characteristics, so the
// span of densities between them falls to zero exactly once. When one of them has consumed all, or at the
// profile's focus, that has happened for certain.
func (k *kernel) labelsMeet(up, down int32, limit float64) float64 {
	a, b := &k.fronts[up], &k.fronts[down]
	if k.paths[a.path].oneCurve && k.paths[b.path].oneCurve && limit == k.lookahead() {
		return k.continuedMeet(a, b, limit)
	}
	gap := func(t float64) float64 { return k.place(b, t) - k.place(a, t) }
	if gap(k.now) <= 0 {
		return k.now
	}
	consumed := min(k.exhausts(up, downSide), k.exhausts(down, upSide))
	limit = min(limit, min(k.exhausts(up, upSide), k.exhausts(down, downSide)))
	if consumed > limit && gap(limit) > 0 {
		return math.Inf(1)
	}
	return fallingRoot(gap, k.now, min(consumed, limit))
}

// continuedMeet is labelsMeet where all densities are on one curve and no profile around comes to its focus: the paths
// are those of shocks for as long as one likes, and where one of them ends before they meet, that is an event of its own.
func (k *kernel) continuedMeet(a, b *front, limit float64) float64 {
	p, q := &k.paths[a.path], &k.paths[b.path]
	gap := func(t float64) (value, slope float64) {
		x, v := p.onward(t - a.t0)
		y, w := q.onward(t - b.t0)
		return (b.x0 + y) - (a.x0 + x), w - v
	}
	now, _ := gap(k.now)
	if now <= 0 {
		return k.now
	}
	last, _ := gap(limit)
	if last > 0 {
		return math.Inf(1)
	}
	return newtonRoot(gap, k.now, limit, now, last)
}

// pathsMeet: two curved shocks with a uniform state between them, whose other sides are profiles. Each one's
// speed is monotone in time (it depends on one density that is consumed in one direction), so the speeds at
// the two ends of a span of time bound the gap within it from below. Spans in which the bound stays positive
// hold no meeting; the others are halved, earliest first.
func (k *kernel) pathsMeet(up, down int32, limit float64) float64 {
	a, b := &k.fronts[up], &k.fronts[down]
	limit = min(limit, min(k.exhausts(up, upSide), k.exhausts(down, downSide)))
	p, q := k.gapAt(a, b, k.now), k.gapAt(a, b, limit)
	if p.gap <= 0 && p.downSpeed < p.upSpeed {
		return k.now
	}
	return k.firstMeeting(a, b, p, q, 64)
}

// gapState is the distance between two fronts at a time, with their speeds.
type gapState struct {
	t, gap, upSpeed, downSpeed float64
}

func (k *kernel) gapAt(a, b *front, t float64) gapState {
	return gapState{t, k.place(b, t) - k.place(a, t), k.velocity(a, t), k.velocity(b, t)}
}

func (k *kernel) firstMeeting(a, b *front, p, q gapState, depth int) float64 {
	if math.IsNaN(p.gap) {
		return math.Inf(1) // past the end of one of the paths
	}
	h := q.t - p.t
	slowest := min(p.downSpeed, q.downSpeed) - max(p.upSpeed, q.upSpeed)
	if p.gap+h*min(0, slowest) > 0 {
		return math.Inf(1)
	}
	fastest := max(p.downSpeed, q.downSpeed) - min(p.upSpeed, q.upSpeed)
	if fastest < 0 && q.gap <= 0 {
		return fallingRoot(func(t float64) float64 { return k.place(b, t) - k.place(a, t) }, p.t, q.t)
	}
	if fastest <= 0 && q.gap > 0 {
		return math.Inf(1)
	}
	// From the right end the gap can have been smaller by at most h*fastest; both bounds cross at their lowest.
	if q.gap > 0 && slowest < 0 && fastest > 0 && q.gap*-slowest+p.gap*fastest > h*-slowest*fastest {
		return math.Inf(1)
	}
	if depth == 0 || h <= closeness*k.horizon {
		if q.gap <= 0 {
			return q.t
		}
		return math.Inf(1)
	}
	m := k.gapAt(a, b, p.t+0.5*h)
	if t := k.firstMeeting(a, b, p, m, depth-1); !math.IsInf(t, 1) {
		return t
	}
	return k.firstMeeting(a, b, m, q, depth-1)
}
