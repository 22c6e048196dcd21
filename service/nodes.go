package service

import (
	"fmt"
	"slices"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// checkNodes refuses names of nodes in questions that are not among those of the corridor.
func checkNodes(req *pb.SolveRequest, names []string, bad *violations) {
	known := map[string]bool{}
	for _, name := range names {
		known[name] = true
	}
	for i, q := range req.GetQuestions() {
		for j, name := range q.GetQueues().GetNodes() {
			if !known[name] {
				bad.add(fmt.Sprintf("questions[%d].queues.nodes[%d]", i, j), pb.FieldReason_FIELD_REASON_UNKNOWN,
					printText(name), "a node of the corridor: "+listed(names))
			}
		}
	}
}

// possibleNodes are the names that nodes of the scenario can have: of each place where segments meet and something
// stands, the corridor keeps one.
func possibleNodes(s *pb.Scenario) []string {
	names := []string{solver.EntryName}
	for _, b := range s.GetBottlenecks() {
		names = append(names, b.GetName())
	}
	for _, g := range s.GetSignals() {
		names = append(names, g.GetName())
	}
	for i, up := range s.GetSegments() {
		if i+1 < len(s.GetSegments()) {
			names = append(names, "join "+segmentName(up.GetName(), i)+"/"+segmentName(s.GetSegments()[i+1].GetName(), i+1))
		}
	}
	return append(names, solver.ExitName)
}

// standingNode refuses a standing queue behind a node that is not among those that can hold one.
func (c *converter) standingNode(name string, names []string, field string) {
	if name != solver.EntryName && !slices.Contains(names, name) { // the solver tells what is wrong with the entry
		c.bad.add(field+".node", pb.FieldReason_FIELD_REASON_UNKNOWN, printText(name), "a node of the corridor: "+listed(names))
	}
}

func namesOf(nodes []*pb.Node) []string {
	names := make([]string, len(nodes))
	for i, n := range nodes {
		names[i] = n.GetName()
	}
	return names
}

// namesListed is how many names an error quotes.
const namesListed = 8

func listed(names []string) string {
	text := ""
	for i, name := range names {
		if i == namesListed {
			return text + ", ..."
		}
		if i > 0 {
			text += ", "
		}
		text += printText(name)
	}
	return text
}
