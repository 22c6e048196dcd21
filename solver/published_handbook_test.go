package solver_test

import (
	"fmt"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// steady is a homogeneous road on which a flow runs freely.
func steady(t *testing.T, r solver.Relation, flow float64) solver.State {
	t.Helper()
	s := answerOf(t, approach{relation: r, up: kilometre, down: kilometre, arrivals: flow, saturation: flow,
		plan: oneRed(0, hour), horizon: minute}.scenario())
	return at(t, s, 0.3*kilometre, minute).Up
}

// serviceLimits is a row of the table of P38: flows [pc/h/ln] and speeds [mi/h] at the limits A to E.
type serviceLimits struct {
	freeSpeed    float64
	flow, speeds [5]float64
}

// P38. Source: HCM 2010 criteria as Table 6.2 of Mannering & Washburn, Principles of Highway Engineering and Traffic
// Analysis; read at essaywritingpros.com/2023/05/17/service-measure.
func TestP38LevelOfServiceLimits(t *testing.T) {
	limits := [5]float64{11, 18, 26, 35, 45} // pc/mi/ln
	for _, row := range []serviceLimits{
		{70, [5]float64{770, 1260, 1735, 2115, 2400}, [5]float64{70, 70, 66.7, 60.4, 53.3}},
		{60, [5]float64{660, 1080, 1560, 2000, 2300}, [5]float64{60, 60, 60, 57.1, 51.1}},
	} {
		t.Run(fmt.Sprintf("free-flow speed %g", row.freeSpeed), func(t *testing.T) {
			var corners []solver.FlowPoint
			for i, k := range limits {
				corners = append(corners, solver.FlowPoint{Density: k * perMile, Flow: row.flow[i] * perHour})
			}
			r := throughStates(t, 200*perMile, corners...) // a place to close the relation, of no effect here
			for i, k := range limits {
				got := steady(t, r, row.flow[i]*perHour)
				agree(t, "density [pc/mi/ln]", got.Density/perMile, k)
				agreeWithin(t, "published flow over published speed [pc/mi/ln]", row.flow[i]/row.speeds[i], got.Density/perMile, 0.05)
				agreeWithin(t, "speed [mi/h]", got.Speed/mph, row.speeds[i], 0.05)
			}
		})
	}
}

// remainingCapacity is the share of capacity left by an incident on a direction of two, three or four lanes: after
// a disablement and an accident on the shoulder, and with one, two, three lanes blocked.
var remainingCapacity = map[float64][]float64{
	2: {0.95, 0.81, 0.35, 0},
	3: {0.99, 0.83, 0.49, 0.17, 0},
	4: {0.99, 0.85, 0.58, 0.25, 0.13},
}

// P40: the shares are input here; what passes an incident on a full road is just that share.
// Source: HCM 2010 Exhibit 10-17 as Table 40 of FHWA-HOP-13-042, appendix C; read at
// ops.fhwa.dot.gov/publications/fhwahop13042/appc.htm.
func TestP40RemainingCapacityInIncidentZones(t *testing.T) {
	lane := triangle(t, solver.TriangularParams{FreeSpeed: 65 * mph, Capacity: 2350 * perHour, WaveSpeed: 18 * kmh})
	for lanes, shares := range remainingCapacity {
		for _, share := range shares {
			r := lane.Lanes(lanes)
			road := openRoad(r, 10*minute, flat(-4*kilometre, kilometre, r.FreeDensity(r.Capacity())))
			road.Bottlenecks = []solver.Bottleneck{{Name: "incident", Capacity: always(share * r.Capacity())}}
			s := answerOf(t, road)
			agreeOn(t, "passes [veh/h]", passed(t, s, 0, minute, 9*minute)/(8*minute)/perHour, share*lanes*2350, lanes*2350)
		}
	}
	if left := remainingCapacity[3][2]; left >= 2.0/3 {
		t.Errorf("one lane of three blocked leaves %g, not less than the two lanes' share", left)
	}
}

// P41: ranges of input; any of them is a plausible work zone on two lanes of 2000 veh/h each.
// Source: Dixon, Hummer & Lorscheider, Transportation Research Record 1529 (1996), read at
// id.scribd.com/document/322880736; A. Leslie, BYU MS project 2012, read at studylib.net/doc/8395344; abstract at
// taylorfrancis.com (10.1201/9781482281767-15).
func TestP41WorkZoneCapacities(t *testing.T) {
	lane := triangle(t, solver.TriangularParams{FreeSpeed: 100 * kmh, Capacity: 2000 * perHour, WaveSpeed: 18 * kmh})
	for _, capacity := range []float64{1200, 1350, 1500, 1512, 1600} {
		p := pointQueue{schedule(minute, perHour, 0, 2400), schedule(minute, perHour, 0, capacity, 30, 3200), 4 * hour}
		queue := (2400 - capacity) / 2
		end := 30*minute + queue/800*hour
		p.check(t, queueFacts{queue: map[float64]float64{30 * minute: queue}, clears: end,
			affected: 2400 * end / hour, total: queue * end / 2})
		r := lane.Lanes(2)
		if k := r.CongestedDensity(capacity * perHour); r.Flow(k) > r.Capacity() || r.Speed(k) > 40*kmh {
			t.Errorf("%g veh/h queue at %g km/h", capacity, r.Speed(k)/kmh)
		}
	}
}

// P42, with the discharge flow given from the start: queue discharge that follows from the queue is not a node yet.
// Source: Cassidy & Bertini, Some traffic features at freeway bottlenecks, Transp. Res. B 33 (1999), 25-42; abstract
// read at text-id.123dok.com/document/zln1proq.
func TestP42QueueGrowthWithAndWithoutCapacityDrop(t *testing.T) {
	for capacity, growth := range map[float64]float64{4500: 300, 0.9 * 4500: 750} {
		p := pointQueue{schedule(hour, perHour, 0, 4800), schedule(hour, perHour, 0, capacity), hour}
		agree(t, "waiting after 1 h [veh]", totals(t, p.atEntry(t), hour).Waiting, growth)
		agree(t, "queue counted on the road after 1 h [veh]", p.counted(t, p.onRoad(t), hour), growth)
	}
}

// P43. Source: Stipdonk, van Toorenburg & Postema, Phase diagram distortion from traffic parameter averaging; read at
// studylib.net/doc/18646466.
func TestP43JamDensityFromBackwardWaveSpeed(t *testing.T) {
	for wave, jam := range map[float64]float64{17: 162.48, 18: 154.64, 19: 147.62} {
		r := triangle(t, solver.TriangularParams{FreeSpeed: 70 * mph, Capacity: 2400 * perHour, WaveSpeed: wave * kmh})
		agreeWithin(t, "jam density [veh/km/ln]", r.JamDensity()/perKm, jam, 0.01)
		agree(t, "jam density [veh/km/ln]", r.JamDensity()/perKm, 2400/(70*mph/kmh)+2400/wave)
		least, greatest := r.CriticalDensity()
		agree(t, "critical density [veh/km/ln]", least/perKm, 2400/(70*mph/kmh))
		agreeWithin(t, "the same, per mile", greatest/perMile, 34.3, 0.05)
		s := answerOf(t, openRoad(r, minute, flat(-kilometre, 0, r.JamDensity()), flat(0, kilometre, 0)))
		agree(t, "start-up wave [km/h]", jumpBetween(t, s, 30, r.JamDensity(), greatest).Speed(30)/kmh, -wave)
	}
}

// P47. Source: GATE (India) question; read at byjus.com/question-answer/a-two-lane-urban-road...
func TestP47DensityFromFlow(t *testing.T) {
	r := greenshields(t, 4*1800/400.0*kmh, 2/(5.0/kilometre)*perKm)
	agree(t, "capacity [veh/h]", r.Capacity()/perHour, 1800)
	agree(t, "free-flow speed [km/h]", r.FreeSpeed()/kmh, 18)
	got := steady(t, r, 1000*perHour)
	agree(t, "density [veh/km]", got.Density/perKm, 200.0/3)
	agreeWithin(t, "the same, as published [veh/km]", got.Density/perKm, 67, 0.5)
	agree(t, "the other density of this flow [veh/km]", r.CongestedDensity(1000*perHour)/perKm, 1000.0/3)
}

// P48. Source: (a) curioustab.com/discussion...70547; (b) GATE 2019 CE set II at edurev.in/t/168722.
func TestP48CapacityOfTheLinearLaw(t *testing.T) {
	for _, c := range []struct{ freeSpeed, jam, capacity, speed float64 }{{80, 100, 2000, 40}, {100, 200, 5000, 50}} {
		r := greenshields(t, c.freeSpeed*kmh, c.jam*perKm)
		agree(t, "capacity [veh/h]", r.Capacity()/perHour, c.capacity)
		got := steady(t, r, r.Capacity())
		agree(t, "speed at capacity [km/h]", got.Speed/kmh, c.speed)
		agree(t, "flow [veh/h]", got.Flow/perHour, c.capacity)
		agree(t, "density [veh/km]", got.Density/perKm, c.jam/2)
	}
}

// P49. Source: Treiber & Kesting, Traffic Flow Dynamics (Springer 2013), solution of problem 2.2; read at
// sciencedocbox.com/Physics/84018967, where the density is printed as 60: a misprint or scan error.
func TestP49CountingInASpaceTimeBox(t *testing.T) {
	const flow, density = 11 / 20.0, 3 / 60.0
	r := triangle(t, solver.TriangularParams{FreeSpeed: flow / density, Capacity: 2 * flow, WaveSpeed: 5})
	s := answerOf(t, approach{relation: r, up: kilometre, down: kilometre, arrivals: flow, saturation: flow * 2,
		plan: oneRed(0, hour), horizon: minute}.scenario())
	got := at(t, s, 100, 20).Up
	agree(t, "flow [veh/h]", got.Flow/perHour, 1980)
	agree(t, "density [veh/km]", got.Density/perKm, 50)
	agree(t, "speed [km/h]", got.Speed/kmh, 39.6)
	agree(t, "counted in 20 s at one place", passed(t, s, 100, 20, 40), 11)
	agree(t, "counted on 60 m at one time", at(t, s, 100, 20).Count-at(t, s, 160, 20).Count, 3)
	differ(t, "density [veh/km]", got.Density/perKm, 60, 0.5)
}
