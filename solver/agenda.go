package solver

// event is something that is due: the region (target >= 0) is used up, or the node ^target has to be looked
// at again. It is out of date when the region's bounds, or the node's surroundings, have changed since.
type event struct {
	time   float64
	target int32
	stamp  uint32
}

// before orders events by time; ties go to nodes first and then to the lower number, so that the same input
// always takes the same course.
func (e event) before(o event) bool {
	if e.time != o.time {
		return e.time < o.time
	}
	return e.target < o.target
}

// agenda is a binary heap of events, earliest first. It is written out because container/heap boxes every
// element: an allocation for each wave interaction.
type agenda []event

func (a *agenda) push(e event) {
	h := append(*a, e)
	i := len(h) - 1
	for i > 0 {
		parent := (i - 1) / 2
		if !e.before(h[parent]) {
			break
		}
		h[i] = h[parent]
		i = parent
	}
	h[i] = e
	*a = h
}

func (a *agenda) pop() event {
	h := *a
	top, last := h[0], h[len(h)-1]
	h = h[:len(h)-1]
	*a = h
	if len(h) == 0 {
		return top
	}
	i := 0
	for {
		child := 2*i + 1
		if child >= len(h) {
			break
		}
		if child+1 < len(h) && h[child+1].before(h[child]) {
			child++
		}
		if !h[child].before(last) {
			break
		}
		h[i] = h[child]
		i = child
	}
	h[i] = last
	return top
}
