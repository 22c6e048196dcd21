package solver

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Rule names the requirement that an input broke. The values are stable: callers may switch on them.
type Rule string

const (
	// RuleFinite means: the number must be finite (not NaN, not infinite).
	RuleFinite Rule = "FINITE"
	// RulePositive means: the number must be greater than zero.
	RulePositive Rule = "POSITIVE"
	// RuleNotNegative means: the number must be zero or greater.
	RuleNotNegative Rule = "NOT_NEGATIVE"
	// RuleRange means: the number must lie in the stated range.
	RuleRange Rule = "RANGE"
	// RuleOrder means: the entries must be in rising order.
	RuleOrder Rule = "ORDER"
	// RuleRequired means: something that must be given is missing.
	RuleRequired Rule = "REQUIRED"
	// RuleConflict means: two inputs contradict each other.
	RuleConflict Rule = "CONFLICT"
	// RuleConcave means: a flow-density relation must be concave.
	RuleConcave Rule = "CONCAVE"
	// RuleCover means: the pieces must cover the corridor without gap or overlap.
	RuleCover Rule = "COVER"
	// RuleUnique means: names and places must not be used twice.
	RuleUnique Rule = "UNIQUE"
	// RuleUnknown means: the name refers to nothing in the scenario.
	RuleUnknown Rule = "UNKNOWN"
	// RuleFits means: a standing queue must fit into the road behind it.
	RuleFits Rule = "FITS"
	// RuleClosedForm means: the input asks for something whose exact solution leaves the family that this
	// solver holds in closed form; it is refused, never approximated.
	RuleClosedForm Rule = "CLOSED_FORM"
)

// Violation is one broken requirement.
type Violation struct {
	// Field is the path of the input, such as "Segments[1].Length".
	Field string
	// Rule is the requirement that was broken.
	Rule Rule
	// Value is what was given, printed; empty where nothing was given.
	Value string
	// Allowed says in words what would be accepted.
	Allowed string
}

// String returns the violation as one line.
func (v Violation) String() string {
	if v.Value == "" {
		return fmt.Sprintf("%s: %s", v.Field, v.Allowed)
	}
	return fmt.Sprintf("%s = %s: %s", v.Field, v.Value, v.Allowed)
}

// InvalidError lists everything that is wrong with an input. Nothing was computed.
type InvalidError struct {
	Violations []Violation
}

// Error returns all violations, separated by semicolons.
func (e *InvalidError) Error() string {
	lines := make([]string, len(e.Violations))
	for i, v := range e.Violations {
		lines[i] = v.String()
	}
	return "invalid scenario: " + strings.Join(lines, "; ")
}

// LimitError says that a solve was given up because it would have cost more than the caller's [Budget].
type LimitError struct {
	// Limit is the exhausted one: "interactions" or "bytes".
	Limit string
	// Max is the limit's value: wave interactions, or bytes.
	Max int64
	// Reached is the scenario time in seconds up to which the solution had been built.
	Reached float64
}

// Error describes the exhausted limit.
func (e *LimitError) Error() string {
	return fmt.Sprintf("limit of %d %s reached at scenario time %g s", e.Max, e.Limit, e.Reached)
}

// ClosedFormError says that the exact solution left the family that this solver holds in closed form:
// from Time on, what crosses Node can no longer be written down exactly. It is refused, never approximated.
type ClosedFormError struct {
	// Node is the name of the node where it happened.
	Node string
	// Time is when, in seconds of scenario time.
	Time float64
	// What describes the case in words.
	What string
}

// Error describes the refused case.
func (e *ClosedFormError) Error() string {
	return fmt.Sprintf("no closed form at node %q from %g s on: %s", e.Node, e.Time, e.What)
}

// item is the field path of an entry of a list.
func item(list string, i int) string { return list + "[" + strconv.Itoa(i) + "]" }

// violations collects broken requirements under a field path.
type violations struct {
	list []Violation
}

func (v *violations) add(field string, rule Rule, value any, allowed string) {
	text := ""
	if value != nil {
		text = fmt.Sprint(value)
	}
	// A copy of its own, so that the fields of all that is in order need not be kept.
	v.list = append(v.list, Violation{Field: strings.Clone(field), Rule: rule, Value: text, Allowed: allowed})
}

// err returns the collected violations as an error, or nil where there are none.
func (v *violations) err() error {
	if len(v.list) == 0 {
		return nil
	}
	return &InvalidError{Violations: v.list}
}

func (v *violations) none() bool { return len(v.list) == 0 }

func (v *violations) finite(field string, x float64) bool {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		v.add(field, RuleFinite, x, "a finite number")
		return false
	}
	return true
}

func (v *violations) positive(field string, x float64) {
	if v.finite(field, x) && x <= 0 {
		v.add(field, RulePositive, x, "more than 0")
	}
}

func (v *violations) notNegative(field string, x float64) {
	if v.finite(field, x) && x < 0 {
		v.add(field, RuleNotNegative, x, "0 or more")
	}
}

func (v *violations) within(field string, x, lo, hi float64) {
	if v.finite(field, x) && (x < lo || x > hi) {
		v.add(field, RuleRange, x, fmt.Sprintf("between %g and %g", lo, hi))
	}
}
