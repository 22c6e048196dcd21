package service

import (
	"context"
	"log/slog"
	"time"

	"google.golang.org/genproto/googleapis/rpc/errdetails"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/status"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// logged writes a line for every call: faults as errors, refusals and slow calls as warnings, the rest for
// debugging. Never what was asked or answered; not even a status message, for it may quote the request.
func logged(log *slog.Logger, slow time.Duration) grpc.UnaryServerInterceptor {
	return func(ctx context.Context, req any, info *grpc.UnaryServerInfo, handler grpc.UnaryHandler) (any, error) {
		begin := time.Now()
		resp, err := handler(ctx, req)
		took := time.Since(begin)
		level := logLevel(status.Code(err), took, slow)
		if !log.Enabled(ctx, level) {
			return resp, err
		}
		attrs := []slog.Attr{
			slog.String("method", info.FullMethod), slog.String("code", status.Code(err).String()), slog.Duration("took", took),
		}
		if reason := reasonOf(err); reason != "" {
			attrs = append(attrs, slog.String("reason", reason))
		}
		if out, ok := resp.(*pb.SolveResponse); ok && err == nil {
			attrs = append(attrs, slog.Int64("interactions", out.GetStats().GetInteractions()))
		}
		log.LogAttrs(ctx, level, "call", attrs...)
		return resp, err
	}
}

func logLevel(code codes.Code, took, slow time.Duration) slog.Level {
	switch {
	case code == codes.Internal || code == codes.Unknown:
		return slog.LevelError
	case code != codes.OK || took >= slow:
		return slog.LevelWarn
	}
	return slog.LevelDebug
}

// reasonOf is the reason that an error of this service carries; "" for none.
func reasonOf(err error) string {
	for _, detail := range status.Convert(err).Details() {
		if info, ok := detail.(*errdetails.ErrorInfo); ok && info.GetDomain() == Domain {
			return info.GetReason()
		}
	}
	return ""
}
