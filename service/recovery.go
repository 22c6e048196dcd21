package service

import (
	"context"
	"errors"
	"fmt"
	"log/slog"
	"runtime/debug"

	"google.golang.org/grpc"
)

// recovered turns a panic in a call into INTERNAL, and hides what only the log should tell from the caller.
func recovered(log *slog.Logger) grpc.UnaryServerInterceptor {
	return func(ctx context.Context, req any, info *grpc.UnaryServerInfo, handler grpc.UnaryHandler) (resp any, err error) {
		defer func() {
			if cause := recover(); cause != nil {
				logPanic(ctx, log, info.FullMethod, cause)
				resp, err = nil, internal()
			}
		}()
		resp, err = handler(ctx, req)
		if errors.Is(err, errFault) {
			log.LogAttrs(ctx, slog.LevelError, "fault", slog.String("method", info.FullMethod), slog.String("cause", err.Error()))
			return nil, internal()
		}
		return resp, err
	}
}

// recoveredStream does the same for streams (health watches, reflection).
func recoveredStream(log *slog.Logger) grpc.StreamServerInterceptor {
	return func(srv any, stream grpc.ServerStream, info *grpc.StreamServerInfo, handler grpc.StreamHandler) (err error) {
		defer func() {
			if cause := recover(); cause != nil {
				logPanic(stream.Context(), log, info.FullMethod, cause)
				err = internal()
			}
		}()
		return handler(srv, stream)
	}
}

func logPanic(ctx context.Context, log *slog.Logger, method string, cause any) {
	log.LogAttrs(ctx, slog.LevelError, "panic", slog.String("method", method),
		slog.String("cause", fmt.Sprint(cause)), slog.String("stack", string(debug.Stack())))
}
