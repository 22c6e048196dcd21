package main

import (
	"bytes"
	"context"
	"flag"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/roadswell/roadswell/client/picture"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/service"
)

var update = flag.Bool("update", false, "rewrite the golden files")

// command runs the program with the arguments and returns what it prints.
func command(in string, args ...string) (string, error) {
	var out bytes.Buffer
	c := newCommand(strings.NewReader(in), &out)
	c.SetErr(&out)
	c.SetArgs(args)
	err := c.ExecuteContext(context.Background())
	return out.String(), err
}

// file writes a scenario file and returns its name.
func file(t *testing.T, text string) string {
	t.Helper()
	name := filepath.Join(t.TempDir(), "street.json")
	if err := os.WriteFile(name, []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
	return name
}

// solveTime is the one thing in a report that differs from run to run.
var solveTime = regexp.MustCompile(`solved in [^ ]+ ms`)

// TestTheReport compares the report on a closure with a golden file, whose numbers are derived by hand in
// testdata/closure.json.
func TestTheReport(t *testing.T) {
	got, err := command("", "solve", "testdata/closure.json", "--every", "10m")
	if err != nil {
		t.Fatal(err)
	}
	got = solveTime.ReplaceAllString(got, "solved in ... ms")
	const golden = "testdata/closure.golden"
	if *update {
		if err := os.WriteFile(golden, []byte(got), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	if !strings.Contains(got, service.Advisory) {
		t.Error("the report does not say that it is advisory")
	}
}

func TestAServerOutsideGivesTheSameAnswers(t *testing.T) {
	address := listen(t)
	for _, args := range [][]string{{"solve", demos + "arterial.json"}, {"solve", "testdata/closure.json"}} {
		inside, err := command("", args...)
		if err != nil {
			t.Fatal(err)
		}
		outside, err := command("", append(args, "--server", address)...)
		if err != nil {
			t.Fatal(err)
		}
		if solveTime.ReplaceAllString(inside, "") != solveTime.ReplaceAllString(outside, "") {
			t.Errorf("%v: inside\n%s\noutside\n%s", args, inside, outside)
		}
	}
}

func TestWhatCannotBeDone(t *testing.T) {
	good := file(t, `{"scenario": {}}`)
	for _, x := range []struct {
		name string
		args []string
		says []string
	}{
		{"no file", []string{"solve"}, []string{"0 files", "expected: one"}},
		{"a file that is not there", []string{"solve", "nowhere.json"}, []string{"nowhere.json"}},
		{"an unknown field", []string{"solve", file(t, "{\"scenario\": {\n  \"lenght_m\": 5}}")}, []string{"street.json:2:3: unknown field \"lenght_m\""}},
		{"no JSON", []string{"solve", file(t, "hello")}, []string{"street.json:1:1: "}},
		{"a text for a number", []string{"solve", file(t, `{"scenario": {"horizon_s": "long"}}`)}, []string{"street.json:1:", "horizon_s"}},
		{"no scenario", []string{"solve", file(t, `{}`)}, []string{"street.json: scenario is missing"}},
		{"fields", []string{"solve", good}, []string{"street.json:1:2: scenario.segments expected: ", "\n", "street.json:1:2: scenario.horizon_s is 0; expected: more than 0"}},
		{"a picture of an unknown kind", []string{"solve", good, "--picture", "x.jpg"}, []string{"--picture", ".svg or .png"}},
		{"no such command", []string{"solv", good}, []string{`unknown command "solv"`, "solve"}},
		{"departures too close for the horizon", []string{"solve", file(t, `{"scenario": {"horizon_s": 36000}}`), "--every", "1s"}, []string{"--every is 1s", "at least 4s"}},
		{"departures too close", []string{"solve", good, "--every", "1ms"}, []string{"--every"}},
		{"departures all at once", []string{"solve", good, "--every", "0s"}, []string{"--every is 0s", "at least 1s"}},
		{"no time", []string{"solve", good, "--timeout", "0s"}, []string{"--timeout"}},
		{"a server off this machine", []string{"solve", good, "--server", "192.0.2.1:7460"}, []string{"loopback"}},
		{"nobody there", []string{"solve", good, "--server", "127.0.0.1:1", "--timeout", "3s"}, []string{"127.0.0.1:1", "no server answers", "connection refused"}},
		{"an answer that takes too long", []string{"solve", "testdata/closure.json", "--timeout", "1ns"}, []string{"--timeout is 1ns"}},
		{"an address without a port", []string{"solve", good, "--server", "127.0.0.1"}, []string{"--server", "with a port"}},
		{"a folder", []string{"solve", t.TempDir()}, []string{"is a directory"}},
		{"a picture that cannot be written", []string{"solve", "testdata/closure.json", "--picture", "no/such/place.svg"}, []string{"no/such/place.svg"}},
	} {
		out, err := command("", x.args...)
		if err == nil {
			t.Errorf("%s: accepted: %s", x.name, out)
			continue
		}
		for _, says := range x.says {
			if !strings.Contains(err.Error(), says) {
				t.Errorf("%s: %q does not say %q", x.name, err, says)
			}
		}
	}
}

func TestTheVersion(t *testing.T) {
	for _, args := range []string{"version", "--version"} {
		if out, err := command("", args); err != nil || !strings.HasPrefix(out, "roadswell ") {
			t.Errorf("%s: %q, %v", args, out, err)
		}
	}
}

func TestClocksSpansAndNumbers(t *testing.T) {
	for got, want := range map[string]string{
		clock(3725.4): "1:02:05", clock(59.6): "0:01:00", clock(-61): "-0:01:01", clock(-0.2): "0:00:00",
		span(0): "0.0 s", span(59.94): "59.9 s", span(59.96): "1 min 00 s", span(371.6): "6 min 12 s", span(-5): "-5.0 s", span(119.7): "2 min 00 s",
		grouped(1234567.891, 1): "1,234,567.9", grouped(-0.04, 1): "0.0", grouped(-1234, 0): "-1,234", grouped(999, 0): "999",
		place(12345.6): "12.346 km",
	} {
		if got != want {
			t.Errorf("got %q, want %q", got, want)
		}
	}
}

func TestDeparturesCoverTheHorizon(t *testing.T) {
	for _, x := range []struct {
		horizon, every float64
		count          int
		last           float64
	}{{7200, 0, 12, 6600}, {800, 0, 14, 780}, {5, 0, 12, 5 * 11 / 12.0}, {1000, 300, 4, 900}, {1e6, 0, 13, 12 * 79200}} {
		got := departures(x.horizon, x.every)
		if len(got) != x.count || got[0] != 0 || got[len(got)-1] < x.last-1e-9 || got[len(got)-1] > x.last+1e-9 {
			t.Errorf("%+v: got %v", x, got)
		}
	}
}

func TestRedsAreWhatIsNotGreen(t *testing.T) {
	cycle := &pb.Signal{PlaceM: 7, Plan: &pb.Signal_Cycle{Cycle: &pb.CyclePlan{CycleS: 60, OffsetS: 130, Greens: []*pb.GreenWindow{{StartS: 0, EndS: 20}, {StartS: 30, EndS: 55}}}}}
	var got [][2]float64
	for _, r := range reds(cycle, 100) { // cycles begin at -50, 10, 70
		if r.Place != 7 {
			t.Errorf("red at %g", r.Place)
		}
		got = append(got, [2]float64{r.Start, r.End})
	}
	want := [][2]float64{{5, 10}, {30, 40}, {65, 70}, {90, 100}}
	if len(got) != len(want) {
		t.Fatalf("got %v, want %v", got, want)
	}
	for i := range want {
		if got[i] != want[i] {
			t.Errorf("got %v, want %v", got, want)
		}
	}
	if all := reds(&pb.Signal{Plan: &pb.Signal_Windows{Windows: &pb.WindowPlan{}}}, 50); len(all) != 1 || all[0].Start != 0 || all[0].End != 50 {
		t.Errorf("a signal without greens: %v", all)
	}
}

// TestRestrictionsAreTheStepsThatRestrict, at a bottleneck as at the exit.
func TestRestrictionsAreTheStepsThatRestrict(t *testing.T) {
	steps := []*pb.CapacityStep{
		{StartS: -60, Limit: &pb.CapacityStep_FlowVehPerH{FlowVehPerH: 1200}},
		{StartS: 60, Limit: &pb.CapacityStep_FlowVehPerH{}},
		{StartS: 90, Limit: &pb.CapacityStep_Unrestricted{Unrestricted: true}},
		{StartS: 700, Limit: &pb.CapacityStep_FlowVehPerH{FlowVehPerH: 600}},
	}
	scenario := &pb.Scenario{
		HorizonS: 600, Segments: []*pb.Segment{{LengthM: 900}}, Exit: &pb.Exit{Capacity: steps},
		Bottlenecks: []*pb.Bottleneck{{Name: "works", PlaceM: 300, Capacity: steps}},
	}
	d := diagram(inquiry{request: &pb.SolveRequest{Scenario: scenario}}, &pb.SolveResponse{Corridor: &pb.Corridor{ExitM: 900}})
	var want []picture.Restriction
	for _, place := range []float64{300, 900} {
		want = append(want, picture.Restriction{Place: place, Start: 0, End: 60, Label: "1,200 veh/h"},
			picture.Restriction{Place: place, Start: 60, End: 90, Label: "closed", Closed: true})
	}
	if !slices.Equal(d.Restrictions, want) {
		t.Errorf("got %+v, want %+v", d.Restrictions, want)
	}
}

// TestTracedVehiclesCoverTheRoad, however short the horizon.
func TestTracedVehiclesCoverTheRoad(t *testing.T) {
	for _, x := range []struct{ length, horizon, furthest float64 }{{9000, 7200, 5800}, {9000, 60, 200}, {9, 7200, 9}} {
		least, entering := x.length, 0
		list := starts(&pb.Scenario{OriginM: -x.length, HorizonS: x.horizon, Segments: []*pb.Segment{{LengthM: x.length}}})
		for _, at := range list {
			if at.GetPlaceM() == -x.length {
				entering++
				continue
			}
			least = min(least, at.GetPlaceM()+x.length)
		}
		if entering != traced || least > x.furthest+1e-6 || len(list) > 2*traced {
			t.Errorf("%+v: %d vehicles, %d of them enter, the last on the road at %g m", x, len(list), entering, least)
		}
	}
}

// TestNobodyIsDrawnOnAnEmptyRoad: traced vehicles must be there.
func TestNobodyIsDrawnOnAnEmptyRoad(t *testing.T) {
	d := picture.Diagram{Horizon: 100, Entry: -500, Exit: 500, Density: picture.Field{
		Times: []float64{25, 75}, Places: []float64{-250, 250}, Values: [][]float64{{20, 0}, {0, 20}},
	}}
	for at, want := range map[[2]float64]bool{
		{-500, 0}: false, {-500, 49}: false, {-500, 51}: true, {499, 0}: true, {1, 51}: false, {500, 100}: false,
	} {
		if got := onEmptyRoad(d, &pb.PlaceTime{PlaceM: at[0], TimeS: at[1]}); got != want {
			t.Errorf("%v: %t, want %t", at, got, want)
		}
	}
	if onEmptyRoad(picture.Diagram{}, &pb.PlaceTime{}) {
		t.Error("a picture without a field hides vehicles")
	}
}

// listen serves on a free loopback port until the test ends.
func listen(t *testing.T) string {
	t.Helper()
	server, address, err := loopbackServer()
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { server.Stop(time.Second) })
	return address
}
