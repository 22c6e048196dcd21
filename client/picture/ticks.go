package picture

import (
	"math"
	"strconv"

	"gonum.org/v1/plot"
)

// majorTick is the length of a tick mark with a number, in points; others have half of it.
const majorTick = 4.5

// mostMajor is how many intervals between numbers an axis may have.
const mostMajor = 12

// secondsUpTo is the longest horizon, in s, whose axis reads in seconds.
const secondsUpTo = 600

// clockSteps are the tick intervals in use for time, in the unit of the axis (s or
// min), with the minor interval that divides each. Below and above them decimal steps take over.
var clockSteps = [][2]float64{
	{1, 0.5}, {2, 1}, {5, 1}, {10, 5}, {15, 5}, {20, 10}, {30, 10}, {60, 20},
	{120, 60}, {240, 60}, {360, 120}, {720, 120},
}

// timeAxis returns the ticks (at values in s) and the caption of the time axis.
func timeAxis(horizon float64) (ticks []plot.Tick, caption string) {
	unit, caption := 60.0, "Time from start (min)"
	if horizon <= secondsUpTo {
		unit, caption = 1, "Time from start (s)"
	}
	span := horizon / unit
	for _, s := range clockSteps {
		fits := span/s[0] <= mostMajor && span/s[0] >= 2
		if fits {
			return ticksAt(0, horizon, unit, s[0], s[1]), caption
		}
	}
	return decimalTicks(0, horizon, unit, mostMajor), caption
}

// placeAxis returns the ticks (at values in m) and the caption of the place axis.
func placeAxis(entry, exit float64) (ticks []plot.Tick, caption string) {
	return decimalTicks(entry, exit, 1000, mostMajor), "Place (km), direction of travel →"
}

// decimalTicks rules [low, high] in steps of 1, 2 or 5 times a power of ten of the unit,
// at most `most` of them.
func decimalTicks(low, high, unit float64, most int) []plot.Tick {
	least := (high - low) / unit / float64(most)
	ten := math.Pow(10, math.Floor(math.Log10(least)))
	for _, s := range [][2]float64{{1, 0.5}, {2, 1}, {5, 1}} {
		if s[0]*ten >= least*(1-1e-9) { // 1e-9: 12 steps of 0.1 fit into 1.2 despite rounding
			return ticksAt(low, high, unit, s[0]*ten, s[1]*ten)
		}
	}
	return ticksAt(low, high, unit, 10*ten, 5*ten)
}

// ticksAt puts a number at every multiple of major and a short mark at every multiple of
// minor, both in the unit; tick values are in the base unit. Counting in whole numbers of
// minor steps keeps far-away axes from drifting.
func ticksAt(low, high, unit, major, minor float64) []plot.Tick {
	const slack = 1e-6 // of a minor step, so that rounding does not lose the ends
	first := math.Ceil(low/unit/minor - slack)
	last := math.Floor(high/unit/minor + slack)
	every := math.Round(major / minor)
	var ticks []plot.Tick
	for n := first; n <= last; n++ {
		tick := plot.Tick{Value: math.Min(math.Max(n*minor*unit, low), high)}
		if math.Mod(n, every) == 0 {
			tick.Label = number(n*minor, major)
		}
		ticks = append(ticks, tick)
	}
	return ticks
}

// number writes v with the decimals that steps of the given size need.
func number(v, step float64) string {
	decimals := max(0, int(-math.Floor(math.Log10(step)+1e-9)))
	if math.Abs(v) < step/4 { // v is a multiple of half a step: this is zero, without a sign
		v = 0
	}
	return strconv.FormatFloat(v, 'f', decimals, 64)
}
