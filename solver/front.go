package solver

import "math"

// FrontKind is the nature of a front.
type FrontKind int8

const (
	// Shock means: the density rises across it downstream, and waves of both sides run into it.
	Shock FrontKind = iota
	// Contact means: the density jumps, and the front moves with the wave speed of a straight piece of the
	// relation that holds both densities.
	Contact
	// Edge means: the density is continuous and only its gradient jumps: the edge of a fan or of a profile.
	Edge
)

// String returns the kind in lower case.
func (k FrontKind) String() string { return [...]string{"shock", "contact", "edge"}[k] }

// FrontEnd says how a front ends.
type FrontEnd int8

const (
	// AtHorizon means: it still exists at the end of the solved time.
	AtHorizon FrontEnd = iota
	// Merged means: it met another front.
	Merged
	// AtNode means: it reached a node.
	AtNode
)

// String returns the end in lower case.
func (e FrontEnd) String() string { return [...]string{"horizon", "merged", "node"}[e] }

// front is a boundary between two regions of one segment.
type front struct {
	x0, t0 float64 // birth
	speed  float64 // of a straight front
	end    float64 // +Inf while it lives
	up     int32   // region upstream of it
	first  int32   // region upstream of it at birth, which an equal one may have taken over since
	down   int32   // region downstream of it
	path   int32   // index of the curved path; -1 for a straight front
	into   int32   // first front born where it ended; -1 for none
	seg    int32
	kind   FrontKind
	ends   FrontEnd
}

// path is a curved shock path: the places where the counts of its two sides are equal (they are the two
// candidates for the least count, and upstream of the shock the upstream one is less). In the frame of a
// characteristic of one side, Y = X - frame*T, the difference of the counts is a quadratic in Y,
//
//	A Y² + B Y + C = 0,  A = (mD-mU)/2,  B = (kD-kU) - T mD c',  C = T (dq' + T mD c'²/2),
//
// with the gradients m of the sides at that time, the jump dq' = qU' - qD' of flow and the wave speed c' of
// the downstream side in the frame. The count difference rises in place at an admissible shock (its derivative
// is kD-kU > 0), which picks the root. Both facts are the Lax-Hopf/Newell least-count principle
// (Newell 1993, Transp. Res. B 27, 281-287) written for linear profiles.
type path struct {
	up, down        local
	frame, relSpeed float64 // speed of the frame, and c' of the downstream side in it
	frameJumpFlow   float64 // qU - qD at birth, in the frame
	// until is the time after birth at which the formula's shock would have no jump left. One of the sides is
	// used up before; past it the formula follows a root that is no shock.
	until float64
	// near [m] is within which the shock is taken to have met a line where it vanishes.
	near               float64
	upPiece, downPiece int32
	// oneCurve means that the states of both sides are on one parabola. Continued beyond what its sides hold, the
	// shock then stays one, of the continued parabola, and its jump never vanishes.
	oneCurve bool
	// upWave is the wave speed upstream at birth, waveGap by how much that downstream is greater: it is negative.
	upWave, waveGap float64
	// upRate and downRate are the rates d/s at which the spreads of the sides grow by the spread at birth; 0 for a
	// uniform side.
	upRate, downRate float64
}

// begin makes the path that of a shock born at time t between two regions with densities ku and kd there. A jump of
// density below the segment's tolerance is taken as none: the shock grows from nothing.
func (p *path) begin(u, d *region, ku, kd, t float64, seg *segment) {
	p.up, p.down = u.at(ku, t), d.at(kd, t)
	p.upPiece, p.downPiece = u.piece, d.piece
	if math.Abs(p.down.k-p.up.k) <= seg.densityTolerance {
		p.down.k = p.up.k
	}
	p.near = closeness * (math.Abs(seg.start) + math.Abs(seg.end))
	waves := &seg.diagram.pieces[u.piece]
	p.upWave, p.waveGap = waves.waveSpeed(p.up.k), waves.d*(p.down.k-p.up.k)
	p.oneCurve = seg.diagram.oneCurve(int(u.piece), int(d.piece))
	if p.oneCurve {
		p.continueCurve(seg)
	} else {
		p.followCounts(seg)
	}
}

// continueCurve completes the path of a shock on one curve. One that rests but for a rounding rests.
func (p *path) continueCurve(seg *segment) {
	p.until = math.Inf(1)
	if !p.up.uniform() {
		p.upRate = p.up.d / p.up.s
	}
	if !p.down.uniform() {
		p.downRate = p.down.d / p.down.s
	}
	rests := p.upWave >= -seg.speedTolerance && p.upWave+p.waveGap <= seg.speedTolerance
	if rests && math.Abs(p.birthSpeed()*(p.down.k-p.up.k)) <= seg.flowTolerance {
		p.upWave = -0.5 * p.waveGap
	}
}

// followCounts completes the path of a shock between two different curves. In the frame, which is the wave speed of
// one side, the jump of flow is how far the other side lies below that one's tangent: a sum of terms of one sign, right
// to the last digit also where the densities nearly agree. A jump of flow at rest below the segment's tolerance is taken
// as none where the waves of both sides come to a shock at rest.
func (p *path) followCounts(seg *segment) {
	p.frame = p.down.c
	if !p.up.uniform() {
		p.frame = p.up.c
	}
	if !p.down.uniform() {
		p.relSpeed = p.down.c - p.frame
	}
	d := seg.diagram
	u, w := int(p.upPiece), int(p.downPiece)
	if p.up.uniform() {
		p.frameJumpFlow = -d.tangentGap(w, p.down.k, u, p.up.k)
	} else {
		p.frameJumpFlow = d.tangentGap(u, p.up.k, w, p.down.k)
	}
	rests := d.pieces[u].waveSpeed(p.up.k) >= -seg.speedTolerance && d.pieces[w].waveSpeed(p.down.k) <= seg.speedTolerance
	if rests && math.Abs(p.jumpFlow()) <= seg.flowTolerance {
		p.frameJumpFlow = -p.frame * (p.up.k - p.down.k)
	}
	p.until = p.lastsUntil()
}

