package solver_test

import "testing"

// P27. Two lanes in the direction; minutes from 16:30. Source: a problem of Mannering & Washburn; text read at
// essaywritingpros.com/2023/05/17/traffic-analysis-at-highway-bottlenecks. Two pages print wrong answers:
// homeworksource.com/p/990803 (4.2 min, 100 veh) and studyx.ai/homework/113215488 (67.5 min, 500 veh).
func TestP27RubberneckingInStages(t *testing.T) {
	p := pointQueue{schedule(minute, perHour, 0, 3200), schedule(minute, perHour, 0, 2400, 15, 3000, 30, 3600), 2 * hour}
	p.check(t, queueFacts{
		queue:  map[float64]float64{15 * minute: 200, 30 * minute: 250, 60 * minute: 50},
		clears: 67.5 * minute, affected: 3600, total: 9562.5 * minute,
	})
	s := p.atEntry(t)
	average := totals(t, s, 67.5*minute).WaitingTime / 3600 / minute
	agree(t, "average [min]", average, 2.65625)
	agree(t, "average queue [veh]", totals(t, s, 67.5*minute).WaitingTime/(67.5*minute), 9562.5/67.5)
	differ(t, "average [min]", average, 4.2, 0.05)
	differ(t, "average [min]", average, 67.5, 0.05)
	for _, wrong := range []float64{100, 500} {
		differ(t, "largest queue [veh]", totals(t, s, 30*minute).Waiting, wrong, 0.5)
	}
}

// P28. Source: CEE 207, Lehigh University (course page file, 2014); read at coursehero.com/file/8890743, scenario A.
func TestP28ClosureThenOneLaneThenTwo(t *testing.T) {
	p := pointQueue{schedule(minute, perHour, 0, 4000), schedule(minute, perHour, 0, 0, 15, 1500, 35, 4800), 4 * hour}
	p.check(t, queueFacts{
		queue:  map[float64]float64{15 * minute: 1000, 35 * minute: 5500.0 / 3},
		clears: 172.5 * minute, affected: 11500, total: 161875 * minute,
		waits: map[float64]float64{7.5 * minute: 27.5 * minute, 3: 15*minute + 5},
	})
	for arrival := 0.0; arrival < 170*minute; arrival += minute {
		wait := must(p.atEntry(t).TravelTime(0, 900, arrival))(t).WaitOutside
		if wait > 27.5*minute*(1+exactness) {
			t.Errorf("the vehicle of minute %g waits %g min, longer than the longest", arrival/minute, wait/minute)
		}
	}
}

// P29. Source: studyx.ai/homework/112497236, which prints 63 000 veh min and 2400 vehicles: wrong.
func TestP29Resurfacing(t *testing.T) {
	p := pointQueue{schedule(minute, perMinute, 0, 80), schedule(minute, perMinute, 0, 60, 30, 120), hour}
	p.check(t, queueFacts{
		queue:  map[float64]float64{20 * minute: 400, 30 * minute: 600},
		clears: 45 * minute, affected: 3600, total: 13500 * minute,
	})
	end := totals(t, p.atEntry(t), 45*minute)
	agree(t, "average [min]", end.WaitingTime/end.Entered/minute, 3.75)
	agree(t, "queue at 4.5 m a vehicle [m]", totals(t, p.atEntry(t), 30*minute).Waiting*4.5, 2700)
	differ(t, "total [veh min]", end.WaitingTime/minute, 63000, 1)
	differ(t, "affected [veh]", end.Entered, 2400, 1)
}

// P30. Hours from noon. Source: J. Buckholz, University of North Florida queuing notes, D/D/1 example 6; read at
// buckholztraffic.com/UNF/P_queuing/Queuing_Notes_files/sheet003.htm, which prints 200 veh h: wrong.
func TestP30TwoDemandLevelsOneCapacity(t *testing.T) {
	p := pointQueue{schedule(hour, perHour, 0, 200, 2, 125), schedule(hour, perHour, 0, 150), 8 * hour}
	p.check(t, queueFacts{
		queue:  map[float64]float64{hour: 50, 2 * hour: 100, 4 * hour: 50},
		clears: 6 * hour, affected: 900, total: 300 * hour,
	})
	differ(t, "total [veh h]", totals(t, p.atEntry(t), 6*hour).WaitingTime/hour, 200, 1)
}

