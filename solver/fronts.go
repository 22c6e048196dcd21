package solver

// Front is a shock, contact or edge of the solution, on one segment, from its birth to its end.
type Front struct {
	// ID counts from 0 in order of birth.
	ID int
	// Kind of the front.
	Kind FrontKind
	// Segment is the index of the scenario's segment that it is on.
	Segment int
	// Birth and End of its path.
	Birth, End Point
	// EndsBy says what ended it.
	EndsBy FrontEnd
	// Into is, for a front that merged, the ID of the most upstream front born of the meeting; -1 where there is none:
	// the two sides had become equal.
	Into int
	// Straight is true where the path is a straight line.
	Straight bool

	sol *Solution
}

// Fronts lists all fronts in order of birth.
func (s *Solution) Fronts() []Front {
	out := make([]Front, len(s.fronts))
	for i := range s.fronts {
		out[i] = s.front(int32(i))
	}
	return out
}

func (s *Solution) front(id int32) Front {
	f := &s.fronts[id]
	end := min(f.end, s.horizon)
	return Front{
		ID: int(id), Kind: f.kind, Segment: s.roads[f.seg],
		Birth: Point{f.x0, f.t0}, End: Point{s.place(f, end), end},
		EndsBy: f.ends, Into: int(f.into), Straight: f.path < 0, sol: s,
	}
}

func (f Front) inner() *front { return &f.sol.fronts[f.ID] }

// Position returns the place of the front at time t, a time of its life [m]; other times are taken as the
// nearest such time.
func (f Front) Position(t float64) float64 { return f.sol.place(f.inner(), f.within(t)) }

// Speed returns the speed of the front at time t, a time of its life [m/s]: the chord slope between the states
// on its two sides.
func (f Front) Speed(t float64) float64 { return f.sol.velocity(f.inner(), f.within(t)) }

func (f Front) within(t float64) float64 {
	return max(f.Birth.Time, min(f.End.Time, t))
}

// Sides returns the states just upstream and just downstream of the front at time t, a time of its life.
func (f Front) Sides(t float64) (up, down State) {
	t = f.within(t)
	in := f.inner()
	if in.path < 0 {
		return f.straightSide(in.up, t, true), f.straightSide(in.down, t, false)
	}
	p := &f.sol.paths[in.path]
	T := t - in.t0
	X := p.offset(T)
	return f.sol.stateOf(in.seg, int(p.upPiece), p.up.density(X, T)), f.sol.stateOf(in.seg, int(p.downPiece), p.down.density(X, T))
}

// straightSide: a straight front is a characteristic of every profile beside it, so the density there never
// changes. On a curved piece it follows from the front's speed, which loses no digits near the apex of a fan.
func (f Front) straightSide(g int32, t float64, upstream bool) State {
	s := f.sol
	r := &s.regions[g]
	x := s.place(f.inner(), t)
	if r.d != 0 {
		return s.stateOf(r.seg, int(r.piece), r.k+(f.inner().speed-r.c)/r.d)
	}
	label := r.upLabel
	if upstream {
		label = r.downLabel
	}
	return s.stateOf(r.seg, int(r.piece), r.edgeLabel(x, t, label))
}

// Points returns points of the path, from birth to end, such that straight lines between them stay within
// tolerance [m] of it.
func (f Front) Points(tolerance float64) []Point {
	points := []Point{f.Birth}
	if f.Straight {
		return append(points, f.End)
	}
	return appendArc(points, f.Position, f.Birth.Time, f.End.Time, tolerance)
}

// Law is the exact path of a front. A straight front is at Birth.Place + Speed*(t - Birth.Time). A curved one
// is where the counts of its two sides, continued beyond the front, are equal: with X and T the distance and
// time from the birth,
//
//	Up.Count(X, T) = Down.Count(X, T),
//
// a quadratic in X at each T, of whose roots the one is meant at which the difference rises with X.
type Law struct {
	// Straight says which of the two it is.
	Straight bool
	// Speed of a straight front [m/s].
	Speed float64
	// Up and Down are the sides of a curved front.
	Up, Down ProfileLaw
}

// ProfileLaw is the traffic on one side of a front as seen from the front's birth. With X and T the distance
// and time from there and xi = X - WaveSpeed*T:
//
//	density = Density + xi/(Spread + Curvature*T)
//	count   = Passing*T - Density*xi - xi²/(2 (Spread + Curvature*T))
//
// A uniform state has an infinite Spread.
type ProfileLaw struct {
	Density   float64 // at the birth [veh/m]
	WaveSpeed float64 // of that density [m/s]
	Spread    float64 // inverse of the density gradient at the birth [m²/veh]
	Curvature float64 // d²q/dk² of the relation there, zero or less [m²/(veh s)]
	Passing   float64 // rate at which vehicles pass the wave of that density [veh/s]
}

// Count of vehicles a distance X [m] and a time T [s] from the birth, less that at the birth.
func (p ProfileLaw) Count(X, T float64) float64 {
	l := local{k: p.Density, c: p.WaveSpeed, s: p.Spread, d: p.Curvature, r: p.Passing}
	return l.count(X, T)
}

// Law returns the exact path.
func (f Front) Law() Law {
	in := f.inner()
	if in.path < 0 {
		return Law{Straight: true, Speed: in.speed}
	}
	p := &f.sol.paths[in.path]
	return Law{Up: p.up.law(), Down: p.down.law()}
}

func (l *local) law() ProfileLaw {
	return ProfileLaw{Density: l.k, WaveSpeed: l.c, Spread: l.s, Curvature: l.d, Passing: l.r}
}
