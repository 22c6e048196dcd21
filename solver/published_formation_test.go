package solver_test

import (
	"testing"
)

// P22. Source: qualifying-exam problem read at
// jtdylktuy.blogspot.com/2019/01/method-of-characteristics-for-traffic.html.
func TestP22RampThatFocuses(t *testing.T) {
	const tight = 1e-12
	s := answerOf(t, openRoad(greenshields(t, 1, 1), 2, flat(-3, 0.25, 0.25), ramp(0.25, 1, 0.25, 1), flat(1, 3, 1)))
	f := shockBorn(t, s, 0.5, 0.5, 1, 1)
	agreeWithin(t, "born at [s]", f.Birth.Time, 0.5, tight)
	agreeWithin(t, "born at place", f.Birth.Place, 0.5, tight)
	agreeWithin(t, "place at 1 s", f.Position(1), 0.375, tight)
	for _, time := range []float64{0.75, 1, 2} {
		agreeWithin(t, "later", f.Position(time), 0.5-(time-0.5)/4, 2*tight)
	}
	for _, k := range []float64{0.3, 0.5, 0.9} {
		agreeWithin(t, "density carried by its characteristic", at(t, s, k+(1-2*k)*0.4, 0.4).Up.Density, k, tight)
	}
	if n := countShocks(s, 0.49); n != 0 {
		t.Errorf("%d shocks before the ramp has focused", n)
	}
}

// P23. Source: Whitham 1974, Linear and Nonlinear Waves, ch. 2-3; Haberman, Mathematical Models (traffic flow).
func TestP23LinearRamp(t *testing.T) {
	r := greenshields(t, 100*kmh, 150*perKm)
	for _, c := range []struct {
		name               string
		kL, kR, width      float64
		time, place, speed float64
	}{
		{"a", 30 * perKm, 120 * perKm, kilometre, 30, 0, 0},
		{"b", 15 * perKm, 105 * perKm, 600, 18, 100, 20 * kmh},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := answerOf(t, openRoad(r, minute, flat(-4*kilometre, -c.width/2, c.kL),
				ramp(-c.width/2, c.width/2, c.kL, c.kR), flat(c.width/2, 4*kilometre, c.kR)))
			f := shockBorn(t, s, c.place, c.time, c.width, c.time)
			agreeOn(t, "speed", f.Speed(50), c.speed, 100*kmh)
			agreeOn(t, "place at 60 s", f.Position(minute), c.place+c.speed*(minute-c.time), c.width)
			left := -c.width/2 + r.WaveSpeed(c.kL)*c.time/2
			right := c.width/2 + r.WaveSpeed(c.kR)*c.time/2
			agree(t, "half as wide at half the time", right-left, c.width/2)
			agreeOn(t, "edge", at(t, s, left, c.time/2).Down.Density, c.kL, 150*perKm)
			agree(t, "middle", at(t, s, (left+right)/2, c.time/2).Up.Density, (c.kL+c.kR)/2)
			agreeOn(t, "edge", at(t, s, right, c.time/2).Up.Density, c.kR, 150*perKm)
		})
	}
	agree(t, "flow before [veh/h]", r.Flow(30*perKm)/perHour, 2400)
	agree(t, "flow behind [veh/h]", r.Flow(120*perKm)/perHour, 2400)
}
