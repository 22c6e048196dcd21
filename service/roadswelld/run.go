package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"net"
	"net/http"
	"runtime/debug"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/collectors"
	"github.com/prometheus/client_golang/prometheus/promhttp"

	"github.com/roadswell/roadswell/service"
)

// run serves until the context ends, then stops within the grace time. It returns nil after a clean stop.
func run(ctx context.Context, o options, logs io.Writer) error {
	log := newLogger(o, logs)
	registry := prometheus.NewRegistry()
	registry.MustRegister(collectors.NewGoCollector(), collectors.NewProcessCollector(collectors.ProcessCollectorOpts{}))
	server, err := service.NewServer(service.Options{
		Limits: o.limits, Logger: log, Registry: registry, Version: version(), Reflection: o.reflection,
	})
	if err != nil {
		return err
	}
	listener, err := net.Listen("tcp", o.listen)
	if err != nil {
		return fmt.Errorf("-listen: %w", err)
	}
	page, err := serveMetrics(o.metrics, registry, log)
	if err != nil {
		_ = listener.Close() // nothing was accepted yet
		return err
	}
	failed := make(chan error, 1)
	go func() { failed <- server.GRPC.Serve(listener) }()
	log.Info("serving", "grpc", listener.Addr().String(), "metrics", page.address, "version", version())
	select {
	case err = <-failed:
	case <-ctx.Done():
		log.Info("stopping", "grace", o.grace)
		server.Stop(o.grace)
	}
	page.stop()
	log.Info("stopped")
	return err
}

func newLogger(o options, out io.Writer) *slog.Logger {
	level := slog.LevelInfo
	if o.debug {
		level = slog.LevelDebug
	}
	return slog.New(slog.NewJSONHandler(out, &slog.HandlerOptions{Level: level, ReplaceAttr: withUnit}))
}

// withUnit writes lengths of time with their unit, "1.5ms", where JSON would have bare nanoseconds.
func withUnit(_ []string, a slog.Attr) slog.Attr {
	if a.Value.Kind() == slog.KindDuration {
		a.Value = slog.StringValue(a.Value.Duration().String())
	}
	return a
}

// metricsPage is the second, smaller server.
type metricsPage struct {
	address string
	server  *http.Server
}

// pageTimeout bounds every step of a metrics request, and stopping.
const pageTimeout = 5 * time.Second

// serveMetrics serves /metrics at the address; with none, nothing.
func serveMetrics(address string, registry *prometheus.Registry, log *slog.Logger) (*metricsPage, error) {
	if address == "" {
		return &metricsPage{}, nil
	}
	listener, err := net.Listen("tcp", address)
	if err != nil {
		return nil, fmt.Errorf("-metrics: %w", err)
	}
	mux := http.NewServeMux()
	mux.Handle("GET /metrics", promhttp.HandlerFor(registry, promhttp.HandlerOpts{EnableOpenMetrics: true}))
	p := &metricsPage{address: listener.Addr().String(), server: &http.Server{
		Handler: mux, ReadHeaderTimeout: pageTimeout, ReadTimeout: pageTimeout, WriteTimeout: pageTimeout, IdleTimeout: time.Minute,
	}}
	go func() {
		if err := p.server.Serve(listener); !errors.Is(err, http.ErrServerClosed) {
			log.Error("metrics page failed", "cause", err.Error())
		}
	}()
	return p, nil
}

// stop ends the page; it is last, so that the final numbers can still be read while calls drain.
func (p *metricsPage) stop() {
	if p.server == nil {
		return
	}
	ctx, cancel := context.WithTimeout(context.Background(), pageTimeout)
	defer cancel()
	if p.server.Shutdown(ctx) != nil {
		_ = p.server.Close() // what would not end in time
	}
}

// version is the module version that the binary was built from.
func version() string {
	if info, ok := debug.ReadBuildInfo(); ok && info.Main.Version != "" {
		return info.Main.Version
	}
	return "unknown"
}
