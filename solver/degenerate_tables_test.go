package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

var unknown = math.NaN()

// coincidences are corridors in which several things happen at one place and time.
func coincidences(t *testing.T) []degenerate {
	road, bent := exactRoad(t, 1000), bentRoad(t, 1024)
	return []degenerate{
		{"three shocks meet in one point", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 64,
			Entry: solver.Entry{Demand: rates(0, bent.Relation.Flow(1.0/64))},
			// densities 1, 3, 5, 7 of 64ths: shock speeds 16(1-(kL+kR)/kj) = 8, 0, -8 m/s
			Initial: solver.Initial{Profile: []solver.ProfilePiece{flatPiece(0, 256, 1.0/64), flatPiece(256, 512, 3.0/64),
				flatPiece(512, 768, 5.0/64), flatPiece(768, 1024, 7.0/64)}}}, unknown},
		{"a signal turns red just as a wave arrives", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 160,
			// by 110 s all that came to the light from 50 s on has passed it
			Signals: []solver.Signal{light("light", 500, 0, 50, 70, 1000)},
			Entry:   solver.Entry{Demand: rates(0, 0.25)}}, 0.25 * (110 - 50)},
		{"a signal turns green just as a wave arrives", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 120,
			Signals: []solver.Signal{light("light", 500, 50, 1000)},
			Entry:   solver.Entry{Demand: rates(0, 0.25)}}, 0.25 * 20},
		{"two signals switch at once, a wave of each meets the other's", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 300,
			Signals: []solver.Signal{light("first", 250, 0, 50, 100, 150, 200, 250), light("second", 750, 50, 100, 150, 200, 250, 300)},
			Entry:   solver.Entry{Demand: rates(0, 0.25)}, Initial: solver.Initial{BackgroundFlow: 0.25}}, unknown},
		{"demand steps, capacity steps and signal at the same second", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200,
			Signals:     []solver.Signal{light("light", 800, 0, 20, 40, 60, 80, 100)},
			Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 400, Capacity: rates(0, 0.5, 20, 0.125, 40, 0, 60, 0.25)}},
			Entry:       solver.Entry{Demand: rates(0, 0.25, 20, 0.5, 40, 0, 60, 0.375)},
			Exit:        solver.Exit{Capacity: rates(0, 0.25, 20, 0, 40, 0.5)}}, unknown},
		{"a queue clears at the moment the next red begins", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 240,
			// red 30 s at half of capacity: clear 30 s after green
			Signals: []solver.Signal{{Name: "light", Place: 1000, SaturationFlow: math.Inf(1),
				Plan: solver.Plan{Cycle: 60, Greens: []solver.Window{{Start: 30, End: 60}}}}},
			Entry: solver.Entry{Demand: rates(0, 0.25)}, Initial: solver.Initial{BackgroundFlow: 0.25}}, 0.25 * 240},
		{"a jam's two ends meet at a node", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 100,
			Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 512, Capacity: rates(0, 0.25)}},
			Entry:       solver.Entry{Demand: rates(0, 0.25)},
			Initial:     solver.Initial{Profile: []solver.ProfilePiece{flatPiece(0, 448, 0), flatPiece(448, 512, 0.125), flatPiece(512, 1024, 0)}}}, unknown},
	}
}

func flatPiece(from, to, k float64) solver.ProfilePiece {
	return solver.ProfilePiece{Start: from, End: to, StartDensity: k, EndDensity: k}
}

// borders are states on the border between two cases.
func borders(t *testing.T) []degenerate {
	road, bent := exactRoad(t, 1000), bentRoad(t, 1024)
	ulp := math.Nextafter(0.05, 1) - 0.05
	jam := []solver.ProfilePiece{flatPiece(0, 1000, 0.15)}
	return []degenerate{
		{"nobody comes", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 100}, 0},
		{"nobody comes to a signal", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 100,
			Signals: []solver.Signal{light("light", 500, 10, 20, 30, 40)}}, 0},
		{"demand exactly at capacity", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200,
			Entry: solver.Entry{Demand: rates(0, 0.5)}}, 50},
		{"demand exactly at capacity of the curve", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 200,
			Entry: solver.Entry{Demand: rates(0, 0.5)}, Initial: solver.Initial{BackgroundFlow: 0.5}}, 100},
		{"bottleneck capacity exactly the demand", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200,
			Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 500, Capacity: rates(0, 0.25)}},
			Entry:       solver.Entry{Demand: rates(0, 0.25)}}, 25},
		{"jam everywhere, open exit", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 100,
			Initial: solver.Initial{Profile: jam}}, 50},
		{"jam everywhere, closed exit", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 100,
			Entry: solver.Entry{Demand: rates(0, 0.25)}, Exit: solver.Exit{Capacity: rates(0, 0)}, Initial: solver.Initial{Profile: jam}}, 0},
		{"jam everywhere under the curve", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 100,
			Initial: solver.Initial{Profile: []solver.ProfilePiece{flatPiece(0, 1024, 0.125)}}}, 50},
		{"densities that differ by one rounding, rising", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 100,
			Initial: solver.Initial{Profile: []solver.ProfilePiece{flatPiece(0, 500, 0.05), flatPiece(500, 1000, 0.05+ulp)}}}, unknown},
		{"densities that differ by one rounding, falling", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 100,
			Initial: solver.Initial{Profile: []solver.ProfilePiece{flatPiece(0, 500, 0.05+ulp), flatPiece(500, 1024, 0.05)}}}, unknown},
		{"a ramp of one rounding", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 100,
			Initial: solver.Initial{Profile: []solver.ProfilePiece{{Start: 0, End: 1024, StartDensity: 0.05, EndDensity: 0.05 + ulp}}}}, unknown},
		{"a ramp a hair wide", solver.Scenario{Segments: []solver.Segment{bent}, Horizon: 100,
			Initial: solver.Initial{Profile: []solver.ProfilePiece{flatPiece(0, 500, 0.02), {Start: 500, End: 500.0000001, StartDensity: 0.02, EndDensity: 0.1}, flatPiece(500.0000001, 1024, 0.1)}}}, unknown},
		{"capacity a hair above and below the flow", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200,
			Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 500, Capacity: rates(0, 0.25*(1+1e-15), 100, 0.25*(1-1e-15))}},
			Entry:       solver.Entry{Demand: rates(0, 0.25)}, Initial: solver.Initial{BackgroundFlow: 0.25}}, 50},
	}
}

