package service_test

import (
	"context"
	"errors"
	"strings"
	"testing"
	"time"

	"google.golang.org/grpc/codes"

	"github.com/roadswell/roadswell/client"
	"github.com/roadswell/roadswell/service"
)

// callCases take each reason for refusing a call, other than its fields, from the server to the client.
var callCases = []struct {
	name    string
	options service.Options
	request string
	code    codes.Code
	reason  string
	meta    []string
}{
	{"interactions", service.Options{Limits: service.Limits{Interactions: 3}}, busy, codes.ResourceExhausted, client.ReasonInteractionLimit, []string{"limit", "reached_s"}},
	{"memory", service.Options{Limits: service.Limits{SolutionBytes: 20_000}}, veryBusy, codes.ResourceExhausted, client.ReasonMemoryLimit, []string{"limit", "reached_s"}},
	{"answer", service.Options{Limits: service.Limits{AnswerBytes: 1000}}, busyGrid, codes.ResourceExhausted, client.ReasonAnswerTooLarge, []string{"limit"}},
	{"the server's own time", service.Options{Limits: service.Limits{Time: time.Nanosecond}}, busy, codes.DeadlineExceeded, client.ReasonOutOfTime, nil},
	{"message", service.Options{Limits: service.Limits{MessageBytes: 50}}, busy, codes.ResourceExhausted, "", nil},
	{"no closed form", service.Options{}, leavesTheFamily, codes.FailedPrecondition, client.ReasonNoClosedForm, []string{"node", "time_s"}},
}

const (
	busyScenario = `"scenario": {"horizon_s": 600, ` + goodRoad + `, "entry": {"demand": [{"flow_veh_per_h": 700}]},
		"signals": [{"name": "s", "place_m": 700, "cycle": {"cycle_s": 60, "greens": [{"end_s": 30}]}}]}`
	busy     = `{` + busyScenario + `}`
	veryBusy = `{"scenario": {"horizon_s": 60000, ` + goodRoad + `, "entry": {"demand": [{"flow_veh_per_h": 700}]},
		"signals": [{"name": "s", "place_m": 700, "cycle": {"cycle_s": 60, "greens": [{"end_s": 30}]}}]}}`
	busyGrid = `{` + busyScenario + `, "questions": [{"grid": {"places_m": [1,2,3,4,5,6,7,8,9,10], "times_s": [1,2,3,4,5]}}]}`
	// A fan behind a signal runs into a change of a curved relation.
	leavesTheFamily = `{"scenario": {"horizon_s": 600, "segments": [
		{"length_m": 500, "relation": {"greenshields": {"free_speed_km_per_h": 72, "jam_density_veh_per_km": 100}}},
		{"length_m": 500, "relation": {"greenshields": {"free_speed_km_per_h": 60, "jam_density_veh_per_km": 120}}}],
		"entry": {"demand": [{"flow_veh_per_h": 700}]},
		"signals": [{"name": "s", "place_m": 200, "cycle": {"cycle_s": 60, "greens": [{"end_s": 30}]}}]}}`
)

func TestCallsThatCannotBeServed(t *testing.T) {
	for _, x := range callCases {
		t.Run(x.name, func(t *testing.T) {
			c := serve(t, x.options)
			_, err := c.Solve(context.Background(), request(t, x.request))
			var refused *client.Error
			if !errors.As(err, &refused) {
				t.Fatalf("not refused: %v", err)
			}
			if refused.Code != x.code || refused.Reason != x.reason {
				t.Errorf("refused with %s, %q, want %s, %q: %v", refused.Code, refused.Reason, x.code, x.reason, err)
			}
			for _, name := range x.meta {
				if refused.Metadata[name] == "" {
					t.Errorf("metadata %v does not have %s", refused.Metadata, name)
				}
			}
		})
	}
}

