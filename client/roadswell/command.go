package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"runtime/debug"
	"strings"
	"time"

	"github.com/spf13/cobra"
	"google.golang.org/protobuf/encoding/protojson"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// solveOptions are what the command line of "solve" sets.
type solveOptions struct {
	file     string
	server   string
	pictures []string
	every    time.Duration
	asJSON   bool
	timeout  time.Duration
}

func newCommand(in io.Reader, out io.Writer) *cobra.Command {
	root := &cobra.Command{
		Use:           "roadswell",
		Short:         "Exact kinematic-wave forecasts for a traffic corridor",
		Long:          "Exact kinematic-wave forecasts for a traffic corridor: queues, travel times, totals and a time-space picture.\nForecasts are advisory; local codes and licensed engineers take precedence.",
		Version:       version(),
		SilenceUsage:  true,
		SilenceErrors: true,
	}
	root.SetIn(in)
	root.SetOut(out)
	root.SetVersionTemplate("roadswell {{.Version}}\n")
	root.AddCommand(solveCommand(), versionCommand())
	return root
}

func solveCommand() *cobra.Command {
	var o solveOptions
	c := &cobra.Command{
		Use:   "solve FILE",
		Short: "Solve the scenario in a file and report on it",
		Long: "Solve the scenario in FILE (the JSON form of roadswell.v1.SolveRequest; - reads standard input) and report\n" +
			"queues, travel times and totals, then the answers to the file's own questions.",
		Example: "  roadswell solve corridor.json\n  roadswell solve corridor.json --picture corridor.svg --every 5m",
		Args:    oneFile,
		RunE: func(c *cobra.Command, args []string) error {
			o.file = args[0]
			if o.every == 0 && c.Flags().Changed("every") {
				return errEvery(o.every)
			}
			return solve(c.Context(), o, c.InOrStdin(), c.OutOrStdout())
		},
	}
	f := c.Flags()
	f.StringVar(&o.server, "server", "", "`address` of a server on this machine, such as 127.0.0.1:7460; without it one inside this program answers")
	f.StringArrayVar(&o.pictures, "picture", nil, "draw the time-space diagram to this .svg or .png `file` (repeatable)")
	f.DurationVar(&o.every, "every", 0, "`time`, such as 5m, between the departures whose travel times are reported (default: about a dozen departures)")
	f.BoolVar(&o.asJSON, "json", false, "print the server's response as JSON in place of the report")
	f.DurationVar(&o.timeout, "timeout", time.Minute, "give up after this `time`")
	return c
}

// oneFile is the rule for the arguments of "solve".
func oneFile(_ *cobra.Command, args []string) error {
	if len(args) != 1 {
		return fmt.Errorf("solve: %d files given; expected: one, see roadswell solve --help", len(args))
	}
	return nil
}

func versionCommand() *cobra.Command {
	return &cobra.Command{
		Use: "version", Short: "Print the version", Args: cobra.NoArgs,
		RunE: func(c *cobra.Command, _ []string) error {
			_, err := fmt.Fprintln(c.OutOrStdout(), "roadswell", version())
			return err
		},
	}
}

// version is the module version that the binary was built from.
func version() string {
	if info, ok := debug.ReadBuildInfo(); ok && info.Main.Version != "" {
		return info.Main.Version
	}
	return "unknown"
}

// solve is the command: read, ask, report, draw.
func solve(ctx context.Context, o solveOptions, in io.Reader, out io.Writer) error {
	if err := o.check(); err != nil {
		return err
	}
	file, err := readScenario(o.file, in)
	if err != nil {
		return err
	}
	if err := o.checkEvery(file.request.GetScenario().GetHorizonS()); err != nil {
		return err
	}
	c, closeAll, err := connect(o.server)
	if err != nil {
		return err
	}
	defer closeAll()
	ctx, cancel := context.WithTimeout(ctx, o.timeout)
	defer cancel()
	a := newInquiry(file, o)
	response, err := c.Solve(ctx, a.request)
	if err != nil {
		return explain(o, file, err)
	}
	if err := a.print(out, response, o.asJSON); err != nil {
		return err
	}
	return draw(o.pictures, a, response)
}

func errEvery(every time.Duration) error {
	return fmt.Errorf("--every is %s; expected: at least 1s", every)
}

// check refuses options that cannot be used, before any work is done.
func (o solveOptions) check() error {
	if o.every < 0 || (o.every > 0 && o.every < time.Second) {
		return errEvery(o.every)
	}
	if o.timeout <= 0 {
		return fmt.Errorf("--timeout is %s; expected: more than 0", o.timeout)
	}
	for _, name := range o.pictures {
		if ext := strings.ToLower(filepath.Ext(name)); ext != ".svg" && ext != ".png" {
			return fmt.Errorf("--picture is %q; expected: a name that ends in .svg or .png", name)
		}
	}
	return nil
}

// mostDepartures bounds the departures that --every leads to.
const mostDepartures = 10_000

// checkEvery refuses departures that are too close for the horizon, s.
func (o solveOptions) checkEvery(horizon float64) error {
	if o.every > 0 && horizon/o.every.Seconds() > mostDepartures && !math.IsInf(horizon, 0) { // the server refuses that
		return fmt.Errorf("--every is %s; expected: at least %.6gs, because at most %s departures are reported and the horizon is %.6g s",
			o.every, math.Ceil(horizon/mostDepartures), grouped(mostDepartures, 0), horizon)
	}
	return nil
}

// printJSON prints the response with the answers to the file's questions, or to the program's own where the file
// asks nothing.
func (a inquiry) printJSON(out io.Writer, response *pb.SolveResponse) error {
	answers := response.GetAnswers()[:a.asked]
	if a.asked == 0 {
		answers = response.GetAnswers()[:reportQuestions]
	}
	text, err := protojson.MarshalOptions{EmitDefaultValues: true, UseProtoNames: true}.Marshal(&pb.SolveResponse{
		Answers: answers, Certificate: response.GetCertificate(), Corridor: response.GetCorridor(),
		Stats: response.GetStats(), Advisory: response.GetAdvisory(),
	})
	if err != nil {
		return err
	}
	var pretty bytes.Buffer // laid out anew, because the encoder varies its spaces from build to build
	if err := json.Indent(&pretty, text, "", "  "); err != nil {
		return err
	}
	_, err = fmt.Fprintf(out, "%s\n", pretty.Bytes())
	return err
}

// create writes a file through write; a file that could not be finished is removed.
func create(name string, write func(io.Writer) error) error {
	f, err := os.Create(name)
	if err != nil {
		return err
	}
	err = write(f)
	if closed := f.Close(); err == nil {
		err = closed
	}
	if err != nil {
		_ = os.Remove(name) // the error that matters is the first
		return fmt.Errorf("%s: %w", name, err)
	}
	return nil
}
