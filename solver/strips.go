package solver

import (
	"math"
	"sort"
)

// strip is a congested stretch of one segment over time: from its tail, upstream, to its head. Several strips
// make the queue of a node.
type strip struct {
	segment int32
	owner   int32 // node that the queue belongs to, -1 while not known
	born    float64
	ended   float64 // +Inf where it still stands at the horizon
	merged  int32   // strip that it ran into, -1 for none
	tails   []mark
	heads   []mark
}

// mark is an end of a strip from a time on: a front, or a node as ^index.
type mark struct {
	since float64
	bound int32
}

// stripSet is all strips of a solution, found by going through its events in order.
type stripSet struct {
	sol    *Solution
	list   []strip
	of     []int32 // strip of each region, -1 where it is not congested
	byNode [][]int32
}

func newStripSet(s *Solution) *stripSet {
	set := &stripSet{sol: s, of: make([]int32, len(s.regions)), byNode: make([][]int32, len(s.nodes))}
	for i := range set.of {
		set.of[i] = -1
	}
	next := make([]int, len(s.nodes)) // stretch of each node's history to take next
	i := 0
	for i < len(s.steps) {
		now := s.steps[i].time
		set.nodesUntil(math.Nextafter(now, -1), next)
		for ; i < len(s.steps) && s.steps[i].time == now; i++ {
			set.row(&s.steps[i])
		}
		set.nodesUntil(now, next)
	}
	set.nodesUntil(s.horizon, next)
	set.finish()
	return set
}

func (set *stripSet) congested(g int32) bool {
	r := &set.sol.regions[g]
	return int(r.piece) >= set.sol.segments[r.seg].diagram.congested
}

// row follows the strips through one event: the regions from its upstream to its downstream side, and the
// fronts between them.
func (set *stripSet) row(e *step) {
	fronts := set.sol.fronts[e.firstFront:e.lastFront]
	if len(fronts) == 0 {
		set.joinRow(e)
		return
	}
	set.enter(fronts[0].first, e)
	for i := range fronts {
		f := &fronts[i]
		id := e.firstFront + int32(i)
		before, after := set.congested(f.first), set.congested(f.down)
		switch {
		case before && after:
			set.unite(f.first, f.down, e)
		case after:
			set.enter(f.down, e)
			set.at(f.down).mark(&set.at(f.down).tails, e.time, id)
		case before:
			set.at(f.first).mark(&set.at(f.first).heads, e.time, id)
		}
	}
}

// joinRow is an event without fronts: two equal states became one, or a segment starts as one region.
func (set *stripSet) joinRow(e *step) {
	switch {
	case e.up >= 0 && e.down >= 0 && set.congested(e.up):
		set.unite(e.up, e.down, e)
	case e.up < 0 && e.down < 0:
		set.enter(set.sol.nodes[^e.up].history[0].down, e)
	}
}

// at is the strip of a congested region, that which others have run into.
func (set *stripSet) at(g int32) *strip { return &set.list[set.root(g)] }

func (set *stripSet) root(g int32) int32 {
	i := set.of[g]
	for set.list[i].merged >= 0 {
		i = set.list[i].merged
	}
	set.of[g] = i
	return i
}

// enter gives a congested region that has none a strip of its own.
func (set *stripSet) enter(g int32, e *step) {
	if !set.congested(g) || set.of[g] >= 0 {
		return
	}
	set.of[g] = int32(len(set.list))
	set.list = append(set.list, strip{segment: set.sol.regions[g].seg, owner: -1, born: e.time, ended: math.Inf(1), merged: -1})
}

// unite makes two congested neighbours one strip. Where both had strips, the upstream one ends: its vehicles
// are from now on held by what holds the downstream one.
func (set *stripSet) unite(up, down int32, e *step) {
	switch {
	case set.of[up] < 0 && set.of[down] < 0:
		set.enter(up, e)
		set.of[down] = set.of[up]
	case set.of[up] < 0:
		set.of[up] = set.root(down)
	case set.of[down] < 0:
		set.of[down] = set.root(up)
	case set.root(up) != set.root(down):
		a, b := set.root(up), set.root(down)
		set.list[a].ended, set.list[a].merged = e.time, b
		if tail := set.list[a].tails; len(tail) > 0 {
			set.list[b].mark(&set.list[b].tails, e.time, tail[len(tail)-1].bound)
		}
	}
}

func (p *strip) mark(marks *[]mark, since float64, bound int32) {
	if n := len(*marks); n > 0 && (*marks)[n-1].since == since {
		(*marks)[n-1].bound = bound
		return
	}
	*marks = append(*marks, mark{since, bound})
}

// nodesUntil takes in what stands at the nodes up to a time, from downstream: a queue that reaches up to a node
// from downstream and is what limits it goes on upstream of it.
func (set *stripSet) nodesUntil(now float64, next []int) {
	for i := len(next) - 1; i >= 0; i-- {
		n := &set.sol.nodes[i]
		for next[i] < len(n.history) && n.history[next[i]].from <= now {
			set.passage(int32(i), &n.history[next[i]])
			next[i]++
		}
	}
}

func (set *stripSet) passage(node int32, p *passage) {
	if p.down >= 0 && set.congested(p.down) && set.of[p.down] >= 0 {
		s := set.at(p.down)
		s.mark(&s.tails, p.from, ^node)
	}
	if p.up < 0 || !set.congested(p.up) || set.of[p.up] < 0 {
		return
	}
	s := set.at(p.up)
	s.mark(&s.heads, p.from, ^node)
	if s.owner >= 0 {
		return
	}
	s.owner = node
	if p.governs == BySupply && p.down >= 0 && set.congested(p.down) && set.of[p.down] >= 0 {
		s.owner = set.at(p.down).own()
	}
}

// own returns the node that the strip belongs to. One that never stood at a node belongs to that at the downstream
// end of its segment.
func (p *strip) own() int32 {
	if p.owner < 0 {
		p.owner = p.segment + 1
	}
	return p.owner
}

// finish finds the ends of the strips and lists them by node, in order of birth.
func (set *stripSet) finish() {
	last := make([]float64, len(set.list))
	for g := range set.of {
		if set.of[g] >= 0 {
			i := set.root(int32(g))
			last[i] = max(last[i], set.sol.bounds[g].died)
		}
	}
	for i := range set.list {
		s := &set.list[i]
		if s.merged < 0 {
			s.ended = last[i]
		}
		// An end that no event ever named is the segment's.
		if len(s.tails) == 0 {
			s.mark(&s.tails, s.born, ^s.segment)
		}
		if len(s.heads) == 0 {
			s.mark(&s.heads, s.born, ^(s.segment + 1))
		}
		set.byNode[s.own()] = append(set.byNode[s.own()], int32(i))
	}
	for _, ids := range set.byNode {
		sort.SliceStable(ids, func(i, j int) bool { return set.list[ids[i]].born < set.list[ids[j]].born })
	}
}

// end of a strip at time t: the place, and the count there.
func (set *stripSet) end(marks []mark, t float64, upstream bool) (place, count float64) {
	i := sort.Search(len(marks), func(i int) bool { return marks[i].since > t }) - 1
	bound := marks[max(i, 0)].bound
	sol := set.sol
	if bound < 0 {
		n := &sol.nodes[^bound]
		return n.x, sol.regions[n.side(n.at(t))].count(n.x, t)
	}
	f := &sol.fronts[bound]
	t = max(f.t0, min(f.end, t))
	place = sol.place(f, t)
	g := f.down
	if !upstream {
		g = f.up
	}
	return place, sol.regions[g].count(place, t)
}
