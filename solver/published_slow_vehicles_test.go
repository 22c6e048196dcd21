package solver_test

import (
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// A slow vehicle is not a node yet. What these cases say about the road behind and after it is tested: the tail
// of the platoon while its front is held back, and how the platoon dissolves once the vehicle has left.

// P03. Source: inputs read at essaypantry.com "volume at a section of a two-lane highway..."; the same numbers in
// mi/h are, from memory, a worked example of Garber & Hoel, Traffic and Highway Engineering (about -6.7 mi/h).
func TestP03TailOfThePlatoonBehindADumpTruck(t *testing.T) {
	const free, platoon = 25 * perKm, 100 * perKm
	r := throughStates(t, 200*perKm,
		solver.FlowPoint{Density: free, Flow: 1500 * perHour}, solver.FlowPoint{Density: platoon, Flow: 1000 * perHour})
	s := answerOf(t, openRoad(r, 15*minute, flat(-4*kilometre, 0, free), flat(0, kilometre, platoon)))
	tail := jumpBetween(t, s, minute, free, platoon)
	agree(t, "tail [km/h]", tail.Speed(minute)/kmh, -20.0/3)
	agreeWithin(t, "tail as remembered [km/h]", tail.Speed(minute)/kmh, -6.7, 0.05)
	const truck, onRoad = 10 * kmh, 15 * minute
	length := truck*onRoad - tail.Position(onRoad)
	agree(t, "growth [km/h]", (truck-tail.Speed(minute))/kmh, 50.0/3)
	agree(t, "platoon when the truck leaves [km]", length/kilometre, 50.0/3/4)
	agree(t, "vehicles in it", length*platoon, 5000.0/3/4)
}

// truckStates is the relation through the measured states of P07 [veh/mi, veh/h].
func truckStates(t *testing.T) solver.Relation {
	return throughStates(t, 200*perMile,
		solver.FlowPoint{Density: 20 * perMile, Flow: 1000 * perHour},
		solver.FlowPoint{Density: 50 * perMile, Flow: 1500 * perHour},
		solver.FlowPoint{Density: 100 * perMile, Flow: 1200 * perHour})
}

// P07, while the truck is on the road. Source: CIVL 262 Introduction to Transportation Systems, Tutorial Quiz 4
// solution, 6 March 2009; read at coursehero.com/file/6746960.
func TestP07TailOfThePlatoonBehindATruck(t *testing.T) {
	s := answerOf(t, openRoad(truckStates(t), 10*minute, flat(-mile, 0, 20*perMile), flat(0, mile, 100*perMile)))
	tail := jumpBetween(t, s, 10*minute, 20*perMile, 100*perMile)
	agree(t, "tail [mi/h]", tail.Speed(minute)/mph, 2.5)
	agree(t, "tail after 10 min [mi]", tail.Position(10*minute)/mile, 2.5/6)
	agree(t, "growth [mi/h]", 12-tail.Speed(minute)/mph, 9.5)
	agreeWithin(t, "platoon after 1/6 h, as published [mi]", (12-tail.Speed(minute)/mph)/6, 1.58, 0.005)
}

// P07, after the truck has left at mile 2 with 9.5/6 miles of platoon behind it; source as above.
func TestP07ClearanceOfThePlatoonBehindATruck(t *testing.T) {
	const exit, length = 2 * mile, 9.5 / 6 * mile
	s := answerOf(t, openRoad(truckStates(t), 20*minute, flat(-mile, exit-length, 20*perMile),
		flat(exit-length, exit, 100*perMile), flat(exit, 8*mile, 50*perMile)))
	head := jumpBetween(t, s, minute, 100*perMile, 50*perMile)
	tail := jumpBetween(t, s, minute, 20*perMile, 100*perMile)
	const clearing = length / (8.5 * mph)
	agree(t, "vehicles in the platoon", at(t, s, exit-length, 0).Count-at(t, s, exit, 0).Count, 950.0/6)
	agree(t, "head [mi/h]", head.Speed(minute)/mph, -6)
	agree(t, "head and tail meet [h]", head.End.Time/hour, clearing/hour)
	agreeWithin(t, "as published [min]", head.End.Time/minute, 11.2, 0.05)
	agree(t, "where [mi]", head.End.Place/mile, 2-6*clearing/hour)
	agreeWithin(t, "where, as recomputed [mi]", head.End.Place/mile, 0.882353, 5e-7)
	agree(t, "tail ends there too [mi]", tail.End.Place/mile, 2-6*clearing/hour)
	agree(t, "what is left [mi/h]", jumpBetween(t, s, 15*minute, 20*perMile, 50*perMile).Speed(15*minute)/mph, 500.0/30)
}

// P08, after the truck has left at km 10 with 45/7 km of queue behind it, and the tail until then.
// Source: Newell, A moving bottleneck, Transportation Research B 32 (1998) 531-537 (theory, not read).
func TestP08ClearanceAfterAMovingBottleneck(t *testing.T) {
	const exit, length = 10 * kilometre, 45.0 / 7 * kilometre
	r := triangle(t, solver.TriangularParams{FreeSpeed: 100 * kmh, Capacity: 5000 * perHour, JamDensity: 300 * perKm})
	agree(t, "backward wave [km/h]", r.WaveSpeed(300*perKm)/kmh, -20)
	agree(t, "passing rate seen from the truck [veh/h]", (r.Capacity()/2-40*kmh*25*perKm)/perHour, 1500)
	s := answerOf(t, openRoad(r, 15*minute, flat(0, exit-length, 40*perKm),
		flat(exit-length, exit, 75*perKm), flat(exit, 15*kilometre, 25*perKm)))
	tail := jumpBetween(t, s, minute, 40*perKm, 75*perKm)
	head := jumpBetween(t, s, minute, 75*perKm, 50*perKm)
	agree(t, "tail [km/h]", tail.Speed(minute)/kmh, 100.0/7)
	agree(t, "growth behind the truck [km/h]", 40-tail.Speed(minute)/kmh, 180.0/7)
	agree(t, "queue when it leaves [veh]", length*75*perKm, 3375.0/7)
	agree(t, "head [km/h]", head.Speed(minute)/kmh, -20)
	agree(t, "they meet [min]", head.End.Time/minute, 11.25)
	agree(t, "where [km]", head.End.Place/kilometre, 6.25)
	agree(t, "tail ends there too [km]", tail.End.Place/kilometre, 6.25)
}
