package service

import (
	"math"
	"testing"
)

func TestUnitsOfTheContractAndOfTheSolver(t *testing.T) {
	for _, c := range []struct {
		name           string
		toSI, fromSI   func(float64) float64
		contract, inSI float64
	}{
		{"veh/h to veh/s", flowToSI, flowFromSI, 1800, 0.5},
		{"veh/km to veh/m", densityToSI, densityFromSI, 125, 0.125},
		{"km/h to m/s", speedToSI, speedFromSI, 72, 20},
	} {
		if got := c.toSI(c.contract); math.Abs(got-c.inSI) > 1e-15 {
			t.Errorf("%s: %g became %g, want %g", c.name, c.contract, got, c.inSI)
		}
		if got := c.fromSI(c.inSI); math.Abs(got-c.contract) > 1e-12 {
			t.Errorf("%s: %g came back as %g, want %g", c.name, c.inSI, got, c.contract)
		}
	}
	if got := vehicleHours(7200); got != 2 {
		t.Errorf("7,200 veh s are %g veh h, want 2", got)
	}
	if got := vehicleKm(2500); got != 2.5 {
		t.Errorf("2,500 veh m are %g veh km, want 2.5", got)
	}
}
