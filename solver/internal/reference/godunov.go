package reference

import (
	"math"

	"github.com/roadswell/roadswell/solver"
)

// Options of a [Godunov] run.
type Options struct {
	// Cell is the greatest width of a cell before refinement [m].
	Cell float64
	// Refine divides every cell into this many; 0 means 1.
	Refine int
	// Times at which the result is kept, besides the horizon; in rising order [s].
	Times []float64
}

// courant is the share of a cell that the fastest wave crosses in a time step. The scheme is stable and
// monotone up to 1; at 1 it would be exact on free flow of a triangular law, which would flatter it.
const courant = 0.9

// Godunov solves the scenario cell by cell: in each time step the flow between two cells is the least of what
// the upstream one can send, the downstream one can take, and what a node between them lets pass. Steps end
// at every change of a schedule or signal, so that no step straddles one.
func Godunov(s solver.Scenario, o Options) *Result {
	o.Refine = max(1, o.Refine)
	r := newRun(&s, o)
	stops := sorted(append(append(switches(&s), o.Times...), s.Horizon))
	for _, stop := range stops {
		r.advance(stop)
		if isOneOf(o.Times, stop) || stop == s.Horizon {
			r.keep()
		}
	}
	return r.result
}

func isOneOf(times []float64, t float64) bool {
	for _, x := range times {
		if x == t {
			return true
		}
	}
	return false
}

// run is a computation in progress.
type run struct {
	mesh
	scenario *solver.Scenario
	result   *Result
	step     float64 // greatest
	now      float64

	density, demand, supply []float64 // of each cell
	flow                    []float64 // [c] into cell c
	passed                  []float64 // vehicles since time 0 by gate
	waiting, turned         float64
}

func newRun(s *solver.Scenario, o Options) *run {
	r := &run{mesh: newMesh(s, o), scenario: s}
	r.step = courant * r.longestStep()
	r.density = r.fill(InitialProfile(s))
	r.demand, r.supply = make([]float64, r.cells), make([]float64, r.cells)
	r.flow = make([]float64, r.cells+1)
	r.passed = make([]float64, len(r.gates))
	r.result = newResult(&r.mesh)
	return r
}

// advance goes to time stop in equal steps.
func (r *run) advance(stop float64) {
	steps := int(math.Ceil((stop - r.now) / r.step))
	from := r.now
	for i := range steps {
		to := from + (stop-from)*float64(i+1)/float64(steps)
		r.one(r.now, to)
		r.now = to
	}
	r.result.Steps += steps
}

// one takes a single time step.
func (r *run) one(from, to float64) {
	for i := range r.stretches {
		r.offer(&r.stretches[i])
	}
	r.enter(from, to)
	for i := 1; i < len(r.stretches); i++ {
		c := r.stretches[i].first
		r.pass(i, c, math.Min(r.demand[c-1], r.supply[c]), from, to)
	}
	last := len(r.gates) - 1
	r.pass(last, r.cells, r.demand[r.cells-1], from, to)
	for i := range r.stretches {
		r.move(&r.stretches[i], to-from)
	}
}

// offer works out what each cell can send and take, and the flows between the cells of one stretch.
func (r *run) offer(st *stretch) {
	for c := st.first; c < st.next; c++ {
		k := r.density[c]
		q := st.relation.Flow(k)
		r.demand[c], r.supply[c] = q, q
		if k >= st.criticalLo {
			r.demand[c] = st.capacity
		}
		if k <= st.criticalHi {
			r.supply[c] = st.capacity
		}
	}
	for c := st.first + 1; c < st.next; c++ {
		r.flow[c] = math.Min(r.demand[c-1], r.supply[c])
	}
}

// pass lets the flow through a gate, as far as the gate lets it.
func (r *run) pass(gate, cell int, flow, from, to float64) {
	flow = math.Min(flow, r.gates[gate].capacity(from, to))
	r.flow[cell] = flow
	r.passed[gate] += flow * (to - from)
}

// enter lets in what wishes to enter, with what waits outside.
func (r *run) enter(from, to float64) {
	span := to - from
	wish := meanRate(r.scenario.Entry.Demand, 0, from, to)
	r.pass(0, 0, math.Min(wish+r.waiting/span, r.supply[0]), from, to)
	excess := r.waiting + (wish-r.flow[0])*span
	if r.scenario.Entry.Excess == solver.TurnsAway {
		r.turned += excess
		return
	}
	r.waiting = math.Max(0, excess)
}

// move changes the densities of one stretch by what flowed in and out.
func (r *run) move(st *stretch, span float64) {
	ratio := span / st.width
	for c := st.first; c < st.next; c++ {
		r.density[c] += ratio * (r.flow[c] - r.flow[c+1])
	}
}

func (r *run) keep() {
	r.result.Snapshots = append(r.result.Snapshots, Snapshot{
		Time:       r.now,
		Density:    append([]float64(nil), r.density...),
		Passed:     append([]float64(nil), r.passed...),
		Waiting:    r.waiting,
		TurnedAway: r.turned,
	})
}
