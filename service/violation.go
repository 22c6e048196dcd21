package service

import (
	"fmt"
	"strings"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/protobuf/proto"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// violation is one field of a request that cannot be accepted, in the contract's terms.
type violation struct {
	field   string // path in the contract, such as "scenario.segments[1].length_m"
	reason  string // name of a pb.FieldReason without its prefix
	value   string // what was given, in the contract's units; empty where nothing was
	allowed string // what would be accepted
}

// describe puts value and allowed into one sentence.
func (v violation) describe() string {
	if v.value == "" {
		return "expected: " + v.allowed
	}
	return fmt.Sprintf("is %s; expected: %s", v.value, v.allowed)
}

// violations collects everything that is wrong with a request.
type violations struct {
	list     []violation
	reported map[string]bool // fields
	around   map[string]bool // what the reported fields lie in
}

const fieldReasonPrefix = "FIELD_REASON_"

// add reports a field, once: the first thing said about a field is the most telling one.
func (v *violations) add(field string, reason pb.FieldReason, value, allowed string) {
	v.addNamed(field, strings.TrimPrefix(reason.String(), fieldReasonPrefix), value, allowed)
}

func (v *violations) addNamed(field, reason, value, allowed string) {
	if v.reported[field] {
		return
	}
	v.note(field)
	v.list = append(v.list, violation{field: field, reason: reason, value: value, allowed: allowed})
}

// note remembers that the field was reported, and what it lies in.
func (v *violations) note(field string) {
	if v.reported == nil {
		v.reported, v.around = map[string]bool{}, map[string]bool{}
	}
	v.reported[field] = true
	for outer := parent(field); outer != ""; outer = parent(outer) {
		v.around[outer] = true
	}
}

// addUnlessKnown reports a field unless it, or something inside or around it, was reported before: what follows
// from an input that is known to be wrong is not worth saying.
func (v *violations) addUnlessKnown(field, reason, value, allowed string) {
	if v.around[field] {
		return
	}
	for outer := parent(field); outer != ""; outer = parent(outer) {
		if v.reported[outer] {
			return
		}
	}
	v.addNamed(field, reason, value, allowed)
}

// parent is the path that a field lies in: "a.b[1]" for "a.b[1].c", "a.b" for "a.b[1]", "" for "a".
func parent(field string) string {
	return field[:max(0, strings.LastIndexAny(field, ".["))]
}

func (v *violations) required(field, allowed string) {
	v.add(field, pb.FieldReason_FIELD_REASON_REQUIRED, "", allowed)
}

func (v *violations) limit(field string, count, most int) {
	if count > most {
		v.add(field, pb.FieldReason_FIELD_REASON_LIMIT, fmt.Sprintf("%d entries", count), fmt.Sprintf("at most %d entries", most))
	}
}

func (v *violations) empty() bool { return len(v.list) == 0 }

// listedBytes bounds the listed violations: error details travel in the trailer of a call, and the usual
// clients accept trailers of 8 KiB in all, text encoding included.
const listedBytes = 5000

// badRequest lists the violations as the error detail of the call; omitted is how many did not find room.
func (v *violations) badRequest() (detail *errdetails.BadRequest, omitted int) {
	detail = &errdetails.BadRequest{}
	room := listedBytes
	for i, x := range v.list {
		field := &errdetails.BadRequest_FieldViolation{Field: x.field, Reason: x.reason, Description: x.describe()}
		if room -= proto.Size(field); room < 0 && i > 0 {
			return detail, len(v.list) - i
		}
		detail.FieldViolations = append(detail.FieldViolations, field)
	}
	return detail, 0
}

// summary is the message of the call's status: the first violation in full, and how many more there are.
func (v *violations) summary() string {
	first := v.list[0]
	text := "invalid request: " + first.field + " " + first.describe()
	if more := len(v.list) - 1; more > 0 {
		text += fmt.Sprintf(" (and %d more)", more)
	}
	return text
}
