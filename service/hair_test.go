package service_test

import (
	"context"
	"fmt"
	"testing"

	"github.com/roadswell/roadswell/service"
)

// TestASwitchAHairAfterTheStart: offsets worked out by callers miss round times by rounding (0.1+0.2-0.3 is 6e-17). A
// signal that turns green a hair after time 0 must give what one gives that turns green at time 0.
func TestASwitchAHairAfterTheStart(t *testing.T) {
	c := serve(t, service.Options{})
	delay := func(offset float64) float64 {
		out, err := c.Solve(context.Background(), request(t, fmt.Sprintf(`{"scenario": {
			"segments": [{"length_m": 1000, "relation": {"greenshields": {"free_speed_km_per_h": 56, "jam_density_veh_per_km": 145}}}],
			"signals": [{"name": "s", "place_m": 400, "cycle": {"cycle_s": 80, "offset_s": %g, "greens": [{"end_s": 40}]}}],
			"entry": {"demand": [{"flow_veh_per_h": 900}]}, "initial": {"background_flow_veh_per_h": 900}, "horizon_s": 800},
			"questions": [{"totals": {}}, {"travel_times": {"departures_s": [0, 60, 400]}}, {"fronts": {}}, {"queues": {"with_paths": true}}]}`, offset)))
		if err != nil {
			t.Errorf("offset %g s: %v", offset, err)
			return 0
		}
		return out.GetAnswers()[0].GetTotals().GetTotals()[0].GetCorridor().GetDelayVehicleH()
	}
	exact := delay(0)
	for _, offset := range []float64{1e-300, 1e-50, 6e-17, 1e-12, 1e-9, 1e-6, 1e-3, -1e-17, -1e-9, -1e-3} {
		if got := delay(offset); got-exact > 1e-2*exact || exact-got > 1e-2*exact {
			t.Errorf("offset %g s: delay %g veh-h, without it %g", offset, got, exact)
		}
	}
}
