package service

import (
	"log/slog"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"google.golang.org/grpc"
	"google.golang.org/grpc/health"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/keepalive"
	"google.golang.org/grpc/reflection"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// Options say how a server is put together. The zero value is a server with default limits, without reflection,
// that logs to slog's default logger and registers its metrics nowhere but with itself.
type Options struct {
	// Limits of one call.
	Limits Limits
	// Logger takes one line a call; nil means [slog.Default].
	Logger *slog.Logger
	// Registry takes the metrics; nil means a registry of the server's own.
	Registry prometheus.Registerer
	// Version of the program, shown in the metric roadswell_build_info; "" means "unknown".
	Version string
	// Reflection lets callers list the services and messages.
	Reflection bool
	// SlowCall is the time from which on a call is logged as slow; 0 means 1 s.
	SlowCall time.Duration
}

// Server is a gRPC server with the corridor service and the standard health service. Serve with GRPC.Serve.
type Server struct {
	// GRPC is the server; the caller serves and stops it.
	GRPC *grpc.Server
	// Health holds the states that health checks see. At first the whole server ("") and the corridor service serve.
	Health *health.Server
}

// Transport limits. Keepalive finds connections that died without a word within about 70 s; the age makes
// clients come back through their name resolution, so that load spreads over new servers.
const (
	maxStreams     = 256
	maxHeaderBytes = 16 << 10
	pingAfter      = 60 * time.Second
	pingTimeout    = 10 * time.Second
	pingAtMost     = 20 * time.Second
	connectionAge  = 10 * time.Minute
	ageGrace       = 60 * time.Second
)

// NewServer puts a server together. It fails on limits that make no sense and on metrics that cannot be registered.
func NewServer(o Options) (*Server, error) {
	corridor, err := NewCorridor(o.Limits)
	if err != nil {
		return nil, err
	}
	o = o.withDefaults()
	m, err := newMetrics(o.Registry, o.Version)
	if err != nil {
		return nil, err
	}
	s := &Server{GRPC: grpc.NewServer(transport(corridor.limits, interceptors(o, m)...)...), Health: health.NewServer()}
	pb.RegisterCorridorServiceServer(s.GRPC, corridor)
	healthpb.RegisterHealthServer(s.GRPC, s.Health)
	s.Health.SetServingStatus(pb.CorridorService_ServiceDesc.ServiceName, healthpb.HealthCheckResponse_SERVING)
	if o.Reflection {
		reflection.Register(s.GRPC)
	}
	m.calls.InitializeMetrics(s.GRPC)
	return s, nil
}

func (o Options) withDefaults() Options {
	if o.Logger == nil {
		o.Logger = slog.Default()
	}
	if o.Registry == nil {
		o.Registry = prometheus.NewRegistry()
	}
	if o.Version == "" {
		o.Version = "unknown"
	}
	orDefault(&o.SlowCall, time.Second)
	return o
}

// interceptors stand around every call, outermost first: what recovers from panics is innermost, so that logs and
// metrics see a panic as the error it became.
func interceptors(o Options, m *metrics) []grpc.ServerOption {
	return []grpc.ServerOption{
		grpc.ChainUnaryInterceptor(m.calls.UnaryServerInterceptor(), m.measured(), logged(o.Logger, o.SlowCall), recovered(o.Logger)),
		grpc.ChainStreamInterceptor(m.calls.StreamServerInterceptor(), recoveredStream(o.Logger)),
	}
}

// transport adds the limits of the transport.
func transport(l Limits, more ...grpc.ServerOption) []grpc.ServerOption {
	return append(more,
		grpc.MaxRecvMsgSize(l.MessageBytes),
		grpc.MaxConcurrentStreams(maxStreams),
		grpc.MaxHeaderListSize(maxHeaderBytes),
		grpc.KeepaliveParams(keepalive.ServerParameters{
			Time: pingAfter, Timeout: pingTimeout, MaxConnectionAge: connectionAge, MaxConnectionAgeGrace: ageGrace,
		}),
		grpc.KeepaliveEnforcementPolicy(keepalive.EnforcementPolicy{MinTime: pingAtMost, PermitWithoutStream: true}),
		grpc.WaitForHandlers(true),
	)
}

// Stop takes the server out of service: health checks see NOT_SERVING, calls under way are finished, and what
// is left after the grace time (a health watch never ends by itself) is cut off. It returns when nothing runs.
func (s *Server) Stop(grace time.Duration) {
	s.Health.Shutdown()
	done := make(chan struct{})
	go func() {
		defer close(done)
		s.GRPC.GracefulStop()
	}()
	select {
	case <-done:
	case <-time.After(grace):
		s.GRPC.Stop()
		<-done
	}
}