// P31. Source: Mannering & Washburn, Principles of Highway Engineering and Traffic Analysis, ch. 5, guided problem;
// read at academicheros.com/2023/05/17/d-d-1-queuing-with-time-invariant...
func TestP31GateOpensWhenThirtyAreWaiting(t *testing.T) {
	arrivals := schedule(minute, perMinute, 0, 6, 15, 2)
	closed := pointQueue{arrivals, schedule(minute, perMinute, 0, 0, 30, 6), hour}
	agree(t, "waiting at 5 min [veh]", totals(t, closed.atEntry(t), 5*minute).Waiting, 30)
	p := pointQueue{arrivals, schedule(minute, perMinute, 0, 0, 5, 4), hour}
	agree(t, "arrivals by 15 min [veh]", totals(t, p.atEntry(t), 15*minute).Waiting+totals(t, p.atEntry(t), 15*minute).Entered, 90)
	p.check(t, queueFacts{
		queue:  map[float64]float64{5 * minute: 30, 15 * minute: 50, 30 * minute: 20},
		clears: 40 * minute, affected: 140, total: 1100 * minute,
	})
}

// P32. Minutes from 07:00. Source: inputs read at bnc-prod... "Vehicles begin to arrive to a parking lot at 7:00 AM".
func TestP32ArrivalAndServiceBothChange(t *testing.T) {
	p := pointQueue{schedule(minute, perHour, 0, 2000, 30, 1000), schedule(minute, perHour, 0, 1000, 15, 2000), 2 * hour}
	p.check(t, queueFacts{
		queue:  map[float64]float64{15 * minute: 250, 20 * minute: 250, 30 * minute: 250},
		clears: 45 * minute, affected: 1250, total: 125 * hour,
		waits: map[float64]float64{15 * minute: 7.5 * minute, 90 * minute: 0}, // the 500th and the 2000th vehicle
	})
}

// P33. Source: inputs read at wizedu.com/questions/947447.
func TestP33ArterialCollision(t *testing.T) {
	p := pointQueue{schedule(minute, perHour, 0, 3600), schedule(minute, perHour, 0, 1800, 45, 6000), 2 * hour}
	p.check(t, queueFacts{
		queue:  map[float64]float64{45 * minute: 1350},
		clears: 78.75 * minute, affected: 4725, total: 885.9375 * hour,
	})
}

// P34. Source: share of capacity from HCM 2010 Exhibit 10-17, as in Table 40 of FHWA-HOP-13-042, appendix C; the
// scenario is chosen here.
func TestP34HandbookIncidentOneLaneOfThreeBlocked(t *testing.T) {
	const capacity, demand, duration = 3 * 2350.0, 4800.0, 30 * minute
	const open = 0.49 * capacity
	const queue = (demand - open) * duration / hour
	const clearing = queue / (capacity - demand) * hour
	p := pointQueue{schedule(1, perHour, 0, demand), schedule(1, perHour, 0, open, duration, capacity), 2 * hour}
	p.check(t, queueFacts{
		queue:  map[float64]float64{duration: queue},
		clears: duration + clearing, affected: demand * (duration + clearing) / hour, total: queue * (duration + clearing) / 2,
	})
	end := totals(t, p.atEntry(t), duration+clearing)
	agreeWithin(t, "remaining capacity [veh/h]", open, 3454.5, 1e-9)
	agreeWithin(t, "largest queue [veh]", totals(t, p.atEntry(t), duration).Waiting, 672.75, 1e-6)
	agreeWithin(t, "clears after reopening [min]", clearing/minute, 17.94, 1e-9)
	agreeWithin(t, "affected [veh]", end.Entered, 3835.2, 1e-5)
	agreeWithin(t, "total [veh h]", end.WaitingTime/hour, 268.7636, 5e-5)
	agreeWithin(t, "average [min]", end.WaitingTime/end.Entered/minute, 4.20469, 5e-6)
}
