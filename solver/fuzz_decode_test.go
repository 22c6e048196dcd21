package solver_test

import (
	"encoding/binary"
	"fmt"
	"math"

	"github.com/roadswell/roadswell/solver"
)

// reader takes numbers off a byte string, zeros when it is used up.
type reader struct{ bytes []byte }

func (r *reader) byte() byte {
	if len(r.bytes) == 0 {
		return 0
	}
	b := r.bytes[0]
	r.bytes = r.bytes[1:]
	return b
}

func (r *reader) upTo(n int) int { return int(r.byte()) % (n + 1) }

// hostile are the numbers that break things.
var hostile = []float64{math.NaN(), math.Inf(1), math.Inf(-1), math.Copysign(0, -1), -1, 5e-324, 1e-300, 1e300, math.MaxFloat64, 0x1p-52, 1e17}

// number is mostly a multiple of a 64th of scale, so that things coincide; now and then any float64, a hostile
// one, or a multiple off by one rounding.
func (r *reader) number(scale float64) float64 {
	switch kind := r.byte(); {
	case kind >= 254:
		var raw [8]byte
		for i := range raw {
			raw[i] = r.byte()
		}
		return math.Float64frombits(binary.LittleEndian.Uint64(raw[:]))
	case kind >= 250:
		return hostile[r.upTo(len(hostile)-1)]
	case kind >= 240:
		return math.Nextafter(float64(r.byte())/64*scale, scale*float64(kind-245))
	}
	return float64(r.byte()) / 64 * scale
}

// decodeScenario makes a scenario of any bytes, valid or not.
func decodeScenario(data []byte) solver.Scenario {
	r := &reader{data}
	relation := r.relation()
	s := solver.Scenario{Origin: r.number(100), Horizon: r.number(300)}
	length := 0.0
	for i := range 1 + r.upTo(3) {
		if r.upTo(3) == 0 {
			relation = r.relation()
		}
		g := solver.Segment{Name: fmt.Sprint("s", i), Length: r.number(500), Relation: relation}
		length += g.Length
		s.Segments = append(s.Segments, g)
	}
	place := func() float64 { return s.Origin + length*float64(r.byte())/255 }
	for i := range r.upTo(2) {
		s.Bottlenecks = append(s.Bottlenecks, solver.Bottleneck{Name: fmt.Sprint("b", i), Place: place(), Capacity: r.schedule()})
	}
	for i := range r.upTo(3) {
		s.Signals = append(s.Signals, solver.Signal{Name: fmt.Sprint("l", i), Place: place(), SaturationFlow: r.number(0.5), Plan: r.plan()})
	}
	s.Entry = solver.Entry{Demand: r.schedule(), Excess: solver.Excess(r.upTo(2))}
	s.Exit.Capacity = r.schedule()
	s.Initial = r.initial(s.Origin, length)
	return s
}

// relation is one that its constructor takes; what it refuses becomes the zero Relation, which must be refused
// in turn.
func (r *reader) relation() solver.Relation {
	var out solver.Relation
	vf, w, kj := r.number(15), r.number(5), r.number(0.1)
	switch r.upTo(4) {
	case 0:
		out, _ = solver.Triangular(solver.TriangularParams{FreeSpeed: vf, WaveSpeed: w, JamDensity: kj})
	case 1:
		out, _ = solver.Trapezoidal(solver.TrapezoidalParams{FreeSpeed: vf, WaveSpeed: w, JamDensity: kj, Capacity: r.number(0.2)})
	case 2:
		out, _ = solver.Greenshields(vf, kj)
	case 3:
		out, _ = solver.QuadraticFree(vf, r.number(10), r.number(0.02), kj)
	case 4:
		corners := []solver.FlowPoint{{}}
		for range 1 + r.upTo(3) {
			corners = append(corners, solver.FlowPoint{Density: r.number(0.05), Flow: r.number(0.3)})
		}
		out, _ = solver.PiecewiseLinear(append(corners, solver.FlowPoint{Density: kj}))
	}
	if lanes := float64(r.upTo(3)); out.Valid() && lanes > 0 {
		return out.Lanes(lanes)
	}
	return out
}

func (r *reader) schedule() solver.Schedule {
	var s solver.Schedule
	at := 0.0
	for range r.upTo(3) {
		p := solver.SchedulePiece{Start: at, Rate: r.number(0.5)}
		if r.upTo(4) == 0 {
			p.Slope = r.number(0.002) - 0.003
		}
		s = append(s, p)
		at += r.number(60)
	}
	return s
}

func (r *reader) plan() solver.Plan {
	p := solver.Plan{}
	if r.upTo(1) == 1 {
		p.Cycle, p.Offset = r.number(40), r.number(40)
	}
	at := 0.0
	for range r.upTo(2) {
		w := solver.Window{Start: at + r.number(10)}
		w.End = w.Start + r.number(20)
		at = w.End
		p.Greens = append(p.Greens, w)
	}
	return p
}

func (r *reader) initial(origin, length float64) solver.Initial {
	in := solver.Initial{BackgroundFlow: r.number(0.2)}
	pieces := r.upTo(4)
	for i := range pieces {
		in.BackgroundFlow = 0
		in.Profile = append(in.Profile, solver.ProfilePiece{
			Start: origin + length*float64(i)/float64(pieces), End: origin + length*float64(i+1)/float64(pieces),
			StartDensity: r.number(0.04), EndDensity: r.number(0.04)})
	}
	names := []string{"b0", "b1", "l0", "l1", "l2", solver.ExitName, "join s0/s1", "nobody"}
	for range r.upTo(2) {
		q := solver.StandingQueue{Node: names[r.upTo(len(names)-1)]}
		if r.upTo(1) == 0 {
			q.Vehicles = r.number(10)
		} else {
			q.Length = r.number(50)
		}
		in.Queues = append(in.Queues, q)
	}
	return in
}
