package service

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"
)

// relabelUnits serves texts whose numbers are in the contract's units already.
var relabelUnits = strings.NewReplacer("veh/m", "veh/km", "veh/s", "veh/h", "m/s", "km/h")

// quantity finds the numbers in a text, with the unit behind them if there is one. It leaves alone what is part
// of a name ("segment-2", "A1") or counts something else.
var quantity = regexp.MustCompile(`(^|[ (\[])([-+]?\d+(?:\.\d+)?(?:e[-+]?\d+)?)( veh/m| veh/s| m/s| m| s)?([ ,;:)\]]|$)`)

// conversions turn the solver's units, with a space before them, into the contract's.
var conversions = map[string]struct {
	convert func(float64) float64
	unit    string
}{
	" veh/m": {densityFromSI, " veh/km"},
	" veh/s": {flowFromSI, " veh/h"},
	" m/s":   {speedFromSI, " km/h"},
}

// inContractUnits rewrites the quantities in a text of the solver, such as "at most 0.15 veh/m". Numbers without a
// unit are taken to be in that of the field that the text is about.
func inContractUnits(text, field string) string {
	if text, done := withSharedUnit(text, field); done {
		return text
	}
	var out strings.Builder
	rest := 0
	for _, name := range quoted.FindAllStringIndex(text, -1) {
		out.WriteString(convertQuantities(text[rest:name[0]], unitOf(field)))
		out.WriteString(text[name[0]:name[1]])
		rest = name[1]
	}
	out.WriteString(convertQuantities(text[rest:], unitOf(field)))
	return out.String()
}

// quoted finds the names in a text, whose numbers are none of ours.
var quoted = regexp.MustCompile(`"(?:[^"\\]|\\.)*"`)

// convertQuantities converts all quantities of a text; bare is the unit of those without one.
func convertQuantities(text, bare string) string {
	return quantity.ReplaceAllStringFunc(text, func(found string) string {
		parts := quantity.FindStringSubmatch(found)
		unit := parts[3]
		if unit == "" {
			unit = bare
		}
		c, converts := conversions[unit]
		x, err := strconv.ParseFloat(parts[2], 64)
		if !converts || err != nil || x == 0 {
			return found
		}
		return parts[1] + printShort(c.convert(x)) + c.unit + parts[4]
	})
}

var bareRange = regexp.MustCompile(`^between ([^ ]+) and ([^ ]+)$`)

// withSharedUnit adds the unit to a range of places or times, which are the same on both sides.
func withSharedUnit(text, field string) (string, bool) {
	ends := bareRange.FindStringSubmatch(text)
	unit := field[strings.LastIndexByte(field, '_')+1:]
	if ends == nil || (unit != "m" && unit != "s") {
		return text, false
	}
	for i, end := range ends {
		if x, err := strconv.ParseFloat(end, 64); err == nil {
			ends[i] = strconv.FormatFloat(x, 'f', -1, 64)
		}
	}
	return fmt.Sprintf("between %s %s and %s %s", ends[1], unit, ends[2], unit), true
}

// unitOf is the solver's unit of a field of the contract; "" where it is the same as the contract's.
func unitOf(field string) string {
	switch {
	case strings.HasSuffix(field, "_veh_per_km"):
		return " veh/m"
	case strings.HasSuffix(field, "_veh_per_h"):
		return " veh/s"
	case strings.HasSuffix(field, "_km_per_h"):
		return " m/s"
	}
	return ""
}

// printShort prints a converted number without the digits that conversion made up.
func printShort(x float64) string { return strconv.FormatFloat(x, 'g', 9, 64) }
