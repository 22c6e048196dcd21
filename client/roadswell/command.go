package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime/debug"
	"strings"
	"time"

	"github.com/spf13/cobra"
	"google.golang.org/protobuf/encoding/protojson"

	"github.com/roadswell/roadswell/client"
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
		SilenceUsage:  true,
		SilenceErrors: true,
		Args:          cobra.NoArgs,
	}
	root.SetIn(in)
	root.SetOut(out)
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
		Args:    cobra.ExactArgs(1),
		RunE: func(c *cobra.Command, args []string) error {
			o.file = args[0]
			return solve(c.Context(), o, c.InOrStdin(), c.OutOrStdout())
		},
	}
	f := c.Flags()
	f.StringVar(&o.server, "server", "", "`address` of a server; without it one inside this program answers")
	f.StringArrayVar(&o.pictures, "picture", nil, "draw the time-space diagram to this .svg or .png `file` (repeatable)")
	f.DurationVar(&o.every, "every", 0, "`time` between the departures whose travel times are reported (default: a dozen departures)")
	f.BoolVar(&o.asJSON, "json", false, "print the server's response as JSON in place of the report")
	f.DurationVar(&o.timeout, "timeout", time.Minute, "give up after this `time`")
	return c
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
	request, err := readRequest(o.file, in)
	if err != nil {
		return err
	}
	c, closeAll, err := connect(o.server)
	if err != nil {
		return err
	}
	defer closeAll()
	ctx, cancel := context.WithTimeout(ctx, o.timeout)
	defer cancel()
	a := newInquiry(request, o)
	response, err := c.Solve(ctx, a.request)
	if err != nil {
		return explain(o, err)
	}
	if err := a.print(out, response, o.asJSON); err != nil {
		return err
	}
	return draw(o.pictures, a, response)
}

// check refuses options that cannot be used, before any work is done.
func (o solveOptions) check() error {
	if o.every < 0 || (o.every > 0 && o.every < time.Second) {
		return fmt.Errorf("--every is %s; expected: at least 1s", o.every)
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

// printJSON prints the response with the answers to the file's questions, or to the program's own where the file
// asks nothing.
func (a inquiry) printJSON(out io.Writer, response *pb.SolveResponse) error {
	answers := response.GetAnswers()[:a.asked]
	if a.asked == 0 {
		answers = response.GetAnswers()[:reportQuestions]
	}
	text, err := protojson.MarshalOptions{Multiline: true, Indent: "  ", EmitUnpopulated: false, UseProtoNames: true}.Marshal(&pb.SolveResponse{
		Answers: answers, Certificate: response.GetCertificate(), Corridor: response.GetCorridor(),
		Stats: response.GetStats(), Advisory: response.GetAdvisory(),
	})
	if err != nil {
		return err
	}
	_, err = fmt.Fprintf(out, "%s\n", text)
	return err
}

// explain puts the file's name before what the server says about its fields.
func explain(o solveOptions, err error) error {
	var refused *client.Error
	if !asError(err, &refused) {
		return err
	}
	if len(refused.Fields) == 0 {
		return fmt.Errorf("%s: %s", o.source(refused), refused.Message)
	}
	lines := make([]string, 0, len(refused.Fields)+1)
	for _, f := range refused.Fields {
		lines = append(lines, fmt.Sprintf("%s: %s %s", fileName(o.file), f.Field, f.Description))
	}
	if n := refused.Metadata["fields_not_listed"]; n != "" {
		lines = append(lines, fmt.Sprintf("%s: and %s more", fileName(o.file), n))
	}
	return fmt.Errorf("%s", strings.Join(lines, "\n"))
}

// source is what an error without fields is about: the file where the server refuses it, else the server.
func (o solveOptions) source(e *client.Error) string {
	if e.Reason != "" || o.server == "" {
		return fileName(o.file)
	}
	return o.server
}

func fileName(name string) string {
	if name == "-" {
		return "standard input"
	}
	return name
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
