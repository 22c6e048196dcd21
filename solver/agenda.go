package solver

// event is something that is due: the region (target >= 0) is used up, or the node ^target has to be looked
// at again.
type event struct {
	time   float64
	target int32
}

// before orders events by time; ties go to nodes first and then to the lower number, so that the same input
// always takes the same course.
func (e event) before(o event) bool {
	if e.time != o.time {
		return e.time < o.time
	}
	return e.target < o.target
}

// agenda is a binary heap of events, earliest first, in which each region and each node has at most one event. It
// is written out because container/heap boxes every element: an allocation for each wave interaction.
type agenda struct {
	events []event
	// regions and nodes say where in events the event of each is, -1 for none.
	regions, nodes []int32
}

func newAgenda(nodes, regions int) agenda {
	a := agenda{events: make([]event, 0, 64), regions: make([]int32, 0, regions), nodes: make([]int32, nodes)}
	for i := range a.nodes {
		a.nodes[i] = -1
	}
	return a
}

func (a *agenda) slot(target int32) *int32 {
	if target < 0 {
		return &a.nodes[^target]
	}
	return &a.regions[target]
}

// set puts the event of a region or node at a time, wherever it was before.
func (a *agenda) set(target int32, time float64) {
	e := event{time, target}
	i := int(*a.slot(target))
	if i < 0 {
		i = len(a.events)
		a.events = append(a.events, e)
	}
	a.settle(i, e)
}

// drop takes the event of a region or node out, if it has one.
func (a *agenda) drop(target int32) {
	slot := a.slot(target)
	i := int(*slot)
	if i < 0 {
		return
	}
	*slot = -1
	end := len(a.events) - 1
	last := a.events[end]
	a.events = a.events[:end]
	if i < end {
		a.settle(i, last)
	}
}

// pop takes out the earliest event.
func (a *agenda) pop() event {
	e := a.events[0]
	a.drop(e.target)
	return e
}

// settle lets an event find its place from i on.
func (a *agenda) settle(i int, e event) {
	h := a.events
	for i > 0 {
		parent := (i - 1) / 2
		if !e.before(h[parent]) {
			break
		}
		a.put(i, h[parent])
		i = parent
	}
	for {
		child := 2*i + 1
		if child >= len(h) {
			break
		}
		if child+1 < len(h) && h[child+1].before(h[child]) {
			child++
		}
		if !h[child].before(e) {
			break
		}
		a.put(i, h[child])
		i = child
	}
	a.put(i, e)
}

func (a *agenda) put(i int, e event) {
	a.events[i] = e
	*a.slot(e.target) = int32(i)
}
