package service

import (
	"math"
	"regexp"
	"strconv"
	"strings"

	"google.golang.org/protobuf/reflect/protoreflect"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// scenarioPaths rewrites the solver's field paths into the contract's; "#" stands for an index. The solver's
// schedules and plans have no single counterpart in the contract; those cases are settled in scenarioField.
var scenarioPaths = map[string]string{
	"Origin":                        "origin_m",
	"Segments":                      "segments",
	"Segments#":                     "segments#",
	"Segments#.Name":                "segments#.name",
	"Segments#.Length":              "segments#.length_m",
	"Segments#.Relation":            "segments#.relation",
	"Segments#.Relation.FreeSpeed":  "segments#.relation.{form}.free_speed_km_per_h",
	"Segments#.Relation.Capacity":   "segments#.relation.{form}.capacity_veh_per_h",
	"Segments#.Relation.JamDensity": "segments#.relation.{form}.jam_density_veh_per_km",
	"Segments#.Relation.WaveSpeed":  "segments#.relation.{form}.wave_speed_km_per_h",
	"Bottlenecks":                   "bottlenecks",
	"Bottlenecks#":                  "bottlenecks#",
	"Bottlenecks#.Name":             "bottlenecks#.name",
	"Bottlenecks#.Place":            "bottlenecks#.place_m",
	"Bottlenecks#.Capacity":         "bottlenecks#.capacity",
	"Bottlenecks#.Capacity#":        "bottlenecks#.capacity#",
	"Bottlenecks#.Capacity#.Start":  "bottlenecks#.capacity#.start_s",
	"Bottlenecks#.Capacity#.Rate":   "bottlenecks#.capacity#.flow_veh_per_h",
	"Bottlenecks#.Capacity#.Slope":  "bottlenecks#.capacity#.end_flow_veh_per_h",
	"Signals":                       "signals",
	"Signals#":                      "signals#",
	"Signals#.Name":                 "signals#.name",
	"Signals#.Place":                "signals#.place_m",
	"Signals#.SaturationFlow":       "signals#.saturation_flow_veh_per_h",
	"Signals#.Plan":                 "signals#.{plan}",
	"Signals#.Plan.Cycle":           "signals#.cycle.cycle_s",
	"Signals#.Plan.Offset":          "signals#.cycle.offset_s",
	"Signals#.Plan.Greens":          "signals#.{plan}.greens",
	"Signals#.Plan.Greens#":         "signals#.{plan}.greens#",
	"Signals#.Plan.Greens#.Start":   "signals#.{plan}.greens#.start_s",
	"Signals#.Plan.Greens#.End":     "signals#.{plan}.greens#.end_s",
	"Entry":                         "entry",
	"Entry.Demand":                  "entry.demand",
	"Entry.Demand#":                 "entry.demand#",
	"Entry.Demand#.Start":           "entry.demand#.start_s",
	"Entry.Demand#.Rate":            "entry.demand#.flow_veh_per_h",
	"Entry.Demand#.Slope":           "entry.demand#.end_flow_veh_per_h",
	"Entry.Excess":                  "entry.excess",
	"Exit":                          "exit",
	"Exit.Capacity":                 "exit.capacity",
	"Exit.Capacity#":                "exit.capacity#",
	"Exit.Capacity#.Start":          "exit.capacity#.start_s",
	"Exit.Capacity#.Rate":           "exit.capacity#.flow_veh_per_h",
	"Exit.Capacity#.Slope":          "exit.capacity#.end_flow_veh_per_h",
	"Initial":                       "initial",
	"Initial.Profile":               "initial.profile",
	"Initial.Profile#":              "initial.profile#",
	"Initial.Profile#.Start":        "initial.profile#.start_m",
	"Initial.Profile#.End":          "initial.profile#.end_m",
	"Initial.Profile#.StartDensity": "initial.profile#.start_density_veh_per_km",
	"Initial.Profile#.EndDensity":   "initial.profile#.end_density_veh_per_km",
	"Initial.BackgroundFlow":        "initial.background_flow_veh_per_h",
	"Initial.Queues":                "initial.standing_queues",
	"Initial.Queues#":               "initial.standing_queues#.{size}",
	"Initial.Queues#.Node":          "initial.standing_queues#.node",
	"Initial.Queues#.Vehicles":      "initial.standing_queues#.vehicles",
	"Initial.Queues#.Length":        "initial.standing_queues#.length_m",
	"Horizon":                       "horizon_s",
}

var index = regexp.MustCompile(`\[\d+\]`)

// scenarioField rewrites a field path of the solver into the path of the contract's request that was given. What
// has no counterpart is put down to the scenario as a whole.
func scenarioField(s *pb.Scenario, solverPath string) string {
	indices := index.FindAllString(solverPath, -1)
	pattern, known := scenarioPaths[index.ReplaceAllString(solverPath, "#")]
	if !known {
		return "scenario"
	}
	for _, i := range indices {
		pattern = strings.Replace(pattern, "#", i, 1)
	}
	switch {
	case strings.Contains(pattern, "{plan}"):
		pattern = strings.Replace(pattern, "{plan}", planName(s, indices[0]), 1)
	case strings.Contains(pattern, "{form}"):
		pattern = relationField(s, pattern, indices[0])
	case strings.HasSuffix(pattern, ".{size}"):
		pattern = sizeField(s, strings.TrimSuffix(pattern, ".{size}"), indices[0])
	case strings.HasSuffix(pattern, endFlow) && valueAt(s, pattern) == "": // a step that has but one flow
		pattern = strings.TrimSuffix(pattern, endFlow) + startFlow
	}
	return "scenario." + pattern
}

// The two flows of a step.
const (
	startFlow = ".flow_veh_per_h"
	endFlow   = ".end_flow_veh_per_h"
)

// sizeField is the size that the standing queue at the index was given.
func sizeField(s *pb.Scenario, queue, at string) string {
	if i := number(at); i < len(s.GetInitial().GetStandingQueues()) {
		switch s.GetInitial().GetStandingQueues()[i].GetSize().(type) {
		case *pb.StandingQueue_Vehicles:
			return join(queue, "vehicles")
		case *pb.StandingQueue_LengthM:
			return join(queue, "length_m")
		}
	}
	return queue
}

// planName is the form of plan that the signal at the index ("[2]") was given.
func planName(s *pb.Scenario, at string) string {
	if i := number(at); i < len(s.GetSignals()) && s.GetSignals()[i].GetWindows() != nil {
		return "windows"
	}
	return "cycle"
}

// relationField puts the form of relation that the segment at the index was given into the pattern, and cuts a
// number that this form does not have.
func relationField(s *pb.Scenario, pattern, at string) string {
	relation, field, _ := strings.Cut(pattern, ".{form}.")
	i := number(at)
	if i >= len(s.GetSegments()) {
		return relation
	}
	m := s.GetSegments()[i].GetRelation().ProtoReflect()
	form := m.WhichOneof(m.Descriptor().Oneofs().ByName("form"))
	if form == nil {
		return relation
	}
	relation = join(relation, string(form.Name()))
	if form.Message().Fields().ByName(protoreflect.Name(field)) == nil {
		return relation
	}
	return join(relation, field)
}

// number reads an index such as "[2]".
func number(index string) int {
	i, err := strconv.Atoi(strings.Trim(index, "[]"))
	if err != nil {
		return math.MaxInt
	}
	return i
}
