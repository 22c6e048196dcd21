package main

import (
	"fmt"
	"strings"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// report is the text for a traffic engineer.
func (a inquiry) report(response *pb.SolveResponse) string {
	var out strings.Builder
	out.WriteString(a.heading(response))
	section(&out, "Queues", queuesText(a.own(response, queuesQuestion).GetQueues()))
	section(&out, "", travelTimesText(a.own(response, travelTimesQuestion).GetTravelTimes()))
	section(&out, "", totalsText(a.own(response, totalsQuestion).GetTotals()))
	for i, answer := range response.GetAnswers()[:a.asked] {
		section(&out, fmt.Sprintf("Question %d%s", i+1, labelled(answer.GetLabel())), answerText(answer))
	}
	out.WriteString("\n" + response.GetAdvisory() + "\n")
	return out.String()
}

func section(out *strings.Builder, title, text string) {
	out.WriteString("\n")
	if title != "" {
		out.WriteString(title + "\n")
	}
	out.WriteString(text)
}

func labelled(label string) string {
	if label == "" {
		return ""
	}
	return ": " + label
}

// heading says what was solved, and how far the answer can be trusted.
func (a inquiry) heading(response *pb.SolveResponse) string {
	c, st := response.GetCorridor(), response.GetStats()
	title := a.request.GetScenario().GetTitle()
	if title == "" {
		title = a.file
	}
	return fmt.Sprintf("%s\n%s to %s, %s, %s, horizon %s\n%s: %s, solved in %.3g ms\n",
		title, place(c.GetEntryM()), place(c.GetExitM()), many(len(c.GetStretches()), "segment"), many(len(c.GetNodes()), "node"), clock(c.GetHorizonS()),
		certificateText(response.GetCertificate()), many(int(st.GetInteractions()), "wave interaction"), 1000*st.GetSolveTimeS())
}

func many(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

func certificateText(c *pb.Certificate) string {
	switch c.GetKind() {
	case pb.CertificateKind_CERTIFICATE_KIND_EXACT:
		return "Exact solution of the model"
	case pb.CertificateKind_CERTIFICATE_KIND_BOUNDED:
		return fmt.Sprintf("Within %g vehicles of the exact solution of the model", c.GetCountErrorVeh())
	}
	return "Estimate, without a bound on its error"
}

// queuesListed is how many queues of one node are listed; behind a signal there may be one in each cycle.
const queuesListed = 12

func queuesText(q *pb.QueuesAnswer) string {
	var t table
	t.row("node", "place", "begins", "longest", "at", "most vehicles", "at", "cleared")
	for _, n := range q.GetNodes() {
		for i, e := range n.GetQueues() {
			if i == queuesListed {
				t.row(fmt.Sprintf("%s: %d more", n.GetNode(), len(n.GetQueues())-i))
				break
			}
			t.row(n.GetNode(), place(n.GetPlaceM()), clock(e.GetStartS()), length(e.GetPeakLengthM()), clock(e.GetPeakLengthTimeS()),
				grouped(e.GetPeakVehicles(), 1), clock(e.GetPeakVehiclesTimeS()), clockOr(e.ClearedS, "not by the horizon"))
		}
	}
	if len(t.rows) == 1 {
		return "  No queue forms.\n"
	}
	return t.String() + extentsText(q) + reachesText(q)
}

// extentsText lists extents at times that were asked for.
func extentsText(q *pb.QueuesAnswer) string {
	var t table
	t.row("node", "time", "tail", "head", "length", "vehicles")
	for _, n := range q.GetNodes() {
		for _, e := range n.GetExtents() {
			if !e.GetPresent() {
				t.row(n.GetNode(), clock(e.GetTimeS()), none, none, none, none)
				continue
			}
			t.row(n.GetNode(), clock(e.GetTimeS()), place(e.GetTailM()), place(e.GetHeadM()), length(e.GetLengthM()), grouped(e.GetVehicles(), 1))
		}
	}
	return t.unlessBare()
}

// reachesText lists when queues reach places that were asked for.
func reachesText(q *pb.QueuesAnswer) string {
	var t table
	t.row("queue of", "reaches", "at")
	for _, n := range q.GetNodes() {
		for _, r := range n.GetReaches() {
			t.row(n.GetNode(), place(r.GetPlaceM()), clockOr(r.TimeS, "not by the horizon"))
		}
	}
	return t.unlessBare()
}

func travelTimesText(a *pb.TravelTimesAnswer) string {
	var t table
	t.row("departure", "arrival", "travel time", "instantaneous", "free flow", "delay", "waiting outside")
	for _, trip := range a.GetTrips() {
		t.row(clock(trip.GetDepartureS()), clockOr(trip.ArrivalS, "not by the horizon"), spanOr(trip.TravelTimeS, none),
			spanOr(trip.InstantaneousTimeS, "standing"), span(trip.GetFreeFlowTimeS()), spanOr(trip.DelayS, none), spanOr(trip.WaitingOutsideS, none))
	}
	return fmt.Sprintf("Travel times from %s to %s\n%s", place(a.GetFromM()), place(a.GetToM()), t.String())
}

func totalsText(a *pb.TotalsAnswer) string {
	var out strings.Builder
	for _, t := range a.GetTotals() {
		fmt.Fprintf(&out, "Totals from 0:00:00 to %s\n%s", clock(t.GetTimeS()), stretchesText(t))
		fmt.Fprintf(&out, "  outside: %s vehicles waiting, %s veh-h waited; turned away: %s vehicles\n",
			grouped(t.GetWaitingVehicles(), 1), grouped(t.GetWaitingVehicleH(), 1), grouped(t.GetTurnedAwayVehicles(), 1))
	}
	return out.String()
}

func stretchesText(totals *pb.Totals) string {
	var t table
	t.row("stretch", "veh-km", "veh-h", "delay veh-h", "at start", "entered", "left", "at end")
	for _, s := range append(totals.GetSegments(), totals.GetCorridor()) {
		t.row(s.GetName(), grouped(s.GetTravelVehicleKm(), 1), grouped(s.GetTravelVehicleH(), 1), grouped(s.GetDelayVehicleH(), 1),
			grouped(s.GetInitialVehicles(), 1), grouped(s.GetEnteredVehicles(), 1), grouped(s.GetLeftVehicles(), 1), grouped(s.GetStoredVehicles(), 1))
	}
	return t.String()
}
