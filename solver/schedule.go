package solver

import (
	"fmt"
	"math"
	"sort"
)

// law is a rate to first order from a given time on: value + slope*(t - that time).
type law struct {
	value, slope float64
}

// at returns the law that holds from time t on; before is the rate before the first piece.
func (s Schedule) at(t, before float64) law {
	i := s.index(t)
	if i < 0 {
		return law{value: before}
	}
	return law{value: s[i].rate(t), slope: s[i].Slope}
}

// next returns the first time after t at which another piece begins, +Inf where there is none.
func (s Schedule) next(t float64) float64 {
	if i := s.index(t) + 1; i < len(s) {
		return s[i].Start
	}
	return math.Inf(1)
}

// index is the piece that holds at t, -1 before the first.
func (s Schedule) index(t float64) int {
	return sort.Search(len(s), func(i int) bool { return s[i].Start > t }) - 1
}

func (p *SchedulePiece) rate(t float64) float64 {
	if p.Slope == 0 {
		return p.Rate // also where Rate is +Inf
	}
	return max(0, p.Rate+p.Slope*(t-p.Start)) // a ramp that ends at 0 may round below it
}

// during is the integral of piece i from the later of 0 and its start to a time not after its end.
func (s Schedule) during(i int, until float64) float64 {
	from := max(0, s[i].Start)
	if until <= from {
		return 0
	}
	return (until - from) * 0.5 * (s[i].rate(from) + s[i].rate(until))
}

// span is the part of [0, t] during which piece i holds.
func (s Schedule) span(i int, t float64) (from, to float64) {
	from, to = max(0, s[i].Start), t
	if i+1 < len(s) {
		to = min(t, s[i+1].Start)
	}
	return from, to
}

// least is the lesser of two capacities at every time; both are unrestricted before their first piece.
func least(a, b Schedule) Schedule {
	switch {
	case len(a) == 0:
		return b
	case len(b) == 0:
		return a
	}
	var out Schedule
	for t := min(a[0].Start, b[0].Start); !math.IsInf(t, 1); {
		la, lb := a.at(t, math.Inf(1)), b.at(t, math.Inf(1))
		next := min(a.next(t), b.next(t))
		if lb.value < la.value || lb.value == la.value && lb.slope < la.slope {
			la, lb = lb, la
		}
		out = append(out, SchedulePiece{Start: t, Rate: la.value, Slope: la.slope})
		if cross := t + (lb.value-la.value)/(la.slope-lb.slope); la.slope > lb.slope && cross > t && cross < next {
			out = append(out, SchedulePiece{Start: cross, Rate: la.value + la.slope*(cross-t), Slope: lb.slope})
		}
		t = next
	}
	return out
}

// maxPieces bounds a schedule.
const maxPieces = 1 << 20

// validate checks times and rates up to the horizon. Rates may be +Inf only where unlimited is allowed.
func (s Schedule) validate(field string, horizon float64, unlimited bool, v *violations) {
	if len(s) > maxPieces {
		v.add(field, RuleRange, len(s), fmt.Sprintf("at most %d pieces", maxPieces))
	}
	for i := range s {
		at := item(field, i)
		p := &s[i]
		v.within(at+".Start", p.Start, -maxHorizon, maxHorizon)
		if i > 0 && p.Start <= s[i-1].Start {
			v.add(at+".Start", RuleOrder, p.Start, fmt.Sprintf("later than the piece before it, %g", s[i-1].Start))
		}
		if math.IsInf(p.Rate, 1) && unlimited && p.Slope == 0 {
			continue
		}
		end := horizon
		if i+1 < len(s) {
			end = min(end, s[i+1].Start)
		}
		p.validate(at, end, v)
	}
}