func TestCallersThatGiveUp(t *testing.T) {
	c := serve(t, service.Options{})
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := c.Solve(ctx, request(t, busy)); !errors.Is(err, context.Canceled) {
		t.Errorf("a cancelled call ends with %v", err)
	}
	ctx, cancel = context.WithTimeout(context.Background(), time.Nanosecond)
	defer cancel()
	if _, err := c.Solve(ctx, request(t, busy)); !errors.Is(err, context.DeadlineExceeded) {
		t.Errorf("a call without time ends with %v", err)
	}
}

func TestLongListsAreRefusedBeforeTheyAreRead(t *testing.T) {
	c := serve(t, service.Options{Limits: service.Limits{Segments: 1, Nodes: 1, ListEntries: 2, Questions: 1, Items: 10}})
	three := `{"start_s": 1, "flow_veh_per_h": 1}, {"start_s": 2, "flow_veh_per_h": 1}, {"start_s": 3, "flow_veh_per_h": 1}`
	for request_, field := range map[string]string{
		scenario(`"segments": [{}, {}]`):                                              "scenario.segments",
		scenario(`"bottlenecks": [{}, {}]`):                                           "scenario.bottlenecks",
		scenario(`"signals": [{}, {}]`):                                               "scenario.signals",
		scenario(`"entry": {"demand": [` + three + `]}`):                              "scenario.entry.demand",
		scenario(`"exit": {"capacity": [` + three + `]}`):                             "scenario.exit.capacity",
		scenario(`"bottlenecks": [{"capacity": [` + three + `]}]`):                    "scenario.bottlenecks[0].capacity",
		scenario(`"signals": [{"cycle": {"greens": [{}, {}, {}]}}]`):                  "scenario.signals[0].cycle.greens",
		scenario(`"signals": [{"windows": {"greens": [{}, {}, {}]}}]`):                "scenario.signals[0].windows.greens",
		segment(`"relation": {"piecewise_linear": {"corners": [{}, {}, {}]}}`):        "scenario.segments[0].relation.piecewise_linear.corners",
		scenario(`"initial": {"profile": [{}, {}, {}]}`):                              "scenario.initial.profile",
		scenario(`"initial": {"standing_queues": [{}, {}]}`):                          "scenario.initial.standing_queues",
		`{"scenario": {}, "questions": [{}, {}]}`:                                     "questions",
		asking(`"grid": {"places_m": [1,2,3,4], "times_s": [1,2,3]}`):                 "questions",
		asking(`"queues": {"times_s": [1,2,3,4,5,6,7,8,9]}`):                          "questions",
		asking(`"totals": {"times_s": [1,2,3,4,5,6]}`):                                "questions",
		asking(`"trajectories": {"starts": [{},{},{}], "passing_places_m": [1,2,3]}`): "questions",
	} {
		_, err := c.Solve(context.Background(), request(t, request_))
		var f *client.FieldError
		if !errors.As(err, &f) || f.Field != field || f.Reason != "LIMIT" {
			t.Errorf("%s: got %v, want %s refused for LIMIT", request_, err, field)
		}
	}
}

// TestManyViolationsFitIntoAnError: what usual clients accept as a trailer is 8 KiB; the rest is counted.
func TestManyViolationsFitIntoAnError(t *testing.T) {
	c := serve(t, service.Options{})
	steps := strings.Repeat(`{"flow_veh_per_h": -1},`, 500)
	_, err := c.Solve(context.Background(), request(t, onRoad(`"entry": {"demand": [`+steps[:len(steps)-1]+`]}`)))
	var refused *client.Error
	if !errors.As(err, &refused) || refused.Reason != client.ReasonInvalidRequest {
		t.Fatalf("not refused: %v", err)
	}
	bytes := 0
	for _, f := range refused.Fields {
		bytes += len(f.Field) + len(f.Reason) + len(f.Description)
	}
	if bytes > 5000 || len(refused.Fields) < 20 || refused.Metadata["fields_not_listed"] == "" {
		t.Errorf("%d fields in %d bytes, %q more", len(refused.Fields), bytes, refused.Metadata["fields_not_listed"])
	}
	if !strings.Contains(err.Error(), "more") {
		t.Errorf("the error does not say that there are more: %v", err)
	}
}
