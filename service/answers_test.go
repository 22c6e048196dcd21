package service_test

import (
	"context"
	"math"
	"testing"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/service"
)

// The tests in this file work out by hand what happens on the road of [closure]: 900 veh/h (0.25 veh/s, 12.5 veh/km)
// meet a closure at 4,000 m from 600 s to 900 s. The queue is at jam density, 125 veh/km, and its tail moves at
// -0.25/(0.125-0.0125) = -20/9 m/s. From 900 s on it discharges at capacity, 0.5 veh/s; its head moves at -5 m/s and
// meets the tail after another 300*(20/9)/(5-20/9) = 240 s, at 1,140 s, 1,200 m back. The peak is there and then.

// solved asks one question about the closure.
func solved(t *testing.T, q *pb.Question) *pb.SolveResponse {
	t.Helper()
	c := serve(t, service.Options{})
	req := request(t, closure)
	q.Label = "mine"
	req.Questions = []*pb.Question{q}
	out, err := c.Solve(context.Background(), req)
	if err != nil {
		t.Fatal(err)
	}
	if len(out.GetAnswers()) != 1 || out.GetAnswers()[0].GetLabel() != "mine" {
		t.Fatalf("answers do not match questions: %v", out.GetAnswers())
	}
	return out
}

func near(t *testing.T, what string, got, want float64) {
	t.Helper()
	if !(math.Abs(got-want) <= 1e-9*math.Max(1, math.Abs(want))) {
		t.Errorf("%s is %.12g, want %.12g", what, got, want)
	}
}

func TestTheQueueOfAClosure(t *testing.T) {
	out := solved(t, &pb.Question{Ask: &pb.Question_Queues{Queues: &pb.QueuesQuestion{
		Nodes: []string{"closure"}, TimesS: []float64{500, 780, 1140, 1200}, PlacesM: []float64{3600, 2000}, WithPaths: true,
	}}})
	node := out.GetAnswers()[0].GetQueues().GetNodes()[0]
	if node.GetNode() != "closure" || len(node.GetQueues()) != 1 || len(node.GetExtents()) != 4 || len(node.GetReaches()) != 2 {
		t.Fatalf("got %v", node)
	}
	q := node.GetQueues()[0]
	near(t, "start", q.GetStartS(), 600)
	near(t, "clearing", q.GetClearedS(), 1140)
	near(t, "peak length", q.GetPeakLengthM(), 1200)
	near(t, "time of peak length", q.GetPeakLengthTimeS(), 1140)
	near(t, "most vehicles", q.GetPeakVehicles(), 0.125*300*20/9)
	near(t, "time of most vehicles", q.GetPeakVehiclesTimeS(), 900)
	if tail := q.GetTail(); len(tail.GetTimesS()) < 2 || len(tail.GetTimesS()) != len(tail.GetPlacesM()) {
		t.Errorf("tail path %v", tail)
	}
	if len(q.GetStrips()) != 1 {
		t.Fatalf("strips %v", q.GetStrips())
	}
	heads := q.GetStrips()[0].GetHead()
	near(t, "last place of the head", heads.GetPlacesM()[len(heads.GetPlacesM())-1], 2800)
	near(t, "last time of the head", heads.GetTimesS()[len(heads.GetTimesS())-1], 1140)
	checkExtents(t, node)
	near(t, "time at which the queue reaches 3,600 m", node.GetReaches()[0].GetTimeS(), 600+400*9/20.0)
	if node.GetReaches()[1].TimeS != nil {
		t.Errorf("the queue is said to reach 2,000 m at %g s", node.GetReaches()[1].GetTimeS())
	}
}

func checkExtents(t *testing.T, node *pb.NodeQueues) {
	t.Helper()
	before, during, after := node.GetExtents()[0], node.GetExtents()[1], node.GetExtents()[3]
	if before.GetPresent() || after.GetPresent() || !during.GetPresent() {
		t.Fatalf("queue present: %v, %v, %v, want false, true, false", before.GetPresent(), during.GetPresent(), after.GetPresent())
	}
	if before.TailM != nil || before.HeadM != nil {
		t.Error("a queue that is not there has a tail or a head")
	}
	near(t, "tail at 780 s", during.GetTailM(), 3600)
	near(t, "head at 780 s", during.GetHeadM(), 4000)
	near(t, "length at 780 s", during.GetLengthM(), 400)
	near(t, "vehicles at 780 s", during.GetVehicles(), 50)
	if len(during.GetStrips()) != 1 || during.GetStrips()[0].GetTailM() != during.GetTailM() {
		t.Errorf("strips %v", during.GetStrips())
	}
}

