package client

import (
	"context"
	"fmt"
	"strings"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"
)

// Reasons for which a server refuses a call; the contract's ErrorReason says what each one means.
const (
	ReasonInvalidRequest   = "INVALID_REQUEST"
	ReasonNoClosedForm     = "NO_CLOSED_FORM"
	ReasonInteractionLimit = "INTERACTION_LIMIT"
	ReasonMemoryLimit      = "MEMORY_LIMIT"
	ReasonAnswerTooLarge   = "ANSWER_TOO_LARGE"
	ReasonOutOfTime        = "OUT_OF_TIME"
	ReasonCancelled        = "CANCELLED"
	ReasonInternalError    = "INTERNAL_ERROR"
)

// domain marks the details that come from a roadswell server.
const domain = "roadswell"

// Error is a call that failed. status.FromError and errors.As see through it, the latter down to *[FieldError].
type Error struct {
	// Code is the gRPC status code.
	Code codes.Code
	// Reason is one of the Reason constants, or one that a later server added; "" where the failure did not come
	// from a roadswell server (it cannot be reached, or the message is too large for the transport).
	Reason string
	// Message says in words what went wrong.
	Message string
	// Metadata are further facts by name, such as "node" and "time_s"; may be nil.
	Metadata map[string]string
	// Fields are the fields that cannot be accepted, each named once, in no particular order; none unless Reason is
	// INVALID_REQUEST.
	Fields []*FieldError

	status *status.Status
}

// FieldError is one field of a request that cannot be accepted.
type FieldError struct {
	// Field is the path in the request, such as "scenario.segments[1].length_m".
	Field string
	// Reason is a name of the contract's FieldReason without its prefix, such as "POSITIVE".
	Reason string
	// Description says what was given and what is allowed.
	Description string
}

// Error returns field and description.
func (f *FieldError) Error() string { return f.Field + " " + f.Description }

// Error returns the message, or for an invalid request all its fields, one a line.
func (e *Error) Error() string {
	if len(e.Fields) == 0 {
		return fmt.Sprintf("roadswell: %s (%s)", e.Message, e.label())
	}
	lines := make([]string, len(e.Fields))
	for i, f := range e.Fields {
		lines[i] = "  " + f.Error()
	}
	return "roadswell: the request cannot be accepted:\n" + strings.Join(lines, "\n") + e.omitted()
}

func (e *Error) label() string {
	if e.Reason == "" {
		return e.Code.String()
	}
	return e.Reason
}

// omitted tells of fields that found no room in the error.
func (e *Error) omitted() string {
	if n := e.Metadata["fields_not_listed"]; n != "" {
		return fmt.Sprintf("\n  and %s more", n)
	}
	return ""
}

// Unwrap returns the field errors, and the context's error for a call that was given up.
func (e *Error) Unwrap() []error {
	out := make([]error, 0, len(e.Fields)+1)
	for _, f := range e.Fields {
		out = append(out, f)
	}
	switch e.Code {
	case codes.DeadlineExceeded:
		out = append(out, context.DeadlineExceeded)
	case codes.Canceled:
		out = append(out, context.Canceled)
	}
	return out
}

// GRPCStatus returns the status as it came from the server.
func (e *Error) GRPCStatus() *status.Status { return e.status }

// fromStatus reads the error of a call.
func fromStatus(err error) *Error {
	st := status.Convert(err)
	out := &Error{Code: st.Code(), Message: st.Message(), status: st}
	for _, detail := range st.Details() {
		switch d := detail.(type) {
		case *errdetails.ErrorInfo:
			if d.GetDomain() == domain {
				out.Reason, out.Metadata = d.GetReason(), d.GetMetadata()
			}
		case *errdetails.BadRequest:
			for _, f := range d.GetFieldViolations() {
				out.Fields = append(out.Fields, &FieldError{Field: f.GetField(), Reason: f.GetReason(), Description: f.GetDescription()})
			}
		}
	}
	return out
}