// placesAtTheEnd are nodes on ends, on joins and beside one another.
func placesAtTheEnd(t *testing.T) []degenerate {
	road := exactRoad(t, 1000)
	first, second := exactRoad(t, 600), exactRoad(t, 400)
	first.Name, second.Name = "first", "second"
	demand := solver.Entry{Demand: rates(0, 0.25)}
	steady := solver.Initial{BackgroundFlow: 0.25}
	works := func(x float64) []solver.Bottleneck {
		return []solver.Bottleneck{{Name: "works", Place: x, Capacity: rates(0, 0.125)}}
	}
	return []degenerate{
		{"bottleneck at the entry", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200, Entry: demand, Bottlenecks: works(0)}, 12.5},
		{"bottleneck at the exit", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200, Entry: demand, Bottlenecks: works(1000)}, 12.5},
		{"bottleneck at the exit, exit restricted too", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200, Entry: demand,
			Bottlenecks: works(1000), Exit: solver.Exit{Capacity: rates(0, 0.0625)}}, 6.25},
		{"signal at the entry", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200, Entry: demand,
			Signals: []solver.Signal{light("light", 0, 20, 40, 60, 80)}}, 0.25 * 80},
		{"signal at the exit", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 200, Entry: demand, Initial: steady,
			Signals: []solver.Signal{light("light", 1000, 20, 40, 60, 80)}}, 0.5 * 20 * 2},
		{"bottleneck on a join", solver.Scenario{Segments: []solver.Segment{first, second}, Horizon: 200, Entry: demand, Bottlenecks: works(600)}, 12.5},
		{"two nodes a metre apart", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 300, Entry: demand, Initial: steady,
			Signals:     []solver.Signal{light("light", 500, 30, 60, 90, 120, 150, 180, 210, 240)},
			Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 501, Capacity: rates(0, 0.25)}}}, unknown},
		{"two signals a metre apart in opposite phase", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 300, Entry: demand, Initial: steady,
			Signals: []solver.Signal{light("first", 500, 0, 30, 60, 90, 120, 150), light("second", 501, 30, 60, 90, 120, 150, 180)}}, unknown},
		{"a segment of a metre", solver.Scenario{Segments: []solver.Segment{first, exactRoad(t, 1), second}, Horizon: 300, Entry: demand, Initial: steady,
			Bottlenecks: works(601)}, unknown},
	}
}

// sizes are horizons and roads at the ends of what one would ask.
func sizes(t *testing.T) []degenerate {
	road := exactRoad(t, 1000)
	demand := solver.Entry{Demand: rates(0, 0.25)}
	steady := solver.Initial{BackgroundFlow: 0.25}
	cycle := solver.Signal{Name: "light", Place: 500, SaturationFlow: math.Inf(1), Plan: solver.Plan{Cycle: 64, Greens: []solver.Window{{Start: 0, End: 48}}}}
	return []degenerate{
		{"a second", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 1, Entry: demand, Initial: steady, Signals: []solver.Signal{cycle}}, 0.25},
		{"a millisecond", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 1e-3, Entry: demand, Initial: steady, Signals: []solver.Signal{cycle}}, 0.25e-3},
		// the last red of the day began at 86 384 s, 16 s before its end; what it holds back is missing at the exit 50 s later
		{"a day of signals", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 86400, Entry: demand, Initial: steady, Signals: []solver.Signal{cycle}}, unknown},
		{"a day of nothing", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 86400, Entry: demand, Initial: steady}, 21600},
		{"a day of waiting outside", solver.Scenario{Segments: []solver.Segment{road}, Horizon: 86400, Entry: solver.Entry{Demand: rates(0, 0.75)}}, 0.5 * (86400 - 100)},
		{"a metre of road", solver.Scenario{Segments: []solver.Segment{exactRoad(t, 1)}, Horizon: 3600, Entry: demand,
			Signals: []solver.Signal{{Name: "light", Place: 0.5, SaturationFlow: math.Inf(1), Plan: cycle.Plan}}}, unknown},
		{"a thousand kilometres", solver.Scenario{Segments: []solver.Segment{exactRoad(t, 1e6)}, Horizon: 3600, Entry: demand, Initial: steady,
			Signals: []solver.Signal{{Name: "light", Place: 5e5, SaturationFlow: math.Inf(1), Plan: cycle.Plan}}}, 900},
	}
}