// A vehicle that departs at 700 s would pass 4,000 m at 900 s. It has 0.25*(900-600) = 75 vehicles of the queue ahead of
// it, which leave in 150 s: it passes at 1,050 s, 150 s late, and leaves after 50 s more.
func TestTravelTimesThroughAClosure(t *testing.T) {
	out := solved(t, &pb.Question{Ask: &pb.Question_TravelTimes{TravelTimes: &pb.TravelTimesQuestion{
		DeparturesS: []float64{0, 700, 3500},
	}}})
	found := out.GetAnswers()[0].GetTravelTimes()
	near(t, "from", found.GetFromM(), 0)
	near(t, "to", found.GetToM(), 5000)
	free, delayed, late := found.GetTrips()[0], found.GetTrips()[1], found.GetTrips()[2]
	near(t, "free arrival", free.GetArrivalS(), 250)
	near(t, "free delay", free.GetDelayS(), 0)
	near(t, "delayed arrival", delayed.GetArrivalS(), 1100)
	near(t, "delayed travel time", delayed.GetTravelTimeS(), 400)
	near(t, "delay", delayed.GetDelayS(), 150)
	near(t, "free-flow time", delayed.GetFreeFlowTimeS(), 250)
	near(t, "waiting outside", delayed.GetWaitingOutsideS(), 0)
	near(t, "instantaneous time in free flow", free.GetInstantaneousTimeS(), 250)
	if delayed.InstantaneousTimeS != nil {
		t.Errorf("an instantaneous time of %g s through standing traffic", delayed.GetInstantaneousTimeS())
	}
	if late.GetArrived() || late.ArrivalS != nil || late.TravelTimeS != nil || late.DelayS != nil {
		t.Errorf("a trip that has not arrived by the horizon says %v", late)
	}
	near(t, "free-flow time of a trip that has not arrived", late.GetFreeFlowTimeS(), 250)
}

// Delay: the triangle between arrivals and departures at the closure, 75 vehicles that wait up to 300 s, worked off
// over 300 s more (arrivals go on at 0.25 veh/s): half of 300 s * 75 vehicles, twice: 22,500 veh s.
func TestTotalsOfAClosure(t *testing.T) {
	out := solved(t, &pb.Question{Ask: &pb.Question_Totals{Totals: &pb.TotalsQuestion{}}})
	totals := out.GetAnswers()[0].GetTotals().GetTotals()[0]
	c := totals.GetCorridor()
	near(t, "time", totals.GetTimeS(), 3600)
	near(t, "delay", c.GetDelayVehicleH(), 22_500/3600.0)
	near(t, "entered", c.GetEnteredVehicles(), 900)
	near(t, "initial", c.GetInitialVehicles(), 62.5)
	near(t, "stored", c.GetStoredVehicles(), 62.5)
	near(t, "balance", c.GetInitialVehicles()+c.GetEnteredVehicles(), c.GetLeftVehicles()+c.GetStoredVehicles())
	near(t, "distance", c.GetTravelVehicleKm(), 900*5)
	near(t, "time spent", c.GetTravelVehicleH(), 900*250/3600.0+22_500/3600.0)
	if len(totals.GetSegments()) != 1 || totals.GetSegments()[0].GetName() != "road" {
		t.Errorf("segments %v", totals.GetSegments())
	}
}

func TestStatesAroundTheTailOfAClosure(t *testing.T) {
	out := solved(t, &pb.Question{Ask: &pb.Question_States{States: &pb.StatesQuestion{
		Points: []*pb.PlaceTime{{PlaceM: 3600, TimeS: 780}, {PlaceM: 1000, TimeS: 50}},
	}}})
	on, off := out.GetAnswers()[0].GetStates().GetPoints()[0], out.GetAnswers()[0].GetStates().GetPoints()[1]
	if !on.GetOnFront() || off.GetOnFront() {
		t.Errorf("on a front: %v and %v, want true and false", on.GetOnFront(), off.GetOnFront())
	}
	near(t, "density upstream of the tail", on.GetUpstream().GetDensityVehPerKm(), 12.5)
	near(t, "density downstream of it", on.GetDownstream().GetDensityVehPerKm(), 125)
	near(t, "flow upstream", on.GetUpstream().GetFlowVehPerH(), 900)
	near(t, "speed upstream", on.GetUpstream().GetSpeedKmPerH(), 72)
	near(t, "speed downstream", on.GetDownstream().GetSpeedKmPerH(), 0)
	if on.GetUpstream().GetCongested() || !on.GetDownstream().GetCongested() {
		t.Error("congestion is on the wrong side of the tail")
	}
	near(t, "count in free flow", off.GetCountVeh(), 0.25*50-0.0125*1000)
}

