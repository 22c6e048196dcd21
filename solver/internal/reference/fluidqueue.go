package reference

import (
	"math"

	"github.com/roadswell/roadswell/solver"
)

// FluidQueue is the deterministic fluid queue (arrivals and service known as rates over time): in each span
// the queue is q0 + r0 τ + r1 τ²/2, τ counted from the span's start.
type FluidQueue struct {
	spans []span
}

type span struct {
	start, end float64
	q0, r0, r1 float64
}

// SolveFluidQueue solves the queue from time from to time to. Arrivals and service are 0 before their first
// piece.
func SolveFluidQueue(arrivals, service solver.Schedule, initial, from, to float64) FluidQueue {
	var f FluidQueue
	cuts := sorted(append(append(startsWithin(arrivals, from, to), startsWithin(service, from, to)...), from, to))
	queue := initial
	for i := 1; i < len(cuts); i++ {
		if cuts[i] > cuts[i-1] {
			queue = f.cross(arrivals, service, queue, cuts[i-1], cuts[i])
		}
	}
	return f
}

func startsWithin(s solver.Schedule, from, to float64) []float64 {
	var out []float64
	for _, p := range s {
		if p.Start > from && p.Start < to {
			out = append(out, p.Start)
		}
	}
	return out
}

// cross adds the spans between two neighbouring changes of the rates and returns the queue at the end.
func (f *FluidQueue) cross(arrivals, service solver.Schedule, queue, from, to float64) float64 {
	for from < to {
		a, b := pieceAt(arrivals, from), pieceAt(service, from)
		s := span{start: from, end: to, q0: queue, r0: rateOf(a, from) - rateOf(b, from), r1: a.Slope - b.Slope}
		if queue == 0 && (s.r0 < 0 || s.r0 == 0 && s.r1 <= 0) {
			s = s.idle()
		} else if left := firstPositiveRoot(s.q0, s.r0, s.r1/2); from+left < to {
			s.end = from + left
		}
		f.spans = append(f.spans, s)
		from, queue = s.end, s.queue(s.end)
		if s.end < to {
			queue = 0
		}
	}
	return queue
}

// idle is the span without a queue: until arrivals outgrow service, if they do.
func (s span) idle() span {
	if grows := s.start - s.r0/s.r1; s.r1 > 0 && grows < s.end {
		s.end = grows
	}
	s.q0, s.r0, s.r1 = 0, 0, 0
	return s
}

func (s span) queue(t float64) float64 {
	x := t - s.start
	return s.q0 + x*(s.r0+s.r1*x/2)
}

// firstPositiveRoot is the least x > 0 at which c + b x + a x² falls through zero, +Inf where it never does.
func firstPositiveRoot(c, b, a float64) float64 {
	if a == 0 {
		if b < 0 {
			return -c / b
		}
		return math.Inf(1)
	}
	disc := b*b - 4*a*c
	if disc < 0 {
		return math.Inf(1)
	}
	return leastPositive((-b-math.Sqrt(disc))/(2*a), (-b+math.Sqrt(disc))/(2*a))
}

func leastPositive(x, y float64) float64 {
	lo, hi := math.Min(x, y), math.Max(x, y)
	switch {
	case lo > 0:
		return lo
	case hi > 0:
		return hi
	}
	return math.Inf(1)
}

// At is the queue at time t [veh].
func (f FluidQueue) At(t float64) float64 {
	for _, s := range f.spans {
		if t <= s.end {
			return s.queue(t)
		}
	}
	last := f.spans[len(f.spans)-1]
	return last.queue(last.end)
}

// Max is the greatest queue and the first time at which it stands.
func (f FluidQueue) Max() (t, queue float64) {
	queue = -1
	for _, s := range f.spans {
		for _, at := range []float64{s.start, s.start - s.r0/s.r1, s.end} {
			if at >= s.start && at <= s.end && s.queue(at) > queue {
				t, queue = at, s.queue(at)
			}
		}
	}
	return t, queue
}

// Clears lists the times at which a queue comes to its end.
func (f FluidQueue) Clears() []float64 {
	var out []float64
	for i, s := range f.spans[:len(f.spans)-1] {
		next := f.spans[i+1]
		if next.q0 == 0 && (s.q0 != 0 || s.r0 != 0 || s.r1 != 0) {
			out = append(out, s.end)
		}
	}
	return out
}

// Delay is the time spent in the queue by all vehicles together [veh s]: the integral of the queue.
func (f FluidQueue) Delay() float64 {
	sum := 0.0
	for _, s := range f.spans {
		x := s.end - s.start
		sum += x * (s.q0 + x*(s.r0/2+x*s.r1/6))
	}
	return sum
}
