package service_test

import (
	"context"
	"errors"
	"strings"
	"testing"

	"google.golang.org/grpc/codes"

	"github.com/roadswell/roadswell/client"
	"github.com/roadswell/roadswell/service"
)

// The pieces of requests that the tables below put together.
const (
	goodRoad   = `"segments": [{"name": "road", "length_m": 1000, "relation": {"triangular": {"free_speed_km_per_h": 72, "capacity_veh_per_h": 1800, "wave_speed_km_per_h": 18}}}]`
	curvedRoad = `"segments": [{"length_m": 1000, "relation": {"greenshields": {"free_speed_km_per_h": 72, "jam_density_veh_per_km": 100}}}]`
)

func scenario(inner string) string {
	return `{"scenario": {"horizon_s": 600, ` + inner + `}}`
}

func onRoad(inner string) string { return scenario(goodRoad + ", " + inner) }

func segment(inner string) string { return scenario(`"segments": [{"length_m": 1000, ` + inner + `}]`) }

func asking(question string) string {
	return `{"scenario": {"horizon_s": 600, ` + goodRoad + `}, "questions": [{` + question + `}]}`
}

// fieldCases take each reason for refusing a field from the input through client, server and solver and back.
var fieldCases = []struct {
	name, request, field, reason string
	words                        []string // that the description must hold, in the contract's units
}{
	{"no scenario", `{}`, "scenario", "REQUIRED", nil},
	{"no segment", `{"scenario": {"horizon_s": 60}}`, "scenario.segments", "REQUIRED", nil},
	{"no horizon", `{"scenario": {` + goodRoad + `}}`, "scenario.horizon_s", "POSITIVE", []string{"is 0"}},
	{"length below zero", scenario(`"segments": [{"length_m": -3, "relation": {"greenshields": {"free_speed_km_per_h": 72, "jam_density_veh_per_km": 100}}}]`), "scenario.segments[0].length_m", "RANGE", []string{"is -3", "between 0.01 m and 10000000 m"}},
	{"length not a number", scenario(`"segments": [{"length_m": "NaN", "relation": {"greenshields": {"free_speed_km_per_h": 72, "jam_density_veh_per_km": 100}}}]`), "scenario.segments[0].length_m", "FINITE", []string{"is NaN"}},
	{"infinite flow is no way to say unrestricted", onRoad(`"bottlenecks": [{"name": "b", "place_m": 500, "capacity": [{"flow_veh_per_h": "Infinity"}]}]`), "scenario.bottlenecks[0].capacity[0].flow_veh_per_h", "FINITE", []string{"is +Inf"}},
	{"no relation", segment(`"lanes": 2`), "scenario.segments[0].relation", "REQUIRED", nil},
	{"no lanes", segment(`"lanes": 0, "relation": {"greenshields": {"free_speed_km_per_h": 72, "jam_density_veh_per_km": 100}}`), "scenario.segments[0].lanes", "POSITIVE", []string{"is 0"}},
	{"two numbers of a triangle", segment(`"relation": {"triangular": {"free_speed_km_per_h": 72, "capacity_veh_per_h": 1800}}`), "scenario.segments[0].relation.triangular", "REQUIRED", []string{"at least three"}},
	{"a zero in a triangle", segment(`"relation": {"triangular": {"free_speed_km_per_h": 72, "capacity_veh_per_h": 1800, "wave_speed_km_per_h": 18, "jam_density_veh_per_km": 0}}`), "scenario.segments[0].relation.triangular.jam_density_veh_per_km", "POSITIVE", []string{"is 0"}},
	{"four numbers that disagree", segment(`"relation": {"triangular": {"free_speed_km_per_h": 72, "capacity_veh_per_h": 1900, "wave_speed_km_per_h": 18, "jam_density_veh_per_km": 125}}`), "scenario.segments[0].relation.triangular.capacity_veh_per_h", "CONFLICT", []string{"is 1900", "1800"}},
	{"a plateau above the apex", segment(`"relation": {"trapezoidal": {"free_speed_km_per_h": 72, "capacity_veh_per_h": 1900, "wave_speed_km_per_h": 18, "jam_density_veh_per_km": 125}}`), "scenario.segments[0].relation.trapezoidal.capacity_veh_per_h", "RANGE", []string{"is 1900", "at most 1800"}},
	{"speed below zero", segment(`"relation": {"greenshields": {"free_speed_km_per_h": -72, "jam_density_veh_per_km": 100}}`), "scenario.segments[0].relation.greenshields.free_speed_km_per_h", "POSITIVE", []string{"is -72"}},
	{"a speed beyond all vehicles", segment(`"relation": {"greenshields": {"free_speed_km_per_h": 36000, "jam_density_veh_per_km": 100}}`), "scenario.segments[0].relation.greenshields.free_speed_km_per_h", "RANGE", []string{"is 36000", "3600 km/h"}},
	{"a relation that is not concave", segment(`"relation": {"piecewise_linear": {"corners": [{}, {"density_veh_per_km": 20, "flow_veh_per_h": 600}, {"density_veh_per_km": 40, "flow_veh_per_h": 1800}, {"density_veh_per_km": 140}]}}`), "scenario.segments[0].relation.piecewise_linear.corners[1]", "CONCAVE", []string{"30 to 60 km/h"}},
	{"corners out of order", segment(`"relation": {"piecewise_linear": {"corners": [{}, {"density_veh_per_km": 40, "flow_veh_per_h": 1800}, {"density_veh_per_km": 20, "flow_veh_per_h": 600}, {"density_veh_per_km": 140}]}}`), "scenario.segments[0].relation.piecewise_linear.corners[2].density_veh_per_km", "ORDER", []string{"is 20", "40"}},
	{"a critical speed too low", segment(`"relation": {"quadratic_free": {"free_speed_km_per_h": 72, "critical_speed_km_per_h": 30, "critical_density_veh_per_km": 30, "jam_density_veh_per_km": 120}}`), "scenario.segments[0].relation.quadratic_free.critical_speed_km_per_h", "CONCAVE", []string{"is 30", "36"}},
	{"two bottlenecks of one name", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300, "capacity": [{"flow_veh_per_h": 600}]}, {"name": "b", "place_m": 500, "capacity": [{"flow_veh_per_h": 600}]}]`), "scenario.bottlenecks[1].name", "UNIQUE", []string{`is "b"`}},
	{"the name of an end", onRoad(`"bottlenecks": [{"name": "exit", "place_m": 300, "capacity": [{"flow_veh_per_h": 600}]}]`), "scenario.bottlenecks[0].name", "UNIQUE", []string{`is "exit"`}},
	{"a bottleneck beyond the exit", onRoad(`"bottlenecks": [{"name": "b", "place_m": 1300, "capacity": [{"flow_veh_per_h": 600}]}]`), "scenario.bottlenecks[0].place_m", "RANGE", []string{"is 1300", "from 0 m to 1000 m"}},
	{"a bottleneck that restricts nothing", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300}]`), "scenario.bottlenecks[0].capacity", "REQUIRED", nil},
	{"a step that says neither", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300, "capacity": [{"start_s": 5}]}]`), "scenario.bottlenecks[0].capacity[0]", "REQUIRED", []string{"unrestricted"}},
	{"not unrestricted", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300, "capacity": [{"unrestricted": false}]}]`), "scenario.bottlenecks[0].capacity[0].unrestricted", "RANGE", []string{"is false"}},
	{"unrestricted, but with an end", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300, "capacity": [{"unrestricted": true, "end_flow_veh_per_h": 5}]}]`), "scenario.bottlenecks[0].capacity[0].end_flow_veh_per_h", "CONFLICT", nil},
	{"a capacity below zero", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300, "capacity": [{"flow_veh_per_h": -600}]}]`), "scenario.bottlenecks[0].capacity[0].flow_veh_per_h", "NOT_NEGATIVE", []string{"is -600"}},
	{"a capacity that ends below zero", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300, "capacity": [{"flow_veh_per_h": 600, "end_flow_veh_per_h": -5}]}]`), "scenario.bottlenecks[0].capacity[0].end_flow_veh_per_h", "NOT_NEGATIVE", []string{"is -5"}},
	{"a last step that begins after its end", onRoad(`"bottlenecks": [{"name": "b", "place_m": 300, "capacity": [{"start_s": 700, "flow_veh_per_h": 600, "end_flow_veh_per_h": 5}]}]`), "scenario.bottlenecks[0].capacity[0].end_flow_veh_per_h", "CONFLICT", []string{"horizon"}},
	{"steps out of order", onRoad(`"entry": {"demand": [{"start_s": 60, "flow_veh_per_h": 600}, {"start_s": 30, "flow_veh_per_h": 600}]}`), "scenario.entry.demand[1].start_s", "ORDER", []string{"is 30", "60"}},
	{"a signal without a plan", onRoad(`"signals": [{"name": "s", "place_m": 300}]`), "scenario.signals[0]", "REQUIRED", []string{"cycle or windows"}},
	{"a cycle of no length", onRoad(`"signals": [{"name": "s", "place_m": 300, "cycle": {"greens": [{"end_s": 10}]}}]`), "scenario.signals[0].cycle.cycle_s", "POSITIVE", []string{"is 0"}},
	{"a green beyond the cycle", onRoad(`"signals": [{"name": "s", "place_m": 300, "cycle": {"cycle_s": 60, "greens": [{"start_s": 50, "end_s": 70}]}}]`), "scenario.signals[0].cycle.greens[0].end_s", "RANGE", []string{"is 70", "60 s", "in two"}},
	{"a green that ends before it starts", onRoad(`"signals": [{"name": "s", "place_m": 300, "windows": {"greens": [{"start_s": 50, "end_s": 40}]}}]`), "scenario.signals[0].windows.greens[0].end_s", "ORDER", []string{"is 40", "50"}},
	{"no saturation flow at all", onRoad(`"signals": [{"name": "s", "place_m": 300, "saturation_flow_veh_per_h": 0, "windows": {}}]`), "scenario.signals[0].saturation_flow_veh_per_h", "POSITIVE", []string{"is 0"}},
	{"an unknown fate", onRoad(`"entry": {"excess": 7}`), "scenario.entry.excess", "UNKNOWN", []string{"is 7"}},
	{"a profile with a gap", onRoad(`"initial": {"profile": [{"start_m": 0, "end_m": 400}, {"start_m": 500, "end_m": 1000}]}`), "scenario.initial.profile[1].start_m", "COVER", []string{"is 500"}},
	{"denser than a jam", onRoad(`"initial": {"profile": [{"start_m": 0, "end_m": 1000, "start_density_veh_per_km": 126}]}`), "scenario.initial.profile[0].start_density_veh_per_km", "RANGE", []string{"is 126", "125"}},
	{"a background beyond capacity", onRoad(`"initial": {"background_flow_veh_per_h": 1801}`), "scenario.initial.background_flow_veh_per_h", "RANGE", []string{"is 1801", "1800"}},
	{"both backgrounds", onRoad(`"initial": {"background_flow_veh_per_h": 5, "profile": [{"start_m": 0, "end_m": 1000}]}`), "scenario.initial.background_flow_veh_per_h", "CONFLICT", nil},
	{"a queue behind nothing", onRoad(`"initial": {"standing_queues": [{"node": "mole", "vehicles": 5}]}`), "scenario.initial.standing_queues[0].node", "UNKNOWN", []string{`is "mole"`, `"exit"`}},
	{"a queue of no size", onRoad(`"initial": {"standing_queues": [{"node": "exit"}]}`), "scenario.initial.standing_queues[0]", "REQUIRED", []string{"vehicles or length_m"}},
	{"a queue that does not fit", onRoad(`"bottlenecks": [{"name": "b", "place_m": 500, "capacity": [{"flow_veh_per_h": 0}]}], "initial": {"standing_queues": [{"node": "b", "length_m": 501}]}`), "scenario.initial.standing_queues[0].length_m", "FITS", []string{"is 501", "fits"}},
	{"a sloped demand on a curved relation", scenario(curvedRoad + `, "entry": {"demand": [{"flow_veh_per_h": 100, "end_flow_veh_per_h": 200}]}`), "scenario.entry.demand[0].end_flow_veh_per_h", "CLOSED_FORM", []string{"steps"}},
	{"a question of nothing", asking(``), "questions[0]", "REQUIRED", nil},
	{"a long label", asking(`"label": "` + strings.Repeat("x", 201) + `", "totals": {}`), "questions[0].label", "LIMIT", []string{"201"}},
	{"a point beyond the exit", asking(`"states": {"points": [{"place_m": 1001}]}`), "questions[0].states.points[0].place_m", "RANGE", []string{"is 1001", "1000 m"}},
	{"a point after the horizon", asking(`"states": {"points": [{"time_s": 601}]}`), "questions[0].states.points[0].time_s", "RANGE", []string{"is 601", "600 s"}},
	{"no point", asking(`"states": {}`), "questions[0].states.points", "REQUIRED", nil},
	{"a grid without times", asking(`"grid": {"places_m": [5]}`), "questions[0].grid.times_s", "REQUIRED", nil},
	{"an unknown quantity", asking(`"grid": {"places_m": [5], "times_s": [5], "quantities": [9]}`), "questions[0].grid.quantities[0]", "UNKNOWN", []string{"is 9"}},
	{"an unknown kind of front", asking(`"fronts": {"kinds": [0]}`), "questions[0].fronts.kinds[0]", "UNKNOWN", nil},
	{"a tolerance of nothing", asking(`"fronts": {"path_tolerance_m": 0}`), "questions[0].fronts.path_tolerance_m", "RANGE", []string{"is 0", "0.001"}},
	{"an unknown node", asking(`"queues": {"nodes": ["exit", "mole"]}`), "questions[0].queues.nodes[1]", "UNKNOWN", []string{`is "mole"`, `"entry"`}},
	{"a trip backwards", asking(`"travel_times": {"from_m": 500, "to_m": 400, "departures_s": [0]}`), "questions[0].travel_times.to_m", "ORDER", []string{"is 400", "500"}},
	{"a departure that is not a number", asking(`"travel_times": {"departures_s": [0, "NaN"]}`), "questions[0].travel_times.departures_s[1]", "FINITE", []string{"NaN"}},
	{"a start after the horizon", asking(`"trajectories": {"starts": [{"place_m": 3, "time_s": 700}]}`), "questions[0].trajectories.starts[0].time_s", "RANGE", []string{"is 700"}},
}

func TestFieldsThatCannotBeAccepted(t *testing.T) {
	c := serve(t, service.Options{})
	for _, x := range fieldCases {
		t.Run(x.name, func(t *testing.T) {
			_, err := c.Solve(context.Background(), request(t, x.request))
			var refused *client.Error
			if !errors.As(err, &refused) {
				t.Fatalf("not refused: %v", err)
			}
			if refused.Code != codes.InvalidArgument || refused.Reason != client.ReasonInvalidRequest || len(refused.Fields) != 1 {
				t.Fatalf("refused with %s, %q and %d fields, want one field: %v", refused.Code, refused.Reason, len(refused.Fields), err)
			}
			f := refused.Fields[0]
			if f.Field != x.field || f.Reason != x.reason {
				t.Errorf("refused %s for %s, want %s for %s (%s)", f.Field, f.Reason, x.field, x.reason, f.Description)
			}
			for _, word := range append(x.words, "expected: ") {
				if !strings.Contains(f.Description, word) {
					t.Errorf("%q does not say %q", f.Description, word)
				}
			}
		})
	}
}

// TestEverythingWrongIsReportedAtOnce: relations, nodes, ends and questions in one answer.
func TestEverythingWrongIsReportedAtOnce(t *testing.T) {
	c := serve(t, service.Options{})
	_, err := c.Solve(context.Background(), request(t, `{"scenario": {
		"segments": [{"length_m": 100, "relation": {"greenshields": {"free_speed_km_per_h": -1, "jam_density_veh_per_km": 0}}}],
		"signals": [{"name": "s", "place_m": 50, "cycle": {}}],
		"bottlenecks": [{"place_m": 60, "capacity": [{"flow_veh_per_h": -5}]}],
		"initial": {"standing_queues": [{"node": "mole", "vehicles": 3}]},
		"horizon_s": "Infinity"
	}, "questions": [{"states": {"points": [{"place_m": 101}]}}, {}, {"queues": {"nodes": ["s", "mole"]}}]}`))
	var refused *client.Error
	if !errors.As(err, &refused) {
		t.Fatalf("not refused: %v", err)
	}
	got := map[string]string{}
	for _, f := range refused.Fields {
		got[f.Field] = f.Reason
	}
	for field, reason := range map[string]string{
		"scenario.segments[0].relation.greenshields.free_speed_km_per_h":    "POSITIVE",
		"scenario.segments[0].relation.greenshields.jam_density_veh_per_km": "POSITIVE",
		"scenario.signals[0].cycle.cycle_s":                                 "POSITIVE",
		"scenario.bottlenecks[0].name":                                      "REQUIRED",
		"scenario.bottlenecks[0].capacity[0].flow_veh_per_h":                "NOT_NEGATIVE",
		"scenario.horizon_s":                                                "FINITE",
		"questions[0].states.points[0].place_m":                             "RANGE",
		"questions[1]":                                                      "REQUIRED",
		"scenario.initial.standing_queues[0].node":                          "UNKNOWN",
		"questions[2].queues.nodes[1]":                                      "UNKNOWN",
	} {
		if got[field] != reason {
			t.Errorf("%s is refused for %q, want %q; all: %v", field, got[field], reason, got)
		}
	}
}
