package reference

import "math"

// RedGreen is a queue behind a signal under the linear speed-density law q = vf k (1 - k/kj): vehicles arrive
// at density Arriving, the light is red for Red and green from time 0 on; places count from the stop line.
//
// With a = Arriving/kj the stopping shock runs at -a vf; the starting wave (-vf) catches it at a Red/(1-a);
// from then on the tail lies inside the fan and obeys a square-root law.
// Source: Lighthill & Whitham 1955, Proc. R. Soc. A 229, 317-345, part II; Whitham 1974, Linear and Nonlinear
// Waves, section 3.1.
type RedGreen struct {
	FreeSpeed, JamDensity float64
	Arriving              float64 // density, less than half of the jam density
	Red                   float64
}

func (r RedGreen) share() float64 { return r.Arriving / r.JamDensity }

// Meets is when the starting wave meets the stopping wave.
func (r RedGreen) Meets() float64 { a := r.share(); return a * r.Red / (1 - a) }

// Tail is the place of the queue's tail at a time between -Red and Clears.
func (r RedGreen) Tail(t float64) float64 {
	a := r.share()
	if t <= r.Meets() {
		return -a * r.FreeSpeed * (t + r.Red)
	}
	return r.FreeSpeed*(1-2*a)*t - 2*r.FreeSpeed*math.Sqrt(a*(1-a)*r.Red*t)
}

// Furthest is when and where the tail turns back.
func (r RedGreen) Furthest() (t, x float64) {
	a := r.share()
	t = a * (1 - a) * r.Red / ((1 - 2*a) * (1 - 2*a))
	return t, -r.FreeSpeed * a * (1 - a) * r.Red / (1 - 2*a)
}

// Clears is when the tail crosses the stop line: 4 a (1-a) Red / (1-2a)².
func (r RedGreen) Clears() float64 { t, _ := r.Furthest(); return 4 * t }

// HalfJamTail is the tail at time t of a queue at jam density that stood on (-length, 0) at time 0, when the
// light turned green, with half the jam density behind it: arrivals are just what the light can pass, so the
// tail goes back for ever, at first at vf/2, then as the square root of time. Linear speed-density law.
func HalfJamTail(freeSpeed, length, t float64) float64 {
	if t <= 2*length/freeSpeed {
		return -length - freeSpeed*t/2
	}
	return -math.Sqrt(2 * length * freeSpeed * t)
}

// BlockRear is the rear at time t of a block of stopped vehicles on (0, length) on an empty road, free to go
// from time 0. It is the last vehicle: still until length/vf, then driving inside the fan. Linear
// speed-density law.
func BlockRear(freeSpeed, length, t float64) float64 {
	if t <= length/freeSpeed {
		return 0
	}
	return length + freeSpeed*t - 2*math.Sqrt(length*freeSpeed*t)
}
