package solver

import (
	"math"
	"sort"
)

// segmentIndex finds the fronts that exist on a segment at a time. Time is cut into spans in each of which
// about as many fronts are born as stand at its beginning, so that all spans together hold few copies of
// each front and none holds many more fronts than exist at once.
type segmentIndex struct {
	starts []float64 // of the spans
	first  []int32   // of each span in members; one more at the end
	fronts []int32   // members of the spans
}

// minSpan is the least number of births that end a span.
const minSpan = 8

func newIndex(p *plane) []segmentIndex {
	index := make([]segmentIndex, len(p.segments))
	open := make([]openSpan, len(p.segments))
	spans := 1 + len(p.fronts)/(minSpan*len(open)) // of a segment, about
	for i := range open {
		index[i].starts = append(make([]float64, 0, spans), 0)
		index[i].first = append(make([]int32, 0, spans+1), 0)
		index[i].fronts = make([]int32, 0, 2*minSpan*spans)
		open[i].members = make([]int32, 0, 2*minSpan)
	}
	for id := range p.fronts {
		f := &p.fronts[id]
		open[f.seg].add(p, &index[f.seg], int32(id))
	}
	for i := range open {
		open[i].close(&index[i])
	}
	return index
}

// openSpan is the span being filled.
type openSpan struct {
	members []int32
	carried int // members that stood at its beginning
}

func (o *openSpan) add(p *plane, index *segmentIndex, id int32) {
	born := p.fronts[id].t0
	if len(o.members)-o.carried >= max(minSpan, o.carried) && born > index.starts[len(index.starts)-1] {
		o.close(index)
		index.starts = append(index.starts, born)
		kept := o.members[:0]
		for _, m := range o.members {
			if p.fronts[m].end >= born {
				kept = append(kept, m)
			}
		}
		o.members, o.carried = kept, len(kept)
	}
	o.members = append(o.members, id)
}

func (o *openSpan) close(index *segmentIndex) {
	index.fronts = append(index.fronts, o.members...)
	index.first = append(index.first, int32(len(index.fronts)))
}

// at lists the fronts that may exist at time t.
func (x *segmentIndex) at(t float64) []int32 {
	i := sort.SearchFloat64s(x.starts, t)
	if i == len(x.starts) || x.starts[i] > t {
		i--
	}
	return x.fronts[x.first[i]:x.first[i+1]]
}

// exists reports whether the front is there at time t; where one front ends and another begins, it is the later one.
func (f *front) exists(t float64) bool {
	return f.t0 <= t && (t < f.end || math.IsInf(f.end, 1))
}

// locateWithin finds the regions on the two sides of a point inside a segment: those beside the nearest
// fronts upstream and downstream of it.
func (s *Solution) locateWithin(seg int32, x, t float64) (up, down int32, onFront bool) {
	passage := s.nodes[seg].at(t)
	nearest, place := int32(-1), math.Inf(-1)
	on := closeness * (s.segments[seg].end - s.segments[seg].start)
	lowest, highest := int32(-1), int32(-1)
	for _, id := range s.index[seg].at(t) {
		f := &s.fronts[id]
		if !f.exists(t) {
			continue
		}
		p := s.place(f, t)
		if math.Abs(p-x) <= on {
			lowest, highest = s.outermost(lowest, highest, id, t)
			continue
		}
		if p < x && (p > place || p == place && s.ahead(id, nearest, t)) {
			nearest, place = id, p
		}
	}
	if lowest >= 0 {
		return s.fronts[lowest].up, s.fronts[highest].down, true
	}
	if nearest < 0 {
		return passage.down, passage.down, false
	}
	g := s.fronts[nearest].down
	return g, g, false
}

// restingOn returns the outermost of the fronts of a segment that rest on a node at its end, -1 for none. One that is
// just being born there does not rest.
func (s *Solution) restingOn(n *node, seg int32, t float64) (lowest, highest int32) {
	on := closeness * (s.segments[seg].end - s.segments[seg].start)
	lowest, highest = -1, -1
	for _, id := range s.index[seg].at(t) {
		f := &s.fronts[id]
		if f.exists(t) && t-f.t0 > n.slack && math.Abs(s.place(f, t)-n.x) <= on {
			lowest, highest = s.outermost(lowest, highest, id, t)
		}
	}
	return lowest, highest
}

// outermost widens a run of fronts at one place by another.
func (s *Solution) outermost(lowest, highest, id int32, t float64) (int32, int32) {
	if lowest < 0 {
		return id, id
	}
	if s.ahead(lowest, id, t) {
		lowest = id
	}
	if s.ahead(id, highest, t) {
		highest = id
	}
	return lowest, highest
}

// ahead reports whether front a lies downstream of front b where both are at one place: a is the faster one
// of two that start there, or the slower of two that are about to meet.
func (s *Solution) ahead(a, b int32, t float64) bool {
	if b < 0 {
		return true
	}
	fa, fb := &s.fronts[a], &s.fronts[b]
	if fa.up == fb.down {
		return true
	}
	if fb.up == fa.down {
		return false
	}
	if fa.t0 == t && fb.t0 == t {
		return a > b // fronts of one meeting are numbered from upstream
	}
	return s.velocity(fa, t) < s.velocity(fb, t)
}

// frontsAt lists the fronts on a segment at time t, upstream first.
func (s *Solution) frontsAt(seg int32, t float64) []*front {
	var ids []int32
	for _, id := range s.index[seg].at(t) {
		if s.fronts[id].exists(t) {
			ids = append(ids, id)
		}
	}
	places := make(map[int32]float64, len(ids))
	for _, id := range ids {
		places[id] = s.place(&s.fronts[id], t)
	}
	on := closeness * (s.segments[seg].end - s.segments[seg].start)
	sort.SliceStable(ids, func(i, j int) bool {
		if d := places[ids[i]] - places[ids[j]]; math.Abs(d) > on {
			return d < 0
		}
		return s.ahead(ids[j], ids[i], t)
	})
	out := make([]*front, len(ids))
	for i, id := range ids {
		out[i] = &s.fronts[id]
	}
	return out
}
