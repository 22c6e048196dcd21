package service

import (
	"reflect"
	"strings"
	"testing"

	"google.golang.org/protobuf/reflect/protoreflect"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// bothPlans has a signal with each form of plan, and a segment with a triangular relation.
var bothPlans = &pb.Scenario{
	Segments: []*pb.Segment{{Relation: &pb.FlowDensityRelation{Form: &pb.FlowDensityRelation_Triangular{Triangular: &pb.TriangularRelation{}}}}},
	Signals:  []*pb.Signal{{Plan: &pb.Signal_Cycle{}}, {Plan: &pb.Signal_Windows{Windows: &pb.WindowPlan{}}}},
}

// TestEverySolverFieldHasAContractPath walks the solver's input type: whatever field it may complain about must come
// out as a path that exists in the contract.
func TestEverySolverFieldHasAContractPath(t *testing.T) {
	for _, path := range solverFields(reflect.TypeFor[solver.Scenario](), "") {
		got := scenarioField(bothPlans, path)
		if got == "scenario" {
			t.Errorf("%s has no counterpart in the contract", path)
			continue
		}
		if !inContract(got) {
			t.Errorf("%s becomes %s, which the contract does not have", path, got)
		}
	}
}

// solverFields lists the paths of all fields, with index 0 for lists.
func solverFields(of reflect.Type, path string) []string {
	var out []string
	for i := range of.NumField() {
		f := of.Field(i)
		at := strings.TrimPrefix(path+"."+f.Name, ".")
		out = append(out, at)
		kind := f.Type
		if kind.Kind() == reflect.Slice {
			at += "[0]"
			out = append(out, at)
			kind = kind.Elem()
		}
		if kind.Kind() == reflect.Struct && kind != reflect.TypeFor[solver.Relation]() {
			out = append(out, solverFields(kind, at)...)
		}
	}
	return out
}

// inContract reports whether a path leads to a field of the request.
func inContract(path string) bool {
	at := (&pb.SolveRequest{}).ProtoReflect().Descriptor()
	for _, step := range strings.Split(path, ".") {
		if at == nil {
			return false
		}
		name, _, indexed := strings.Cut(step, "[")
		fd := at.Fields().ByName(protoreflect.Name(name))
		if fd == nil || (indexed && !fd.IsList()) {
			return false
		}
		at = fd.Message()
	}
	return true
}

func TestSolverPathsNameTheFormThatWasGiven(t *testing.T) {
	for path, want := range map[string]string{
		"Segments[0].Relation.FreeSpeed": "scenario.segments[0].relation.triangular.free_speed_km_per_h",
		"Segments[9].Relation.FreeSpeed": "scenario.segments[9].relation",
		"Signals[0].Plan.Greens[2].End":  "scenario.signals[0].cycle.greens[2].end_s",
		"Signals[1].Plan.Greens[2].End":  "scenario.signals[1].windows.greens[2].end_s",
		"Something[3].Unheard.Of":        "scenario",
	} {
		if got := scenarioField(bothPlans, path); got != want {
			t.Errorf("%s becomes %s, want %s", path, got, want)
		}
	}
}

func TestSolverWordsComeOutInContractUnits(t *testing.T) {
	for _, c := range []struct{ text, field, want string }{
		{"at most 0.15 veh/m", "x", "at most 150 veh/km"},
		{"between 0.01 and 1000", "a.free_speed_km_per_h", "between 0.036 km/h and 3600 km/h"},
		{"between 0.01 and 10 m", "a.length_m", "between 0.01 and 10 m"},
		{"it reaches -0.5 veh/s at 20 s", "a.end_flow_veh_per_h", "it reaches -1800 veh/h at 20 s"},
		{"more than 0", "a.flow_veh_per_h", "more than 0"},
		{`at most 0.125, the jam density of "Road 66"`, "a.start_density_veh_per_km", `at most 125 veh/km, the jam density of "Road 66"`},
		{`at most 0.5, the capacity of "say \"at 5\" 7"`, "a.flow_veh_per_h", `at most 1800 veh/h, the capacity of "say \"at 5\" 7"`},
		{`none where "A1" stands`, "a.flow_veh_per_h", `none where "A1" stands`},
	} {
		if got := inContractUnits(c.text, c.field); got != c.want {
			t.Errorf("%q about %s became %q, want %q", c.text, c.field, got, c.want)
		}
	}
}