// jumpFlow is the jump qU - qD of flow at birth, at rest.
func (p *path) jumpFlow() float64 { return p.frameJumpFlow + p.frame*(p.up.k-p.down.k) }

// lastsUntil is the first zero of the square of the jump, which is linear in time with one uniform side and
// quadratic with none, once multiplied by the spreads of the two sides.
func (p *path) lastsUntil() float64 {
	jump := p.down.k - p.up.k
	if jump == 0 {
		return math.Inf(1)
	}
	square := jump * jump // at birth
	switch up, down := p.up.uniform(), p.down.uniform(); {
	case up:
		return positive(square * p.down.s / (2*p.frameJumpFlow - square*p.down.d))
	case down:
		return positive(-square * p.up.s / (2*p.frameJumpFlow + square*p.up.d))
	}
	return firstZero(
		square*p.up.s*p.down.s,
		square*(p.up.s*p.down.d+p.up.d*p.down.s)-2*(jump*p.relSpeed*p.up.s+p.frameJumpFlow*(p.up.s-p.down.s)),
		square*p.up.d*p.down.d-2*(jump*p.relSpeed*p.up.d+p.frameJumpFlow*(p.up.d-p.down.d))+p.relSpeed*p.relSpeed,
	)
}

// firstZero is the first positive root of c + b t + a t². A double root that roundings make complex is one: both
// sides of the shock are used up there at once.
func firstZero(c, b, a float64) float64 {
	disc := b*b - 4*a*c
	if disc < -closeness*b*b {
		return math.Inf(1)
	}
	q := -0.5 * (b + math.Copysign(math.Sqrt(max(0, disc)), b))
	return min(positive(q/a), positive(c/q))
}

// positive is t, or +Inf where t is not a time after 0.
func positive(t float64) float64 {
	if t > 0 {
		return t
	}
	return math.Inf(1)
}

// offset is the distance from the place of birth a time T after birth, up to p.until.
func (p *path) offset(T float64) float64 {
	if T <= 0 {
		return 0
	}
	if p.oneCurve {
		return T * (p.upWave + p.waveGap*p.weight(1+p.upRate*T, 1+p.downRate*T))
	}
	mU, mD := p.up.gradient(T), p.down.gradient(T)
	jump := p.down.k - p.up.k
	dm := mD - mU
	b := jump - T*mD*p.relSpeed
	c := T * (p.frameJumpFlow + 0.5*T*mD*p.relSpeed*p.relSpeed)
	// B² - 4AC with the terms that cancel taken out by hand; its root is the jump of density at T.
	square := jump*jump - 2*T*(jump*mD*p.relSpeed+dm*p.frameJumpFlow) + mU*mD*p.relSpeed*p.relSpeed*T*T
	root := 0.0
	if T < p.until {
		root = math.Sqrt(max(0, square))
	}
	if b > 0 {
		return p.frame*T - 2*c/(b+root)
	}
	return p.frame*T + (root-b)/dm
}

// weight says where a shock on one curve lies between the two characteristics that it was born of, 0 for the upstream
// one and 1 for the downstream one, when the spreads of its sides have grown g and h times. With d (kD-kU) for c' the
// quadratic of path loses all its differences of like terms:
//
//	X/T = cU + (cD-cU) sqrt(g)/(sqrt(g)+sqrt(h)),
//
// which stays right to the last digit however long the shock lives and however weak it becomes.
func (p *path) weight(g, h float64) float64 {
	if g == h {
		return 0.5 // also where both profiles are at their focus
	}
	return 1 / (1 + math.Sqrt(max(0, h)/max(0, g)))
}

// onward is the offset and the speed of a shock on one curve a time T after birth. The chord slope of a parabola is the
// mean of the wave speeds at its ends.
func (p *path) onward(T float64) (offset, speed float64) {
	T = max(0, T)
	g, h := 1+p.upRate*T, 1+p.downRate*T
	w := p.weight(g, h)
	return T * (p.upWave + p.waveGap*w), p.upWave + 0.5*p.waveGap*(1+w*(1-1/g)-(1-w)*(1-1/h))
}

// line is a straight path through (x0, t0).
type line struct {
	x0, t0, speed float64
}

func (l line) at(t float64) float64 { return l.x0 + l.speed*(t-l.t0) }

func (p *plane) line(f *front) line { return line{f.x0, f.t0, f.speed} }

// place of a front at time t.
func (p *plane) place(f *front, t float64) float64 {
	if f.path < 0 {
		return f.x0 + f.speed*(t-f.t0)
	}
	return f.x0 + p.paths[f.path].offset(t-f.t0)
}

// velocity of a front at time t, from the densities on its two sides.
func (p *plane) velocity(f *front, t float64) float64 {
	if f.path < 0 {
		return f.speed
	}
	shock := &p.paths[f.path]
	T := t - f.t0
	if shock.oneCurve {
		_, speed := shock.onward(T)
		return speed
	}
	X := shock.offset(T)
	d := p.segments[f.seg].diagram
	return d.secant(int(shock.upPiece), shock.up.density(X, T), int(shock.downPiece), shock.down.density(X, T))
}
