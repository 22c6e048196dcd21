package service

import (
	"context"
	"fmt"
	"time"

	"google.golang.org/protobuf/proto"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// Corridor answers the calls of roadswell.v1.CorridorService. It holds no state: one value serves any number of
// calls at once. [NewServer] puts it behind recovery, logs and metrics; a bare Corridor has none of them.
type Corridor struct {
	pb.UnimplementedCorridorServiceServer
	limits Limits
}

// NewCorridor returns a Corridor with the given limits, or an error that names a negative one.
func NewCorridor(limits Limits) (*Corridor, error) {
	if err := limits.validate(); err != nil {
		return nil, err
	}
	return &Corridor{limits: limits.withDefaults()}, nil
}

// Solve solves the scenario and answers the questions. Errors are gRPC status errors with google.rpc details,
// as the contract lists them.
func (c *Corridor) Solve(ctx context.Context, req *pb.SolveRequest) (*pb.SolveResponse, error) {
	ctx, cancel := context.WithTimeout(ctx, c.limits.Time)
	defer cancel()
	scenario, bad := check(req, c.limits)
	if !bad.empty() {
		return nil, invalid(bad)
	}
	begin := time.Now()
	solution, err := solver.Solve(ctx, scenario, solver.Budget{Interactions: c.limits.Interactions, Memory: c.limits.SolutionBytes})
	if err != nil {
		return nil, refuse(req, err)
	}
	solved := time.Now()
	out, err := c.respond(ctx, req, scenario, solution)
	if err != nil {
		return nil, err
	}
	out.Stats.SolveTimeS = solved.Sub(begin).Seconds()
	out.Stats.AnswerTimeS = time.Since(solved).Seconds()
	return out, nil
}

// check converts the scenario and finds everything that is wrong with the request.
func check(req *pb.SolveRequest, limits Limits) (solver.Scenario, *violations) {
	bad := &violations{}
	limits.checkCounts(req, bad)
	if !bad.empty() { // do not walk through lists that are too long
		return solver.Scenario{}, bad
	}
	checkFinite(req, bad)
	c := converter{request: req, bad: bad}
	scenario := c.scenario()
	checkQuestions(req, limits, bad)
	if !bad.empty() { // else the names are checked against the corridor once it is built
		checkNodes(req, possibleNodes(req.GetScenario()), bad)
	}
	return scenario, bad
}

// respond answers the questions from the solution.
func (c *Corridor) respond(ctx context.Context, req *pb.SolveRequest, scenario solver.Scenario, solution *solver.Solution) (*pb.SolveResponse, error) {
	out := &pb.SolveResponse{
		Certificate: &pb.Certificate{Kind: pb.CertificateKind_CERTIFICATE_KIND_EXACT},
		Corridor:    corridor(scenario, solution),
		Stats:       stats(solution.Stats()),
		Advisory:    Advisory,
	}
	bad := &violations{}
	if checkNodes(req, namesOf(out.Corridor.GetNodes()), bad); !bad.empty() {
		return nil, invalid(bad)
	}
	a := answerer{ctx: ctx, request: req, solution: solution, corridor: out.Corridor, most: c.limits.AnswerBytes}
	a.spent = proto.Size(out)
	for _, q := range req.GetQuestions() {
		answer, err := a.answer(q)
		if err != nil {
			return nil, err
		}
		out.Answers = append(out.Answers, answer)
	}
	broken := &violations{}
	if checkFinite(out, broken); !broken.empty() {
		return nil, notFinite(broken)
	}
	return out, nil
}

var nodeKinds = map[solver.NodeKind]pb.NodeKind{
	solver.EntryNode: pb.NodeKind_NODE_KIND_ENTRY, solver.JoinNode: pb.NodeKind_NODE_KIND_JOIN,
	solver.BottleneckNode: pb.NodeKind_NODE_KIND_BOTTLENECK, solver.SignalNode: pb.NodeKind_NODE_KIND_SIGNAL,
	solver.ExitNode: pb.NodeKind_NODE_KIND_EXIT,
}

// corridor describes the corridor as it was understood.
func corridor(scenario solver.Scenario, solution *solver.Solution) *pb.Corridor {
	entry, exit := solution.Extent()
	out := &pb.Corridor{EntryM: entry, ExitM: exit, HorizonS: solution.Horizon()}
	for _, n := range solution.Nodes() {
		out.Nodes = append(out.Nodes, &pb.Node{Name: n.Name, Kind: nodeKinds[n.Kind], PlaceM: n.Place})
	}
	start := scenario.Origin
	for i, s := range scenario.Segments {
		_, critical := s.Relation.CriticalDensity()
		out.Stretches = append(out.Stretches, &pb.Stretch{
			Name: segmentName(s.Name, i), StartM: start, EndM: start + s.Length,
			FreeSpeedKmPerH: speedFromSI(s.Relation.FreeSpeed()), CapacityVehPerH: flowFromSI(s.Relation.Capacity()),
			CriticalDensityVehPerKm: densityFromSI(critical), JamDensityVehPerKm: densityFromSI(s.Relation.JamDensity()),
		})
		start += s.Length
	}
	return out
}

// segmentName is the name under which a segment appears in answers.
func segmentName(given string, index int) string {
	if given == "" {
		return fmt.Sprintf("segment %d", index+1)
	}
	return given
}

func stats(s solver.Stats) *pb.SolveStats {
	return &pb.SolveStats{Interactions: s.Interactions, Fronts: int64(s.Fronts), SolutionBytes: s.Bytes}
}
