// Command roadswell forecasts the traffic on a corridor from a scenario file: queues, travel times, totals and a
// time-space picture. The file is the JSON form of roadswell.v1.SolveRequest. The forecast is computed by a
// server - one inside this program, or another one named with --server.
//
// Forecasts are advisory and defer to local codes and licensed engineers; the program's output says so.
package main

import (
	"context"
	"fmt"
	"os"
	"os/signal"
	"syscall"
)

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	err := newCommand(os.Stdin, os.Stdout).ExecuteContext(ctx)
	stop()
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}
