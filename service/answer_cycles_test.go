package service_test

import (
	"context"
	"errors"
	"testing"

	"github.com/roadswell/roadswell/client"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/service"
)

// light is a road of 72 km/h, 18 km/h and 1,800 veh/h with a signal that is red for the first half of each minute, and
// 720 veh/h that arrive: 0.2 of 0.5 veh/s.
const light = `{"scenario": {
	"segments": [{"name": "road", "length_m": 2000, "relation": {"triangular": {
		"free_speed_km_per_h": 72, "capacity_veh_per_h": 1800, "wave_speed_km_per_h": 18}}}],
	"signals": [{"name": "light", "place_m": 1500, "cycle": {"cycle_s": 60, "greens": [{"start_s": 30, "end_s": 60}]}}],
	"entry": {"demand": [{"start_s": 0, "flow_veh_per_h": 720}]},
	"initial": {"background_flow_veh_per_h": 720},
	"horizon_s": 150
}}`

// askCycles asks for the cycles of the light.
func askCycles(t *testing.T, signals ...string) (*pb.SolveResponse, error) {
	t.Helper()
	c := serve(t, service.Options{})
	req := request(t, light)
	req.Questions = []*pb.Question{{Ask: &pb.Question_Cycles{Cycles: &pb.CyclesQuestion{Signals: signals}}}}
	return c.Solve(context.Background(), req)
}

// The tail goes back at 0.2/(0.125-0.01) = 40/23 m/s until the wave of green, 5 m/s from 30 s on, is there after
// 30*5/(5-40/23) = 46 s: 80 m back. A cycle costs 0.2*30*30/(2 (1-0.2/0.5)) = 150 veh s (deterministic queueing).
func TestCyclesOfASignal(t *testing.T) {
	for _, names := range [][]string{{"light"}, nil} {
		out, err := askCycles(t, names...)
		if err != nil {
			t.Fatal(err)
		}
		signals := out.GetAnswers()[0].GetCycles().GetSignals()
		if len(signals) != 1 || signals[0].GetSignal() != "light" || signals[0].GetPlaceM() != 1500 || len(signals[0].GetCycles()) != 3 {
			t.Fatalf("asked for %q: %v", names, signals)
		}
		second, third := signals[0].GetCycles()[1], signals[0].GetCycles()[2]
		near(t, "red", second.GetStartS(), 60)
		near(t, "green", second.GetGreenStartS(), 90)
		near(t, "end of green", second.GetGreenEndS(), 120)
		near(t, "back of queue", second.GetBackOfQueueM(), 80)
		near(t, "time of it", second.GetBackOfQueueTimeS(), 60+46)
		near(t, "departed", second.GetDepartedVehicles(), 12)
		near(t, "delay", second.GetDelayVehicleH(), 150/3600.0)
		if !second.GetComplete() || second.ResidualVehicles == nil || second.GetResidualVehicles() != 0 {
			t.Errorf("%v, want a complete cycle without a residual queue", second)
		}
		if third.GetComplete() || third.ResidualVehicles != nil || third.GetGreenEndS() != 150 {
			t.Errorf("%v, want a cycle that the horizon cuts short", third)
		}
	}
}

func TestCyclesOfAnUnknownSignal(t *testing.T) {
	_, err := askCycles(t, "light", "entry")
	var f *client.FieldError
	if !errors.As(err, &f) || f.Field != "questions[0].cycles.signals[1]" || f.Reason != "UNKNOWN" {
		t.Errorf("got %v, want the second name refused as unknown", err)
	}
}
