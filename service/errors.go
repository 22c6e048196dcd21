package service

import (
	"context"
	"errors"
	"fmt"
	"strconv"
	"strings"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/protoadapt"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// Domain is the domain of every google.rpc.ErrorInfo that this service sends.
const Domain = "roadswell"

const errorReasonPrefix = "ERROR_REASON_"

// reasonName is the name under which a reason travels.
func reasonName(r pb.ErrorReason) string { return strings.TrimPrefix(r.String(), errorReasonPrefix) }

// refusal makes the error of a call.
func refusal(code codes.Code, reason pb.ErrorReason, message string, metadata map[string]string, more ...protoadapt.MessageV1) error {
	details := append([]protoadapt.MessageV1{
		&errdetails.ErrorInfo{Domain: Domain, Reason: reasonName(reason), Metadata: metadata},
	}, more...)
	st, err := status.New(code, message).WithDetails(details...)
	if err != nil { // only for code OK, or a detail that cannot be encoded
		return status.Error(code, message)
	}
	return st.Err()
}

// invalid is the refusal of a request for all that is wrong with it.
func invalid(v *violations) error {
	detail, omitted := v.badRequest()
	var metadata map[string]string
	if omitted > 0 {
		metadata = map[string]string{"fields_not_listed": strconv.Itoa(omitted)}
	}
	return refusal(codes.InvalidArgument, pb.ErrorReason_ERROR_REASON_INVALID_REQUEST, v.summary(), metadata, detail)
}

// refuse maps what the solver returned to the error of the call.
func refuse(req *pb.SolveRequest, err error) error {
	var (
		bad        *solver.InvalidError
		limit      *solver.LimitError
		closedForm *solver.ClosedFormError
	)
	switch {
	case errors.As(err, &bad):
		return refuseInvalid(req, bad)
	case errors.As(err, &limit):
		return refuseLimit(limit)
	case errors.As(err, &closedForm):
		return refusal(codes.FailedPrecondition, pb.ErrorReason_ERROR_REASON_NO_CLOSED_FORM,
			inContractUnits(closedForm.Error(), ""), map[string]string{"node": closedForm.Node, "time_s": printNumber(closedForm.Time)})
	case errors.Is(err, context.DeadlineExceeded):
		return refusal(codes.DeadlineExceeded, pb.ErrorReason_ERROR_REASON_OUT_OF_TIME, "the time for this call is over", nil)
	case errors.Is(err, context.Canceled):
		return refusal(codes.Canceled, pb.ErrorReason_ERROR_REASON_CANCELLED, "the caller gave up", nil)
	}
	return internal()
}

// refuseInvalid covers violations that show only while solving or answering; the others are found before.
func refuseInvalid(req *pb.SolveRequest, bad *solver.InvalidError) error {
	v := &violations{}
	for _, x := range bad.Violations {
		field := scenarioField(req.GetScenario(), x.Field)
		v.addNamed(field, string(x.Rule), valueAt(req, field), inContractUnits(x.Allowed, field))
	}
	return invalid(v)
}

func refuseLimit(limit *solver.LimitError) error {
	reason := pb.ErrorReason_ERROR_REASON_MEMORY_LIMIT
	if limit.Limit == "interactions" {
		reason = pb.ErrorReason_ERROR_REASON_INTERACTION_LIMIT
	}
	return refusal(codes.ResourceExhausted, reason, limit.Error(), map[string]string{
		"limit": strconv.FormatInt(limit.Max, 10), "reached_s": printNumber(limit.Reached),
	})
}

func tooLarge(most int) error {
	return refusal(codes.ResourceExhausted, pb.ErrorReason_ERROR_REASON_ANSWER_TOO_LARGE,
		fmt.Sprintf("the answer would be larger than the %d bytes that this server sends; ask for less in one call", most),
		map[string]string{"limit": strconv.Itoa(most)})
}

// errFault marks errors that are the server's fault. They are logged in full; the caller is told [internal].
var errFault = errors.New("fault in the server")

// internal tells the caller that the fault is the server's, and nothing else.
func internal() error {
	return refusal(codes.Internal, pb.ErrorReason_ERROR_REASON_INTERNAL_ERROR, "a fault in the server; it was logged", nil)
}
