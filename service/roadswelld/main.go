// Command roadswelld is the roadswell server: it answers roadswell.v1.CorridorService over gRPC.
//
// It listens on loopback only: this version speaks plaintext and refuses any other address. Forecasts are
// advisory and defer to local codes and licensed engineers.
package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	o, err := parse(os.Args[1:], os.Stderr)
	if errors.Is(err, flag.ErrHelp) {
		return
	}
	if err == nil {
		ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
		defer stop()
		err = run(ctx, o, os.Stderr)
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "roadswelld:", err)
		os.Exit(1)
	}
}
