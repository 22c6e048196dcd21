package solver

import "math"

// wave is one elementary wave of a falling density: a fan over a curved piece of the relation or a contact
// over a straight one, from the density hi upstream to lo downstream.
type wave struct {
	piece  int
	hi, lo float64
}

// connect solves the Riemann problem between two neighbouring regions of a segment at (x, t), where their
// common count is n: it puts fronts and, between them, new regions (Lax 1957, Comm. Pure Appl. Math. 10,
// 537-566; for corners of the relation, Dafermos 1972, J. Math. Anal. Appl. 38, 33-41). A rising density makes
// one shock; a falling one makes fans on curved pieces, contacts on straight ones and a uniform state at each
// corner. ku and kd are the densities of the two regions there. It reports false where there is nothing to put:
// both sides are the same uniform state.
func (k *kernel) connect(up, down int32, ku, kd, x, t, n float64) bool {
	u, d := &k.regions[up], &k.regions[down]
	seg := &k.segments[u.seg]
	equal := math.Abs(ku-kd) <= seg.densityTolerance
	switch {
	case equal && u.uniform() && d.uniform():
		return false
	case !equal && ku < kd, equal && k.compresses(u, d, ku, kd):
		k.rise(up, down, x, t, ku, kd)
	default:
		k.fall(up, down, x, t, n, ku, kd)
	}
	return true
}

// edgeLabel is the density of the region at its edge (x, t); at the apex of a fan, the given label.
func (g *region) edgeLabel(x, t, atApex float64) float64 {
	if g.spread(t) == 0 {
		return atApex
	}
	return g.density(x, t)
}

// compresses reports whether two profiles that touch at one density run into each other there.
func (k *kernel) compresses(u, d *region, ku, kd float64) bool {
	if u.uniform() || d.uniform() {
		return false
	}
	return u.waveSpeed(ku) > d.waveSpeed(kd)+k.segments[u.seg].speedTolerance
}

// rise puts the one front of a rising density: a shock, whose path is curved where one of the sides is not uniform.
// Where one straight piece holds both states it moves as the waves on that piece do and is a contact, unless the
// lesser state is the lower corner of the piece: that one's waves are those of the piece below and run into it.
func (k *kernel) rise(up, down int32, x, t, ku, kd float64) {
	u, d := &k.regions[up], &k.regions[down]
	seg := &k.segments[u.seg]
	if piece, ok := k.commonStraight(u, d, ku, kd); ok {
		kind := Contact
		if u.uniform() && seg.diagram.pieceBelow(ku-seg.densityTolerance) != piece {
			kind = Shock
		}
		k.addFront(front{kind: kind, x0: x, t0: t, speed: seg.diagram.pieces[piece].cr, up: up, down: down, path: -1})
		return
	}
	f := front{kind: Shock, x0: x, t0: t, up: up, down: down, path: -1}
	if u.uniform() && d.uniform() {
		f.speed = seg.diagram.secant(int(u.piece), ku, int(d.piece), kd)
	} else {
		f.path = int32(len(k.paths))
		k.paths = append(k.paths, path{})
		k.paths[f.path].begin(u, d, ku, kd, t, seg)
	}
	k.addFront(f)
}

// commonStraight finds a straight piece of the relation that holds both states.
func (k *kernel) commonStraight(u, d *region, ku, kd float64) (piece int, ok bool) {
	diagram := k.segments[u.seg].diagram
	pu, pd := int(u.piece), int(d.piece)
	if u.uniform() {
		pu = diagram.pieceAbove(ku)
	}
	if d.uniform() {
		pd = diagram.pieceBelow(kd)
	}
	return pu, pu == pd && diagram.pieces[pu].d == 0
}

// pending is a front whose downstream side is not known yet.
type pending struct {
	set   bool
	kind  FrontKind
	speed float64
}