// validate checks the rates of a piece that ends at the given time.
func (p *SchedulePiece) validate(at string, end float64, v *violations) {
	before := len(v.list)
	v.within(at+".Slope", p.Slope, -maxRate, maxRate)
	v.notNegative(at+".Rate", p.Rate)
	if p.Rate > maxRate && !math.IsInf(p.Rate, 1) {
		v.add(at+".Rate", RuleRange, p.Rate, fmt.Sprintf("at most %g veh/s", float64(maxRate)))
	}
	last := p.Rate + p.Slope*(end-p.Start)
	if len(v.list) == before && end > p.Start && (last < -closeness*p.Rate || last > maxRate) {
		v.add(at+".Slope", RuleRange, p.Slope, fmt.Sprintf("a slope that keeps the rate between 0 and %g veh/s; it reaches %g at %g s", float64(maxRate), last, end))
	}
}

// schedule turns the plan into the signal's capacity over [0, horizon].
func (g *Signal) schedule(horizon float64) Schedule {
	cycles := 1.0
	if g.Plan.Cycle > 0 {
		cycles = horizon/g.Plan.Cycle + 2
	}
	out := make(Schedule, 1, 1+2*len(g.Plan.Greens)*int(cycles))
	out[0] = SchedulePiece{Start: math.Inf(-1)}
	green := func(start, end float64) {
		if end < 0 || start > horizon {
			return
		}
		if last := &out[len(out)-1]; start <= last.Start+closeness*horizon {
			last.Rate = g.SaturationFlow // greens that touch are one green
		} else {
			out = append(out, SchedulePiece{Start: start, Rate: g.SaturationFlow})
		}
		out = append(out, SchedulePiece{Start: end})
	}
	if g.Plan.Cycle == 0 {
		for _, w := range g.Plan.Greens {
			green(w.Start, w.End)
		}
		return out
	}
	first := math.Floor(-g.Plan.Offset/g.Plan.Cycle) - 1
	for n := first; g.Plan.Offset+n*g.Plan.Cycle <= horizon; n++ {
		begin := g.Plan.Offset + n*g.Plan.Cycle
		for _, w := range g.Plan.Greens {
			green(begin+w.Start, begin+w.End)
		}
	}
	return out
}

// validate checks the plan's numbers and order.
func (p *Plan) validate(field string, v *violations) {
	v.notNegative(field+".Cycle", p.Cycle)
	v.finite(field+".Offset", p.Offset)
	if p.Cycle == 0 && p.Offset != 0 {
		v.add(field+".Offset", RuleConflict, p.Offset, "0 where there is no cycle")
	}
	for i, w := range p.Greens {
		at := item(field+".Greens", i)
		v.finite(at+".Start", w.Start)
		v.finite(at+".End", w.End)
		if !(w.End > w.Start) {
			v.add(at+".End", RuleOrder, w.End, fmt.Sprintf("later than its start, %g", w.Start))
		}
		if i > 0 && w.Start < p.Greens[i-1].End {
			v.add(at+".Start", RuleOrder, w.Start, fmt.Sprintf("not before the end of the green before it, %g", p.Greens[i-1].End))
		}
		if p.Cycle > 0 && (w.Start < 0 || w.End > p.Cycle) {
			v.add(at, RuleRange, w, fmt.Sprintf("within the cycle, [0, %g]", p.Cycle))
		}
	}
}

// switches is how often a plan with a cycle switches within the horizon; without one, its greens are all there is.
func (p *Plan) switches(horizon float64) float64 {
	n := float64(2 * max(1, len(p.Greens)))
	if p.Cycle > 0 {
		n *= horizon / p.Cycle
	}
	return n
}

// validateSwitches bounds the number of cycles that a plan unfolds to.
func (p *Plan) validateSwitches(field string, horizon float64, v *violations) {
	if p.Cycle == 0 {
		return
	}
	if p.Cycle > maxHorizon {
		v.add(field+".Cycle", RuleRange, p.Cycle, fmt.Sprintf("at most %g s", float64(maxHorizon)))
	}
	if p.switches(horizon) > maxSwitches {
		v.add(field+".Cycle", RuleRange, p.Cycle, fmt.Sprintf("long enough that the signal switches at most %d times within the horizon", maxSwitches))
	}
	if math.Abs(p.Offset) > maxHorizon || math.Abs(p.Offset) > maxSwitches*p.Cycle {
		v.add(field+".Offset", RuleRange, p.Offset, fmt.Sprintf("at most %g s and %d cycles in size", float64(maxHorizon), maxSwitches))
	}
}