func TestAGridHoldsWhatWasAskedFor(t *testing.T) {
	places, times := []float64{1000, 3600, 3900}, []float64{50, 780}
	out := solved(t, &pb.Question{Ask: &pb.Question_Grid{Grid: &pb.GridQuestion{PlacesM: places, TimesS: times}}})
	g := out.GetAnswers()[0].GetGrid()
	for i, want := range []float64{12.5, 12.5, 12.5, 12.5, 12.5, 125} {
		near(t, "density", g.GetDensityVehPerKm()[i], want)
	}
	for i, want := range []float64{72, 72, 72, 72, 72, 0} {
		near(t, "speed", g.GetSpeedKmPerH()[i], want)
	}
	near(t, "flow in the queue", g.GetFlowVehPerH()[5], 0)
	near(t, "count", g.GetCountVeh()[0], 0)
	if two := g.GetTwoSided(); len(two) != 1 || two[0].GetIndex() != 4 || two[0].GetDownstream().GetDensityVehPerKm() != 125 {
		t.Errorf("two-sided points %v, want one at index 4", two)
	}
	out = solved(t, &pb.Question{Ask: &pb.Question_Grid{Grid: &pb.GridQuestion{PlacesM: places, TimesS: times,
		Quantities: []pb.GridQuantity{pb.GridQuantity_GRID_QUANTITY_SPEED, pb.GridQuantity_GRID_QUANTITY_SPEED}}}})
	g = out.GetAnswers()[0].GetGrid()
	if len(g.GetSpeedKmPerH()) != 6 || g.GetDensityVehPerKm() != nil || g.GetFlowVehPerH() != nil || g.GetCountVeh() != nil {
		t.Errorf("asked for speed, got %v", g)
	}
}

func TestTheTailOfAClosureIsAShock(t *testing.T) {
	out := solved(t, &pb.Question{Ask: &pb.Question_Fronts{Fronts: &pb.FrontsQuestion{Kinds: []pb.FrontKind{pb.FrontKind_FRONT_KIND_SHOCK}}}})
	for _, f := range out.GetAnswers()[0].GetFronts().GetFronts() {
		if f.GetKind() != pb.FrontKind_FRONT_KIND_SHOCK || f.GetSegment() != "road" {
			t.Errorf("asked for shocks on the road, got %v", f)
		}
		if f.GetAtBirth().GetDownstream().GetDensityVehPerKm() < 124 {
			continue
		}
		near(t, "birth place", f.GetBirth().GetPlaceM(), 4000)
		near(t, "birth time", f.GetBirth().GetTimeS(), 600)
		near(t, "end place", f.GetEnd().GetPlaceM(), 2800)
		near(t, "end time", f.GetEnd().GetTimeS(), 1140)
		near(t, "speed", f.GetAtBirth().GetFrontSpeedKmPerH(), -8)
		if !f.GetStraight() || f.GetPath().GetToleranceM() != 0 || len(f.GetPath().GetTimesS()) != 2 {
			t.Errorf("its path is not one exact straight line: %v", f.GetPath())
		}
		if f.GetEndsBy() != pb.FrontEnd_FRONT_END_MERGED {
			t.Errorf("it ends by %v", f.GetEndsBy())
		}
		return
	}
	t.Error("no shock at jam density")
}

// On a Greenshields road (90 km/h, 120 veh/km), the shock at the end of green behind a platoon bends. Its law, worked out
// in the contract's own units, must give the path that is reported beside it, and equal densities to those reported at birth.
func TestTheLawOfAShockThatBends(t *testing.T) {
	c := serve(t, service.Options{})
	out, err := c.Solve(context.Background(), request(t, `{"scenario": {
		"segments": [{"length_m": 3000, "relation": {"greenshields": {"free_speed_km_per_h": 90, "jam_density_veh_per_km": 120}}}],
		"signals": [{"name": "s", "place_m": 1500, "windows": {"greens": [{"start_s": 60, "end_s": 600}]}}],
		"entry": {"demand": [{"flow_veh_per_h": 1000}]}, "initial": {"background_flow_veh_per_h": 1000}, "horizon_s": 600},
		"questions": [{"fronts": {"kinds": ["FRONT_KIND_SHOCK"], "path_tolerance_m": 0.01}}]}`))
	if err != nil {
		t.Fatal(err)
	}
	bent := 0
	for _, f := range out.GetAnswers()[0].GetFronts().GetFronts() {
		if f.GetStraight() != (f.GetLaw() == nil) {
			t.Errorf("front %d: straight %v, law %v", f.GetId(), f.GetStraight(), f.GetLaw())
		}
		if f.GetLaw() == nil {
			continue
		}
		bent++
		near(t, "density at birth", f.GetLaw().GetUpstream().GetDensityVehPerKm(), f.GetAtBirth().GetUpstream().GetDensityVehPerKm())
		for i, time := range f.GetPath().GetTimesS() {
			x, h := (f.GetPath().GetPlacesM()[i]-f.GetBirth().GetPlaceM())/1000, (time-f.GetBirth().GetTimeS())/3600
			near(t, "count across the front", countBy(f.GetLaw().GetUpstream(), x, h)-countBy(f.GetLaw().GetDownstream(), x, h), 0)
		}
	}
	if bent == 0 {
		t.Error("no shock bends")
	}
}

