package solver

import (
	"math"
)

// What a scenario may hold. The bounds are far outside anything built; they keep every quantity that the
// solver forms within the range in which its tolerances mean what they say.
const (
	minLength     = 0.01    // of a segment [m]
	maxPlace      = 1e7     // size of a place [m]
	minHorizon    = 1e-3    // [s]
	maxHorizon    = 1e7     // [s], about 115 days
	minSpeed      = 0.01    // free-flow speed [m/s]
	maxSpeed      = 1000    // any wave speed [m/s]
	minJamDensity = 1e-4    // [veh/m]
	maxJamDensity = 1e3     // [veh/m]
	minCapacity   = 1e-6    // [veh/s]
	maxRate       = 1e6     // any rate, of demand or capacity [veh/s]
	maxSwitches   = 1 << 20 // of all signals together within the horizon
	maxSegments   = 1 << 16
)

// Validate reports all that is wrong with the scenario as one *[InvalidError], or nil.
func (s Scenario) Validate() error {
	_, err := s.prepare()
	return err
}

// findings are the violations found so far, by the part of the scenario that they are in. A part that is sound can
// be judged whatever is wrong with the others.
type findings struct {
	time, road, controls, ends, initial violations
}

func (f *findings) err() error {
	all := violations{}
	for _, part := range [...]*violations{&f.road, &f.controls, &f.ends, &f.initial, &f.time} {
		all.list = append(all.list, part.list...)
	}
	return all.err()
}

// prepare validates the scenario and lays it out.
func (s *Scenario) prepare() (layout, error) {
	var f findings
	s.validateTime(&f.time)
	s.validateRoad(&f.road)
	s.validateControls(&f)
	s.validateEnds(&f)
	s.validateInitialNumbers(&f.initial)
	if !f.road.none() {
		return layout{}, f.err()
	}
	judged := s.judgeable(&f)
	l := judged.layout()
	scheduled := f.time.none() && f.controls.none() && f.ends.none()
	s.validateNames(l.nodes, &f.road)
	s.validateSpacing(l, &f.controls)
	judged.validateClosedForm(l, &f.ends)
	s.validateInitial(l, scheduled, &f.initial)
	return l, f.err()
}

// judgeable is the scenario without those schedules of which something is wrong: what is left can be laid out.
func (s *Scenario) judgeable(f *findings) Scenario {
	out := *s
	if !f.time.none() {
		out.Horizon = minHorizon
	}
	if !f.time.none() || !f.controls.none() {
		out.Bottlenecks, out.Signals = nil, nil
	}
	if !f.time.none() || !f.ends.none() {
		out.Entry.Demand, out.Exit.Capacity = nil, nil
	}
	return out
}

func (s *Scenario) validateTime(v *violations) {
	v.positive("Horizon", s.Horizon)
	if s.Horizon > 0 {
		v.within("Horizon", s.Horizon, minHorizon, maxHorizon)
	}
}

// horizon of the scenario; NaN, which no rate and no number of switches is compared with, where that is unsound.
func (f *findings) horizon(s *Scenario) float64 {
	if f.time.none() {
		return s.Horizon
	}
	return math.NaN()
}
