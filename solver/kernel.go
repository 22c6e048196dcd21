package solver

import (
	"context"
	"math"
	"slices"
	"unsafe"
)

// kernel builds a solution: it holds the live order of regions and fronts along the road and turns each event
// - a region used up, a node whose surroundings changed - into new fronts. It knows neither what kinds of
// node there are nor what will be asked of the solution.
type kernel struct {
	plane

	agenda agenda
	now    float64
	waves  []wave // scratch of fallingWaves

	interactions int64
	refused      *ClosedFormError
}

// plane is the time-space plane of a corridor, filled with regions and the fronts between them.
type plane struct {
	horizon  float64
	segments []segment
	nodes    []node
	regions  []region
	bounds   []bound // of the regions, parallel to them
	fronts   []front
	paths    []path
	steps    []step     // what happened, in order
	limits   []bounding // what bounded each region downstream, over time
}

// segment is a homogeneous stretch of road as the kernel sees it, with what counts as equal on it.
type segment struct {
	name             string
	start, end       float64
	diagram          *diagram
	densityTolerance float64
	flowTolerance    float64
	speedTolerance   float64
}

func newSegment(name string, start, end float64, d *diagram) segment {
	return segment{
		name: name, start: start, end: end, diagram: d,
		densityTolerance: closeness * d.jam,
		flowTolerance:    closeness * d.capacity,
		speedTolerance:   closeness * d.freeSpeed,
	}
}

// bound is what a region lies between while it lives: fronts, or nodes as ^index.
type bound struct {
	up, down int32
	limits   int32   // latest entry of this region in kernel.limits, -1 for none
	due      float64 // when it will be used up
	died     float64 // when it was, +Inf while it lives
}

// bounding says what a region is bounded by downstream from a time on: a front, or a node as ^index.
type bounding struct {
	since  float64
	bound  int32
	before int32 // the region's previous entry, -1 for none
}

// step records one event: the fronts it put from firstFront to lastFront (exclusive, possibly none) between
// the regions up and down of one segment. At a node the sides are recorded by two steps, and up or down is
// the node as ^index.
type step struct {
	time                  float64
	up, down              int32
	firstFront, lastFront int32
}

func (k *kernel) addRegion(g *region) int32 {
	id := int32(len(k.regions))
	k.regions = append(k.regions, *g)
	k.bounds = append(k.bounds, bound{died: math.Inf(1), due: math.Inf(1), limits: -1})
	k.agenda.regions = append(k.agenda.regions, -1)
	return id
}

// withdraw takes back the region that was added last, before anything bounds it.
func (k *kernel) withdraw() {
	last := len(k.regions) - 1
	k.regions, k.bounds, k.agenda.regions = k.regions[:last], k.bounds[:last], k.agenda.regions[:last]
}

// addFront puts a front between two regions that are, from now on, neighbours.
func (k *kernel) addFront(f front) {
	id := int32(len(k.fronts))
	f.end, f.into, f.seg, f.first = math.Inf(1), -1, k.regions[f.up].seg, f.up
	k.fronts = append(k.fronts, f)
	k.boundDown(f.up, id)
	k.bounds[f.down].up = id
}

// boundDown makes a front, or a node as ^index, the downstream bound of a region from now on.
func (k *kernel) boundDown(g, bound int32) {
	b := &k.bounds[g]
	b.down = bound
	k.limits = append(k.limits, bounding{since: k.now, bound: bound, before: b.limits})
	b.limits = int32(len(k.limits) - 1)
}

// run processes events until the horizon.
func (k *kernel) run(ctx context.Context, budget Budget) error {
	for len(k.agenda.events) > 0 {
		e := k.agenda.pop()
		k.now = max(k.now, e.time)
		k.interactions++
		if err := k.check(ctx, budget); err != nil {
			return err
		}
		if e.target < 0 {
			k.visit(^e.target)
		} else {
			k.usedUp(e.target)
		}
		if k.refused != nil {
			return k.refused
		}
	}
	return nil
}

// contextInterval is how many interactions pass between looks at the context: some 0.1 ms of work.
const contextInterval = 512

func (k *kernel) check(ctx context.Context, budget Budget) error {
	if k.interactions > budget.Interactions {
		return &LimitError{Limit: "interactions", Max: budget.Interactions, Reached: k.now}
	}
	if k.interactions%contextInterval != 0 {
		return nil
	}
	k.makeRoom(budget)
	if err := k.withinMemory(budget); err != nil {
		return err
	}
	return ctx.Err()
}

// makeRoom lets lists that are nearly full grow to what they will hold at the horizon, if as much goes on
// happening as so far and the budget allows it: growing by doubling would copy and clear twice as much.
func (k *kernel) makeRoom(budget Budget) {
	r := room{share: k.horizon / k.now, left: budget.Memory - k.bytes()}
	k.regions = roomFor(k.regions, &r)
	k.bounds = roomFor(k.bounds, &r)
	k.fronts = roomFor(k.fronts, &r)
	k.paths = roomFor(k.paths, &r)
	k.steps = roomFor(k.steps, &r)
	k.limits = roomFor(k.limits, &r)
}

// room says by how many times lists will have grown at the horizon, and how many bytes they may still take.
type room struct {
	share float64
	left  int64
}

// mostGrowth bounds by how much a list grows at once on the strength of what has happened so far.
const mostGrowth = 16

// roomFor returns the list with room for what it will hold and a tenth more, where it is nearly full and will not do.
func roomFor[T any](list []T, r *room) []T {
	held := float64(len(list))
	if 8*len(list) < 7*cap(list) || r.share*held <= float64(cap(list)) {
		return list
	}
	var element T
	size := int64(unsafe.Sizeof(element))
	more := min(int64(min(1.1*r.share, mostGrowth)*held)-int64(cap(list)), r.left/size)
	if more <= 0 {
		return list
	}
	r.left -= more * size
	return slices.Grow(list, cap(list)+int(more)-len(list))
}

// withinMemory returns a *[LimitError] where the solution so far is larger than its budget.
func (k *kernel) withinMemory(budget Budget) error {
	if k.bytes() > budget.Memory {
		return &LimitError{Limit: "bytes", Max: budget.Memory, Reached: k.now}
	}
	return nil
}

// bytes is the size of what the solution holds.
func (k *kernel) bytes() int64 {
	size := cap(k.regions)*int(unsafe.Sizeof(region{})) + cap(k.bounds)*int(unsafe.Sizeof(bound{})) +
		cap(k.fronts)*int(unsafe.Sizeof(front{})) + cap(k.paths)*int(unsafe.Sizeof(path{})) +
		cap(k.steps)*int(unsafe.Sizeof(step{})) + cap(k.limits)*int(unsafe.Sizeof(bounding{})) + cap(k.agenda.regions)*4
	for i := range k.nodes {
		n := &k.nodes[i]
		size += cap(n.history)*int(unsafe.Sizeof(passage{})) + cap(n.restriction)*int(unsafe.Sizeof(SchedulePiece{})) +
			n.capacity.bytes() + n.demand.bytes()
	}
	return int64(size)
}

// simultaneous is the end of the time that counts as now.
func (k *kernel) simultaneous() float64 { return k.now + k.slack() }

// slack is the difference of times that counts as none.
func (k *kernel) slack() float64 { return closeness * k.horizon }
