package service

import (
	"math"
	"reflect"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// everything uses every input of the contract, in numbers that are round in SI too.
const everything = `{"scenario": {
	"title": "all inputs",
	"origin_m": 100,
	"segments": [
		{"name": "a", "length_m": 1000, "lanes": 2, "relation": {"triangular": {"free_speed_km_per_h": 72, "capacity_veh_per_h": 1800, "wave_speed_km_per_h": 18}}},
		{"name": "b", "length_m": 500, "relation": {"trapezoidal": {"free_speed_km_per_h": 72, "capacity_veh_per_h": 1440, "jam_density_veh_per_km": 125, "wave_speed_km_per_h": 18}}},
		{"length_m": 500, "relation": {"piecewise_linear": {"corners": [{}, {"density_veh_per_km": 20, "flow_veh_per_h": 1440}, {"density_veh_per_km": 40, "flow_veh_per_h": 1800}, {"density_veh_per_km": 140}]}}}
	],
	"bottlenecks": [{"name": "works", "place_m": 400, "capacity": [
		{"start_s": 0, "flow_veh_per_h": 0},
		{"start_s": 60, "flow_veh_per_h": 720, "end_flow_veh_per_h": 1440},
		{"start_s": 160, "unrestricted": true}]}],
	"signals": [
		{"name": "s1", "place_m": 900, "saturation_flow_veh_per_h": 1800, "cycle": {"cycle_s": 60, "offset_s": 10, "greens": [{"start_s": 5, "end_s": 30}]}},
		{"name": "s2", "place_m": 1200, "windows": {"greens": [{"start_s": 0, "end_s": 100}, {"start_s": 150, "end_s": 3600}]}}],
	"entry": {"demand": [{"start_s": 0, "flow_veh_per_h": 360}, {"start_s": 100, "flow_veh_per_h": 360, "end_flow_veh_per_h": 1080}], "excess": "EXCESS_DEMAND_TURNS_AWAY"},
	"exit": {"capacity": [{"start_s": -30, "flow_veh_per_h": 1440}]},
	"initial": {
		"profile": [{"start_m": 100, "end_m": 1100, "start_density_veh_per_km": 10, "end_density_veh_per_km": 30}, {"start_m": 1100, "end_m": 2100, "start_density_veh_per_km": 5}],
		"standing_queues": [{"node": "works", "vehicles": 12}, {"node": "exit", "length_m": 40}]},
	"horizon_s": 300
}}`

func convert(t *testing.T, text string) (solver.Scenario, *violations) {
	t.Helper()
	req := &pb.SolveRequest{}
	if err := protojson.Unmarshal([]byte(text), req); err != nil {
		t.Fatal(err)
	}
	return check(req, Limits{}.withDefaults())
}

func TestEveryInputReachesTheSolverInSI(t *testing.T) {
	got, bad := convert(t, everything)
	if !bad.empty() {
		t.Fatalf("refused: %v", bad.list)
	}
	inf := math.Inf(1)
	want := solver.Scenario{
		Origin: 100,
		Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 400, Capacity: solver.Schedule{
			{Start: 0}, {Start: 60, Rate: 0.2, Slope: 0.002}, {Start: 160, Rate: inf}}}},
		Signals: []solver.Signal{
			{Name: "s1", Place: 900, SaturationFlow: 0.5, Plan: solver.Plan{Cycle: 60, Offset: 10, Greens: []solver.Window{{Start: 5, End: 30}}}},
			{Name: "s2", Place: 1200, SaturationFlow: inf, Plan: solver.Plan{Greens: []solver.Window{{Start: 0, End: 100}, {Start: 150, End: 3600}}}}},
		Entry: solver.Entry{Demand: solver.Schedule{{Start: 0, Rate: 0.1}, {Start: 100, Rate: 0.1, Slope: 0.001}}, Excess: solver.TurnsAway},
		Exit:  solver.Exit{Capacity: solver.Schedule{{Start: -30, Rate: 0.4}}},
		Initial: solver.Initial{
			Profile: []solver.ProfilePiece{
				{Start: 100, End: 1100, StartDensity: 0.01, EndDensity: 0.03},
				{Start: 1100, End: 2100, StartDensity: 0.005, EndDensity: 0.005}},
			Queues: []solver.StandingQueue{{Node: "works", Vehicles: 12}, {Node: "exit", Length: 40}}},
		Horizon: 300,
	}
	segments := got.Segments
	got.Segments = nil
	if !reflect.DeepEqual(got, want) {
		t.Errorf("got\n%+v\nwant\n%+v", got, want)
	}
	checkRelations(t, segments)
}

