package solver_test

import "testing"

// midpoints is the integral of f over [a, b] by n midpoints. Where f changes at rates of at most slope, each
// step of width h errs by at most slope h²/4.
func midpoints(f func(float64) float64, a, b, slope float64, n int) (sum, bound float64) {
	h := (b - a) / float64(n)
	for i := range n {
		sum += h * f(a+(float64(i)+0.5)*h)
	}
	return sum, slope * h * (b - a) / 4
}

// TestTotalsAreTheIntegralsOfTheCounts: vehicle time is the integral over time of the vehicles on the road,
// which change no faster than the entry and exit flows; vehicle distance is the integral over the road of the
// vehicles that passed, which change no faster than the jam density; waiting time is the integral of the
// vehicles waiting. The tolerances are the bounds of the midpoint sums.
func TestTotalsAreTheIntegralsOfTheCounts(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		const steps = 200
		edges, time := s.edges(), s.scenario.Horizon
		total := s.totalsAt(t, time)
		for i, g := range s.scenario.Segments {
			from, to := edges[i], edges[i+1]
			onRoad := func(at float64) float64 { return s.n(t, from, at) - s.n(t, to, at) }
			sum, bound := midpoints(onRoad, 0, time, s.flowAtMost(), steps)
			within(t, "vehicle time of a segment", total.Segments[i].VehicleTime, sum, bound+time*s.count)
			passed := func(x float64) float64 { return s.n(t, x, time) - s.n(t, x, 0) }
			sum, bound = midpoints(passed, from, to, g.Relation.JamDensity(), steps)
			within(t, "vehicle distance of a segment", total.Segments[i].VehicleDistance, sum, bound+(to-from)*s.count)
		}
	})
}

// flowAtMost is a flow that is exceeded nowhere.
func (s *solved) flowAtMost() float64 {
	q := 0.0
	for _, g := range s.scenario.Segments {
		q = max(q, g.Relation.Capacity())
	}
	return q
}

// TestWaitingTimeIsTheIntegralOfTheWaiting: vehicles outside the entry change no faster than demand comes or
// the road takes them.
func TestWaitingTimeIsTheIntegralOfTheWaiting(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		time, most := s.scenario.Horizon, s.flowAtMost()
		for i, p := range s.scenario.Entry.Demand {
			most = max(most, p.Rate)
			if i+1 < len(s.scenario.Entry.Demand) {
				most = max(most, p.Rate+p.Slope*(s.scenario.Entry.Demand[i+1].Start-p.Start))
			}
		}
		waiting := func(at float64) float64 { return s.totalsAt(t, at).Waiting }
		sum, bound := midpoints(waiting, 0, time, most, 100)
		within(t, "waiting time", s.totalsAt(t, time).WaitingTime, sum, bound+time*s.count)
	})
}
