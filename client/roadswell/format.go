package main

import (
	"fmt"
	"math"
	"strings"
)

// none stands where there is no number to give.
const none = "-"

// clock prints a time of the scenario, s, as h:mm:ss.
func clock(s float64) string {
	whole := int64(math.Round(math.Abs(s)))
	text := fmt.Sprintf("%d:%02d:%02d", whole/3600, whole/60%60, whole%60)
	if s < 0 && whole > 0 {
		return "-" + text
	}
	return text
}

// clockOr prints a time, or a word where there is none.
func clockOr(s *float64, otherwise string) string {
	if s == nil {
		return otherwise
	}
	return clock(*s)
}

// span prints a length of time, s, in minutes and seconds.
func span(s float64) string {
	tenths := int64(math.Round(math.Abs(s) * 10))
	text := fmt.Sprintf("%d.%d s", tenths/10, tenths%10)
	if tenths >= 600 {
		text = fmt.Sprintf("%d min %02d s", (tenths+5)/600, (tenths+5)/10%60)
	}
	if s < 0 && tenths > 0 {
		return "-" + text
	}
	return text
}

func spanOr(s *float64, otherwise string) string {
	if s == nil {
		return otherwise
	}
	return span(*s)
}

// place prints a place, m, in kilometres.
func place(m float64) string { return grouped(m/1000, 3) + " km" }

// length prints a length of road, m.
func length(m float64) string { return grouped(m, 0) + " m" }

// grouped prints a number with so many decimals and a comma between groups of three digits.
func grouped(x float64, decimals int) string {
	text := fmt.Sprintf("%.*f", decimals, math.Abs(x))
	whole, rest, _ := strings.Cut(text, ".")
	var out strings.Builder
	for i, digit := range whole {
		if i > 0 && (len(whole)-i)%3 == 0 {
			out.WriteByte(',')
		}
		out.WriteRune(digit)
	}
	if rest != "" {
		out.WriteString("." + rest)
	}
	if x < 0 && strings.Trim(text, "0.") != "" {
		return "-" + out.String()
	}
	return out.String()
}