// checkRelations compares what the relations say with numbers worked out by hand.
func checkRelations(t *testing.T, segments []solver.Segment) {
	t.Helper()
	for i, want := range []struct {
		name                              string
		length, capacity, jam, free, crit float64
	}{
		{"a", 1000, 1.0, 0.25, 20, 0.05},  // two lanes of 0.5 veh/s, 0.125 veh/m
		{"b", 500, 0.4, 0.125, 20, 0.045}, // plateau from 0.02 to 0.125-0.4/5
		{"", 500, 0.5, 0.14, 20, 0.04},
	} {
		r := segments[i].Relation
		_, crit := r.CriticalDensity()
		got := []float64{segments[i].Length, r.Capacity(), r.JamDensity(), r.FreeSpeed(), crit}
		for j, x := range []float64{want.length, want.capacity, want.jam, want.free, want.crit} {
			if math.Abs(got[j]-x) > 1e-12*x {
				t.Errorf("segment %d: got %v, want %+v", i, got, want)
				break
			}
		}
		if segments[i].Name != want.name {
			t.Errorf("segment %d is called %q, want %q", i, segments[i].Name, want.name)
		}
	}
}

func TestCurvedRelationsReachTheSolver(t *testing.T) {
	got, bad := convert(t, `{"scenario": {"horizon_s": 60, "segments": [
		{"length_m": 500, "lanes": 0.5, "relation": {"greenshields": {"free_speed_km_per_h": 72, "jam_density_veh_per_km": 100}}},
		{"length_m": 500, "relation": {"quadratic_free": {"free_speed_km_per_h": 72, "critical_speed_km_per_h": 54, "critical_density_veh_per_km": 30, "jam_density_veh_per_km": 120}}}]}}`)
	if !bad.empty() {
		t.Fatalf("refused: %v", bad.list)
	}
	if c := got.Segments[0].Relation.Capacity(); math.Abs(c-0.25) > 1e-15 { // 0.5 lanes * 20 m/s * 0.1 veh/m / 4
		t.Errorf("half a Greenshields lane carries %g veh/s, want 0.25", c)
	}
	if c := got.Segments[1].Relation.Capacity(); math.Abs(c-0.45) > 1e-15 { // 15 m/s * 0.03 veh/m
		t.Errorf("the quadratic-free lane carries %g veh/s, want 0.45", c)
	}
}

// TestAFallToZeroIsNotTakenForLess: over awkward spans, the slope of a capacity that falls to exactly zero must not
// round to one that falls below.
func TestAFallToZeroIsNotTakenForLess(t *testing.T) {
	zero := 0.0
	for i := 1; i < 2000; i++ {
		c := converter{request: &pb.SolveRequest{Scenario: &pb.Scenario{HorizonS: 1e6}}, bad: &violations{}}
		p := solver.SchedulePiece{Start: 0.1 * float64(i), Rate: flowToSI(1000 + 7*float64(i))}
		end := p.Start + 1 + 0.37*float64(i)
		p.Slope = c.slope(p, &zero, end, "x")
		if e := p.Rate + p.Slope*(end-p.Start); e < 0 || e > 1e-14 {
			t.Fatalf("case %d ends at %g", i, e)
		}
	}
}