// fall puts the waves of a falling (or equal) density.
func (k *kernel) fall(up, down int32, x, t, n, ku, kd float64) {
	k.fallingWaves(up, down, ku, kd)
	seg := &k.segments[k.regions[up].seg]
	left := up
	var p pending
	if u := &k.regions[up]; !u.uniform() {
		p = pending{true, Edge, u.waveSpeed(ku)}
	}
	for _, w := range k.waves {
		piece := &seg.diagram.pieces[w.piece]
		head, tail := piece.waveSpeed(w.hi), piece.waveSpeed(w.lo)
		left, p = k.wedge(left, p, head, w.hi, x, t, n)
		if piece.d == 0 {
			p = pending{true, Contact, head}
			continue
		}
		r := fanRegion(piece, int32(w.piece), w, x, t, n, k.regions[up].seg)
		fan := k.addRegion(&r)
		if !p.set {
			p = pending{true, Edge, head}
		}
		k.addFront(front{kind: p.kind, x0: x, t0: t, speed: p.speed, up: left, down: fan, path: -1})
		left, p = fan, pending{true, Edge, tail}
	}
	if d := &k.regions[down]; !d.uniform() {
		head := d.waveSpeed(kd)
		left, p = k.wedge(left, p, head, kd, x, t, n)
		if !p.set {
			p = pending{true, Edge, head}
		}
	}
	k.addFront(front{kind: p.kind, x0: x, t0: t, speed: p.speed, up: left, down: down, path: -1})
}

// wedge opens a uniform state of density label between the pending front and a wave that starts with speed
// head, where that wave is faster.
func (k *kernel) wedge(left int32, p pending, head, label, x, t, n float64) (int32, pending) {
	seg := &k.segments[k.regions[left].seg]
	if !p.set || head-p.speed <= seg.speedTolerance {
		return left, p
	}
	r := uniformRegion(seg.diagram, label, x, t, n, k.regions[left].seg)
	mid := k.addRegion(&r)
	k.addFront(front{kind: p.kind, x0: x, t0: t, speed: p.speed, up: left, down: mid, path: -1})
	return mid, pending{}
}

// fallingWaves lists in k.waves the elementary waves from ku down to kd. A profile on one of the sides has
// its own piece, which matters where its label is at a corner.
func (k *kernel) fallingWaves(up, down int32, ku, kd float64) {
	u, d := &k.regions[up], &k.regions[down]
	seg := &k.segments[u.seg]
	first, last := seg.diagram.pieceBelow(ku), seg.diagram.pieceAbove(kd)
	if !u.uniform() {
		first = int(u.piece)
	}
	if !d.uniform() {
		last = int(d.piece)
	}
	k.waves = k.waves[:0]
	for i := first; i >= last && i >= 0; i-- {
		p := &seg.diagram.pieces[i]
		w := wave{piece: i, hi: min(ku, p.hi), lo: max(kd, p.lo)}
		if w.hi-w.lo > seg.densityTolerance {
			k.waves = append(k.waves, w)
		}
	}
}

// uniformRegion is the state of density label, as seen from (x, t) where the count is n.
func uniformRegion(d *diagram, label, x, t, n float64, seg int32) region {
	piece := d.pieceBelow(label)
	return region{
		x0: x, t0: t, k: label, s: math.Inf(1), r: d.pieces[piece].flow(label), n: n,
		upLabel: label, downLabel: label, seg: seg, piece: int32(piece),
	}
}

// fanRegion is a centred fan over the densities of w. Its reference is the characteristic of least speed in
// size, which for a fan at a node stays at the node.
func fanRegion(p *piece, index int32, w wave, x, t, n float64, seg int32) region {
	k := w.hi
	if math.Abs(p.waveSpeed(w.lo)) < math.Abs(p.waveSpeed(w.hi)) {
		k = w.lo
	}
	c := p.waveSpeed(k)
	return region{
		x0: x, t0: t, k: k, c: c, s: 0, d: p.d, r: p.flow(k) - k*c, n: n,
		upLabel: w.hi, downLabel: w.lo, seg: seg, piece: index,
	}
}
