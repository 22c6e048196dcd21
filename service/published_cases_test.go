package service_test

import (
	"math"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

const kmPerMile = 1.609344

var (
	tail            = (*pb.QueueExtent).GetTailM
	cleared         = (*pb.Queue).GetClearedS
	peakLength      = (*pb.Queue).GetPeakLengthM
	peakLengthTime  = (*pb.Queue).GetPeakLengthTimeS
	waiting         = (*pb.Totals).GetWaitingVehicles
	waited          = (*pb.Totals).GetWaitingVehicleH
	waitedOutside   = (*pb.Trip).GetWaitingOutsideS
	tripDelay       = (*pb.Trip).GetDelayS
	density         = (*pb.State).GetDensityVehPerKm
	speed           = (*pb.State).GetSpeedKmPerH
	flow            = (*pb.State).GetFlowVehPerH
	entered         = func(x *pb.Totals) float64 { return x.GetCorridor().GetEnteredVehicles() }
	stored          = func(x *pb.Totals) float64 { return x.GetCorridor().GetStoredVehicles() }
	birthPlace      = func(f *pb.Front) float64 { return f.GetBirth().GetPlaceM() }
	birthTime       = func(f *pb.Front) float64 { return f.GetBirth().GetTimeS() }
	endPlace        = func(f *pb.Front) float64 { return f.GetEnd().GetPlaceM() }
	speedAtBirth    = func(f *pb.Front) float64 { return f.GetAtBirth().GetFrontSpeedKmPerH() }
	densityAheadEnd = func(f *pb.Front) float64 { return f.GetAtEnd().GetDownstream().GetDensityVehPerKm() }
)

// publishedCases are the files with their sources. "Read" means in a stored page.
var publishedCases = []publishedCase{
	// Y. Jo, slides "Shock Wave in Traffic Flow" (class of 2011), example; read at
	// scribd.com/presentation/450267499. In mi/h: +11.4.
	{"p01_two_measured_states.json", []expectation{
		{label: "shock", what: "speed", value: frontOf(0, speedAtBirth), exact: 80.0 / 7 * kmPerMile, published: 11.4 * kmPerMile, tolerance: 0.05 * kmPerMile},
		{label: "shock", what: "place after 10 min", value: frontOf(0, endPlace), exact: 80.0 / 7 / 6 * kmPerMile * 1000},
	}},
	// R. Knobel, An Introduction to the Mathematical Theory of Waves; read at
	// 123dok.com/in/article/shock-wave-solution...10473798. Numbers chosen.
	{"p05_red_light.json", []expectation{
		{label: "queue", what: "tail", value: extentOf(0, tail), exact: -400.0 / 3},
		{label: "queue", what: "stopped", value: extentOf(0, (*pb.QueueExtent).GetVehicles), exact: 20},
	}},
	// Lighthill & Whitham 1955, part II; uniform delay of Webster 1958.
	{"p10_signal_cycle.json", []expectation{
		{label: "queue", what: "tail at the end of red", value: extentOf(0, tail), exact: -600.0 / 138 / 3.6 * 50},
		{label: "queue", what: "furthest back", value: queueOf(peakLength), exact: 250.0 / 3},
		{label: "queue", what: "its time", value: queueOf(peakLengthTime), exact: 69},
		{label: "totals", what: "delay of 15 vehicles", value: delayOf(0), exact: 15 * 125.0 / 6 / 3600},
		{label: "totals", what: "delay of 75 vehicles", value: delayOf(1), exact: 75 * 125.0 / 6 / 3600},
		{label: "stop line", what: "passed when it clears", value: passedBetween(0, 1), exact: 12.5},
	}},
	// Fundamentals of Transportation (Wikibooks), Traffic Signals, solution; read in a copy; its arrivals are rounded.
	{"p11_signal_at_the_entry.json", []expectation{
		{label: "totals", what: "largest queue", value: totalsOf(0, waiting), exact: 175.0 / 18, published: 9.66, tolerance: 0.007 * 9.66},
		{label: "totals", what: "queue a second before it clears", value: totalsOf(1, waiting), exact: 2500.0 / 3600},
		{label: "totals", what: "queue when it clears", value: totalsOf(2, waiting), exact: 0, scale: 10},
		{label: "totals", what: "delay", value: totalsOf(3, waited), exact: 1225.0 / 3 / 3600, published: 406.0 / 3600, tolerance: 0.007 * 406 / 3600},
		{label: "waits", what: "in the middle of red", value: tripOf(0, waitedOutside), exact: 35 + 35.0/6},
		{label: "waits", what: "just after the next red began", value: tripOf(1, waitedOutside), exact: 65 + 5.0/6},
	}},
	// Inputs read at staging.sidebar.io/lugar/50246593.
	{"p12_signal_and_work_area.json", []expectation{
		{label: "totals", what: "delay at the light, 200 vehicles", value: segmentDelayOf(0, 0), exact: 200 * 11.25 / 3600},
		{label: "totals", what: "delay at the works, 200 vehicles", value: segmentDelayOf(1, 1), exact: 200 * 18.75 / 3600},
	}},
	// Overflow delay as in Roess, Prassas & McShane, Traffic Engineering.
	{"p14_oversaturated_signal.json", []expectation{
		{label: "totals", what: "residual queue", value: totalsOf(0, waiting), exact: 25},
		{label: "totals", what: "waiting", value: totalsOf(0, waited), exact: 4.0625},
		{label: "totals", what: "discharged", value: totalsOf(0, entered), exact: 225},
	}},
	// Whitham 1974, section 3.1; Haberman, Mathematical Models.
	{"p17_car_in_the_fan.json", []expectation{
		{label: "car", what: "time at -83.3 m", value: passingOf(0), exact: 25},
		{label: "car", what: "time at the light", value: passingOf(1), exact: 36},
		{label: "light", what: "speed there", value: upstreamOf(0, speed), exact: 30},
		{label: "light", what: "flow there", value: upstreamOf(0, flow), exact: 1800},
	}},
	// Lighthill & Whitham 1955, part II; Whitham 1974, section 3.1.
	{"p19_red_and_green.json", []expectation{
		{label: "queue", what: "tail 10 s into green", value: extentOf(0, tail), exact: -500.0 / 3},
		{label: "queue", what: "tail 45 s into green", value: extentOf(1, tail), exact: 375 - 2*1000/60.0*math.Sqrt(3.0/16*30*45)},
		{label: "queue", what: "furthest back", value: queueOf(peakLength), exact: 187.5},
		{label: "queue", what: "its time", value: queueOf(peakLengthTime), exact: 52.5},
		{label: "queue", what: "clears", value: queueOf(cleared), exact: 120},
	}},
	// Problem read at answerhappy.com/viewtopic.php?t=173121 (arrivals inferred).
	{"p20_half_jam_density.json", []expectation{
		{label: "queue", what: "tail at 10 s", value: extentOf(0, tail), exact: -275},
		{label: "queue", what: "tail at 60 s", value: extentOf(1, tail), exact: -600},
	}},
	// Haberman, Mathematical Models; LeVeque 2002, ch. 11.
	{"p21_block_of_stopped_cars.json", []expectation{
		{label: "rear", what: "place at 72 s", value: frontOf(1, endPlace), exact: 300},
		{label: "rear", what: "density ahead at 72 s", value: frontOf(1, densityAheadEnd), exact: 75},
		{label: "rear", what: "begins to move", value: frontOf(1, birthTime), exact: 18},
		{label: "totals", what: "cars at 18 s", value: totalsOf(0, stored), exact: 45},
		{label: "totals", what: "cars at 72 s", value: totalsOf(1, stored), exact: 45},
	}},
	// Whitham 1974, ch. 2-3; Haberman.
	{"p23_linear_ramp.json", []expectation{
		{label: "shock", what: "time of birth", value: frontOf(0, birthTime), exact: 18},
		{label: "shock", what: "place of birth", value: frontOf(0, birthPlace), exact: 100},
		{label: "shock", what: "speed", value: frontOf(0, speedAtBirth), exact: 20},
		{label: "middle", what: "density half-way", value: upstreamOf(0, density), exact: 60},
	}},
	// LeVeque 2002, ch. 11.
	{"p24_two_shocks_merge.json", []expectation{
		{label: "shocks", what: "meet at", value: lastFront(birthTime), exact: 1 / 0.7},
		{label: "shocks", what: "meeting place", value: lastFront(birthPlace), exact: 0.5 / 0.7},
		{label: "shocks", what: "then", value: lastFront(speedAtBirth), exact: 0.36},
		{label: "shocks", what: "place at 3 s", value: lastFront(endPlace), exact: 0.5/0.7 + 0.1*(3-1/0.7)},
	}},
	// CIV ENG 376 homework 8 solution; read at coursehero.com/file/6879355.
	{"p25_accident_and_exit.json", []expectation{
		{label: "queue", what: "just reaches the exit", value: queueOf(peakLength), exact: 5000 * kmPerMile},
		{label: "queue", what: "at", value: queueOf(peakLengthTime), exact: 54 * 60},
		{label: "queue", what: "tail after 20 min", value: extentOf(0, tail), exact: -50.0 / 27 * 1000 * kmPerMile},
		{label: "queue", what: "head 12 min after clearing", value: extentOf(1, (*pb.QueueExtent).GetHeadM), exact: -2500 * kmPerMile},
	}},
	// Mannering & Washburn; read at essaywritingpros.com/2023/05/17/traffic-analysis-at-highway-bottlenecks. (The answers
	// printed at homeworksource.com/p/990803 and studyx.ai/homework/113215488 are wrong.)
	{"p27_rubbernecking.json", []expectation{
		{label: "totals", what: "queue at 16:45", value: totalsOf(0, waiting), exact: 200},
		{label: "totals", what: "largest queue", value: totalsOf(1, waiting), exact: 250},
		{label: "totals", what: "queue at 17:37.5", value: totalsOf(2, waiting), exact: 0, scale: 250},
		{label: "totals", what: "affected", value: totalsOf(2, entered), exact: 3600},
		{label: "totals", what: "delay", value: totalsOf(3, waited), exact: 9562.5 / 60},
	}},
	// CEE 207, Lehigh University, 2014; read at coursehero.com/file/8890743, scenario A.
	{"p28_closure_in_stages.json", []expectation{
		{label: "queue", what: "clears", value: queueOf(cleared), exact: 1800 + 172.5*60},
		{label: "totals", what: "delay", value: delayOf(0), exact: 161875.0 / 60},
		{label: "totals", what: "delay later", value: delayOf(1), exact: 161875.0 / 60},
		{label: "trip", what: "longest delay", value: tripOf(0, tripDelay), exact: 27.5 * 60, published: 27.5 * 60, tolerance: 3},
	}},
	// Inputs read at wizedu.com/questions/947447.
	{"p33_arterial_collision.json", []expectation{
		{label: "queue", what: "clears", value: queueOf(cleared), exact: 1800 + 78.75*60},
		{label: "totals", what: "delay", value: delayOf(0), exact: 885.9375},
	}},
	// Lighthill & Whitham 1955; Newell 1993, parts I-III.
	{"p35_incident_waves.json", []expectation{
		{label: "queue", what: "tail at 10 min", value: extentOf(0, tail), exact: -15000.0 / 11},
		{label: "queue", what: "tail at 20 min", value: extentOf(1, tail), exact: -30000.0 / 11},
		{label: "queue", what: "greatest length", value: queueOf(peakLength), exact: 5000},
		{label: "queue", what: "its time", value: queueOf(peakLengthTime), exact: 2200},
		{label: "totals", what: "delay", value: delayOf(0), exact: 250},
		{label: "trip", what: "longest delay", value: tripOf(0, tripDelay), exact: 600},
		{label: "edge", what: "density past the last wave", value: upstreamOf(0, density), exact: 75},
		{label: "edge", what: "density behind the last wave", value: upstreamOf(1, density), exact: 50},
	}},
	// As P35; 1200 veh/h/ln from Dixon, Hummer & Lorscheider, TRR 1529 (1996).
	{"p36_rural_work_zone.json", []expectation{
		{label: "queue", what: "tail at 1 h", value: extentOf(0, tail), exact: -4.0 / 3 * 0.95 * 1000},
		{label: "queue", what: "tail at 3 h", value: extentOf(1, tail), exact: -300.0 / 231 * 1.05 * 1000},
		{label: "queue", what: "greatest length", value: queueOf(peakLength), exact: 4.0 / 3 * (615.2/304 - 0.05) * 1000},
		{label: "queue", what: "clears", value: queueOf(cleared), exact: 4.05 * 3600},
		{label: "totals", what: "delay", value: delayOf(0), exact: 1200},
		{label: "trip", what: "longest delay", value: tripOf(0, tripDelay), exact: 1800},
	}},
	// GATE question; read at byjus.com/question-answer/a-two-lane-urban-road...
	{"p47_density_from_flow.json", []expectation{
		{label: "state", what: "density", value: upstreamOf(0, density), exact: 200.0 / 3, published: 67, tolerance: 0.5},
	}},
	// Treiber & Kesting, Traffic Flow Dynamics (2013), solution 2.2; read at sciencedocbox.com/Physics/84018967.
	{"p49_space_time_box.json", []expectation{
		{label: "counts", what: "in 20 s", value: passedBetween(0, 1), exact: 11},
		{label: "counts", what: "on 60 m", value: passedBetween(2, 0), exact: 3},
		{label: "counts", what: "density", value: upstreamOf(0, density), exact: 50},
		{label: "counts", what: "speed", value: upstreamOf(0, speed), exact: 39.6},
	}},
}
