package main

import (
	"flag"
	"fmt"
	"io"
	"net"
	"net/netip"
	"time"

	"github.com/roadswell/roadswell/service"
)

// options are what the command line sets.
type options struct {
	listen     string        // address of the gRPC server
	metrics    string        // address of /metrics; "" for none
	reflection bool          // answer reflection
	grace      time.Duration // time given to calls under way when stopping
	debug      bool          // log every call
	limits     service.Limits
}

// about opens the help text.
const about = `roadswelld answers questions about the traffic on a corridor over gRPC (service roadswell.v1.CorridorService, with the
standard health service) until it is told to stop. This version speaks plaintext and listens on loopback only.
Forecasts are advisory; local codes and licensed engineers take precedence.`

// parse reads and validates the command line; usage goes to out.
func parse(args []string, out io.Writer) (options, error) {
	var o options
	f := flag.NewFlagSet("roadswelld", flag.ContinueOnError)
	f.SetOutput(out)
	f.Usage = func() {
		_, _ = fmt.Fprintf(out, "%s\n\nUsage: roadswelld [flags]\n\nFlags:\n", about) // nothing can be done about a lost text
		f.PrintDefaults()
	}
	f.StringVar(&o.listen, "listen", "127.0.0.1:7460", "`address` for gRPC; loopback only")
	f.StringVar(&o.metrics, "metrics", "127.0.0.1:7461", "`address` for /metrics; loopback only, empty for none")
	f.BoolVar(&o.reflection, "reflection", false, "let callers list services and messages")
	f.DurationVar(&o.grace, "grace", 15*time.Second, "time given to calls under way when stopping")
	f.BoolVar(&o.debug, "debug", false, "log every call")
	f.DurationVar(&o.limits.Time, "call-time", 30*time.Second, "longest time for one call")
	f.Int64Var(&o.limits.Interactions, "interactions", 5_000_000, "most wave interactions of one solve")
	if err := f.Parse(args); err != nil {
		return options{}, err
	}
	if f.NArg() > 0 {
		return options{}, fmt.Errorf("unexpected argument %q; see roadswelld -help", f.Arg(0))
	}
	return o, o.validate()
}

// validate names the option that cannot be used.
func (o options) validate() error {
	if err := loopback(o.listen); err != nil {
		return fmt.Errorf("-listen: %w", err)
	}
	if o.metrics != "" {
		if err := loopback(o.metrics); err != nil {
			return fmt.Errorf("-metrics: %w", err)
		}
	}
	if o.grace <= 0 {
		return fmt.Errorf("-grace: %s; it must be more than 0", o.grace)
	}
	if o.limits.Time <= 0 {
		return fmt.Errorf("-call-time: %s; it must be more than 0", o.limits.Time)
	}
	if o.limits.Interactions <= 0 {
		return fmt.Errorf("-interactions: %d; it must be more than 0", o.limits.Interactions)
	}
	return nil
}

// loopback refuses addresses that other machines could reach: nothing here is encrypted or authenticated. Only
// literal addresses count, for a name may point anywhere.
func loopback(address string) error {
	host, _, err := net.SplitHostPort(address)
	if err != nil {
		return fmt.Errorf("%q is not an address: expected host:port, such as 127.0.0.1:7460", address)
	}
	ip, err := netip.ParseAddr(host)
	if err != nil || !ip.IsLoopback() {
		return fmt.Errorf("%q is not a loopback address (127.0.0.1 or ::1); this version speaks plaintext and listens nowhere else", address)
	}
	return nil
}
