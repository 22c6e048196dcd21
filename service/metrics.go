package service

import (
	"context"
	"runtime"

	grpcprom "github.com/grpc-ecosystem/go-grpc-middleware/providers/prometheus"
	"github.com/prometheus/client_golang/prometheus"
	"google.golang.org/grpc"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// metrics count what calls cost. Names follow the habits of the trade: base units, "_total" for counters; no
// label holds text that a caller chose.
type metrics struct {
	calls        *grpcprom.ServerMetrics
	solveSeconds prometheus.Histogram
	interactions prometheus.Histogram
	refusals     *prometheus.CounterVec
}

// Bucket bounds: a signal approach takes well under a millisecond, the largest corridors seconds.
var (
	callBuckets        = []float64{.0005, .001, .0025, .005, .01, .025, .05, .1, .25, .5, 1, 2.5, 5, 10, 30}
	solveBuckets       = prometheus.ExponentialBuckets(1e-5, 4, 11)
	interactionBuckets = prometheus.ExponentialBuckets(10, 4, 11)
)

// newMetrics registers the metrics. It fails where the registry holds others of the same names.
func newMetrics(registry prometheus.Registerer, version string) (*metrics, error) {
	m := &metrics{
		calls: grpcprom.NewServerMetrics(grpcprom.WithServerHandlingTimeHistogram(grpcprom.WithHistogramBuckets(callBuckets))),
		solveSeconds: prometheus.NewHistogram(prometheus.HistogramOpts{
			Name: "roadswell_solve_seconds", Help: "Time to solve a scenario, without answering questions.", Buckets: solveBuckets,
		}),
		interactions: prometheus.NewHistogram(prometheus.HistogramOpts{
			Name: "roadswell_solve_interactions", Help: "Wave interactions of a solved scenario.", Buckets: interactionBuckets,
		}),
		refusals: prometheus.NewCounterVec(prometheus.CounterOpts{
			Name: "roadswell_refusals_total", Help: "Calls refused, by reason.",
		}, []string{"reason"}),
	}
	build := prometheus.NewGauge(prometheus.GaugeOpts{
		Name: "roadswell_build_info", Help: "Always 1; its labels tell the version that runs.",
		ConstLabels: prometheus.Labels{"version": version, "go_version": runtime.Version()},
	})
	build.Set(1)
	for number := range pb.ErrorReason_name { // so that every reason shows from the start
		if number != 0 {
			m.refusals.WithLabelValues(reasonName(pb.ErrorReason(number)))
		}
	}
	for _, c := range []prometheus.Collector{m.calls, m.solveSeconds, m.interactions, m.refusals, build} {
		if err := registry.Register(c); err != nil {
			return nil, err
		}
	}
	return m, nil
}

// measured counts refusals and what solves took.
func (m *metrics) measured() grpc.UnaryServerInterceptor {
	return func(ctx context.Context, req any, _ *grpc.UnaryServerInfo, handler grpc.UnaryHandler) (any, error) {
		resp, err := handler(ctx, req)
		if reason := reasonOf(err); err != nil && reason != "" {
			m.refusals.WithLabelValues(reason).Inc()
		}
		if out, ok := resp.(*pb.SolveResponse); ok && err == nil {
			m.solveSeconds.Observe(out.GetStats().GetSolveTimeS())
			m.interactions.Observe(float64(out.GetStats().GetInteractions()))
		}
		return resp, err
	}
}
