package solver

// usedUp takes out a region whose bounds have met, with all neighbours that are used up at the same time and
// place, and solves what is then between their outer neighbours.
func (k *kernel) usedUp(g int32) {
	until := k.simultaneous()
	first, last := g, g
	for up := k.bounds[first].up; up >= 0; up = k.bounds[first].up {
		next := k.fronts[up].up
		if k.bounds[next].due > until {
			break
		}
		first = next
	}
	for down := k.bounds[last].down; down >= 0; down = k.bounds[last].down {
		next := k.fronts[down].down
		if k.bounds[next].due > until {
			break
		}
		last = next
	}
	up, down := k.bounds[first].up, k.bounds[last].down
	switch {
	case up < 0:
		k.visit(^up)
	case down < 0:
		k.visit(^down)
	default:
		k.merge(first, last)
	}
}

// merge solves what meets where the regions from first to last are used up, and ends them.
func (k *kernel) merge(first, last int32) {
	a, b := k.bounds[first].up, k.bounds[last].down
	x := k.meetingPlace(a, b)
	up, down := k.fronts[a].up, k.fronts[b].down
	born := int32(len(k.fronts))
	n := k.regions[up].count(x, k.now)
	if k.connect(up, down, k.labelBeside(a, up, x), k.labelBeside(b, down, x), x, k.now, n) {
		k.retire(first, last, Merged, born)
	} else {
		k.retire(first, last, Merged, -1)
		k.absorb(up, down)
	}
	k.record(up, down, born)
	k.reschedule(up)
}

// labelBeside is the density of a region beside one of its fronts, which is at x now. A straight front is a
// characteristic of a profile beside it; on a curved piece its speed tells the density to the last digit, where
// the place would lose many on a steep profile.
func (k *kernel) labelBeside(front, g int32, x float64) float64 {
	r, f := &k.regions[g], &k.fronts[front]
	if f.path < 0 && r.d != 0 {
		return r.k + (f.speed-r.c)/r.d
	}
	return r.density(x, k.now)
}

// meetingPlace of two fronts now: that of a straight one where there is one, being the more exact.
func (k *kernel) meetingPlace(a, b int32) float64 {
	fa, fb := &k.fronts[a], &k.fronts[b]
	if fa.path >= 0 && fb.path < 0 {
		return k.place(fb, k.now)
	}
	return k.place(fa, k.now)
}

// retire ends the regions from first to last and all fronts that bound them.
func (k *kernel) retire(first, last int32, ends FrontEnd, into int32) {
	k.endFront(k.bounds[first].up, ends, into)
	for g := first; ; g = k.fronts[k.bounds[g].down].down {
		b := &k.bounds[g]
		b.died = k.now
		k.agenda.drop(g)
		k.endFront(b.down, ends, into)
		if g == last {
			return
		}
	}
}

func (k *kernel) endFront(id int32, ends FrontEnd, into int32) {
	if id < 0 {
		return
	}
	f := &k.fronts[id]
	f.end, f.ends, f.into = k.now, ends, into
}

// absorb makes up and the equal uniform region down one: up takes over the downstream bound.
func (k *kernel) absorb(up, down int32) {
	b := &k.bounds[down]
	b.died = k.now
	k.agenda.drop(down)
	k.boundDown(up, b.down)
	if b.down >= 0 {
		k.fronts[b.down].up = up
		return
	}
	n := &k.nodes[^b.down]
	n.up = up
	n.note(k.now)
}

// record notes the fronts born between two regions since born; a node stands for a region as ^index.
func (k *kernel) record(up, down, born int32) {
	k.steps = append(k.steps, step{time: k.now, up: up, down: down, firstFront: born, lastFront: int32(len(k.fronts))})
}

// reschedule puts the regions from first on downstream that are new or have new bounds on the agenda: up to
// and including the first that is neither.
func (k *kernel) reschedule(first int32) {
	for g := first; ; {
		k.schedule(g)
		down := k.bounds[g].down
		if down < 0 || k.fronts[down].t0 < k.now {
			return
		}
		g = k.fronts[down].down
	}
}

func (k *kernel) schedule(g int32) {
	b := &k.bounds[g]
	b.due = k.meeting(g)
	if b.due <= k.horizon {
		k.agenda.set(g, b.due)
	} else {
		k.agenda.drop(g)
	}
}