// countBy works out the count of a profile a distance (km) and a time (h) from the birth, as the contract says.
func countBy(p *pb.ProfileLaw, x, h float64) float64 {
	xi := x - p.GetWaveSpeedKmPerH()*h
	count := p.GetPassingFlowVehPerH()*h - p.GetDensityVehPerKm()*xi
	if spread := p.GetSpreadKm2PerVeh() + p.GetSpreadRateKm2PerVehH()*h; p.SpreadKm2PerVeh != nil && xi != 0 {
		count -= xi * xi / (2 * spread)
	}
	return count
}

func TestPathsOfVehiclesAndOfDensity(t *testing.T) {
	out := solved(t, &pb.Question{Ask: &pb.Question_Trajectories{Trajectories: &pb.TrajectoriesQuestion{
		Starts: []*pb.PlaceTime{{PlaceM: 0, TimeS: 700}}, PassingPlacesM: []float64{4000, 1000},
	}}})
	tr := out.GetAnswers()[0].GetTrajectories().GetTrajectories()[0]
	if !tr.GetLeftCorridor() {
		t.Error("the vehicle is said not to leave")
	}
	near(t, "end", tr.GetEnd().GetTimeS(), 1100)
	near(t, "passing the closure", tr.GetPassings()[0].GetTimeS(), 1050)
	near(t, "passing 1,000 m", tr.GetPassings()[1].GetTimeS(), 750)
	near(t, "first place of the path", tr.GetPath().GetPlacesM()[0], 0)
	out = solved(t, &pb.Question{Ask: &pb.Question_Characteristics{Characteristics: &pb.CharacteristicsQuestion{
		Starts: []*pb.PlaceTime{{PlaceM: 0, TimeS: 600}, {PlaceM: 0, TimeS: 2000}},
	}}})
	stopped, free := out.GetAnswers()[0].GetCharacteristics().GetCharacteristics()[0], out.GetAnswers()[0].GetCharacteristics().GetCharacteristics()[1]
	if stopped.GetEndsBy() != pb.FrontEnd_FRONT_END_MERGED || free.GetEndsBy() == pb.FrontEnd_FRONT_END_MERGED {
		t.Errorf("they end by %v and %v", stopped.GetEndsBy(), free.GetEndsBy())
	}
	// The tail is at 4,000 - (t-600)*20/9, the characteristic at 20*(t-600): they meet after 180 s.
	times := stopped.GetPath().GetTimesS()
	near(t, "meeting the tail", times[len(times)-1], 780)
}

func TestEveryResponseSaysWhatItIsWorth(t *testing.T) {
	out := solved(t, &pb.Question{Ask: &pb.Question_Totals{Totals: &pb.TotalsQuestion{}}})
	if out.GetCertificate().GetKind() != pb.CertificateKind_CERTIFICATE_KIND_EXACT || out.GetCertificate().CountErrorVeh != nil {
		t.Errorf("certificate %v", out.GetCertificate())
	}
	if out.GetAdvisory() != service.Advisory || out.GetStats().GetInteractions() < 4 || out.GetStats().GetSolveTimeS() <= 0 {
		t.Errorf("advisory %q, stats %v", out.GetAdvisory(), out.GetStats())
	}
	c := out.GetCorridor()
	if len(c.GetNodes()) != 3 || c.GetNodes()[1].GetKind() != pb.NodeKind_NODE_KIND_BOTTLENECK || c.GetNodes()[2].GetName() != "exit" {
		t.Errorf("nodes %v", c.GetNodes())
	}
	near(t, "jam density", c.GetStretches()[0].GetJamDensityVehPerKm(), 125)
	near(t, "critical density", c.GetStretches()[0].GetCriticalDensityVehPerKm(), 25)
	near(t, "capacity", c.GetStretches()[0].GetCapacityVehPerH(), 1800)
}
