package main

import (
	"fmt"
	"io"
	"math"
	"path/filepath"
	"strings"

	"github.com/roadswell/roadswell/client/picture"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// draw writes the picture to each of the files, in the format that its name asks for.
func draw(files []string, a inquiry, response *pb.SolveResponse) error {
	if len(files) == 0 {
		return nil
	}
	d := diagram(a, response)
	for _, name := range files {
		write := func(w io.Writer) error { return d.WriteSVG(w) }
		if strings.EqualFold(filepath.Ext(name), ".png") {
			write = func(w io.Writer) error { return d.WritePNG(w) }
		}
		if err := create(name, write); err != nil {
			return err
		}
	}
	return nil
}

// diagram puts the answers together into a picture.
func diagram(a inquiry, response *pb.SolveResponse) picture.Diagram {
	s, c := a.request.GetScenario(), response.GetCorridor()
	d := extent(s)
	d.Title = s.GetTitle()
	if d.Title == "" {
		d.Title = a.file
	}
	d.Subtitle = fmt.Sprintf("%s, %s", certificateText(response.GetCertificate()), many(int(response.GetStats().GetInteractions()), "wave interaction"))
	d.Density = field(a.own(response, gridQuestion).GetGrid(), c)
	d.Fronts = fronts(a.own(response, frontsQuestion).GetFronts())
	d.Tails = tails(a.own(response, queuesQuestion).GetQueues())
	for _, t := range a.own(response, trajectoriesQuestion).GetTrajectories().GetTrajectories() {
		if !onEmptyRoad(d, t.GetStart()) {
			d.Trajectories = append(d.Trajectories, line(t.GetPath()))
		}
	}
	for _, g := range s.GetSignals() {
		d.Reds = append(d.Reds, reds(g, s.GetHorizonS())...)
	}
	for _, b := range s.GetBottlenecks() {
		d.Restrictions = append(d.Restrictions, restrictions(b.GetPlaceM(), b.GetCapacity(), s.GetHorizonS())...)
	}
	d.Restrictions = append(d.Restrictions, restrictions(c.GetExitM(), s.GetExit().GetCapacity(), s.GetHorizonS())...)
	for _, n := range c.GetNodes() {
		d.Nodes = append(d.Nodes, picture.Node{Name: n.GetName(), Place: n.GetPlaceM()})
	}
	return d
}

// onEmptyRoad reports whether the field is empty at a point: nobody is there whose trajectory could be drawn.
func onEmptyRoad(d picture.Diagram, at *pb.PlaceTime) bool {
	rows, columns := len(d.Density.Places), len(d.Density.Times)
	if rows == 0 || columns == 0 {
		return false
	}
	row := int(float64(rows) * (at.GetPlaceM() - d.Entry) / (d.Exit - d.Entry))
	column := int(float64(columns) * at.GetTimeS() / d.Horizon)
	return d.Density.Values[min(max(row, 0), rows-1)][min(max(column, 0), columns-1)] <= 0
}

// field turns rows of times into rows of places.
func field(g *pb.GridAnswer, c *pb.Corridor) picture.Field {
	rows := len(g.GetPlacesM())
	f := picture.Field{Times: g.GetTimesS(), Places: g.GetPlacesM(), Values: make([][]float64, rows)}
	for i := range f.Values {
		f.Values[i] = make([]float64, len(f.Times))
		for j := range f.Times {
			f.Values[i][j] = math.Max(0, g.GetDensityVehPerKm()[j*rows+i])
		}
	}
	for _, s := range c.GetStretches() {
		f.Maximum = math.Max(f.Maximum, s.GetJamDensityVehPerKm())
	}
	return f
}

var pictureKinds = map[pb.FrontKind]picture.FrontKind{
	pb.FrontKind_FRONT_KIND_SHOCK: picture.Shock, pb.FrontKind_FRONT_KIND_CONTACT: picture.Contact,
	pb.FrontKind_FRONT_KIND_EDGE: picture.Edge,
}

func fronts(a *pb.FrontsAnswer) []picture.Front {
	var out []picture.Front
	for _, f := range a.GetFronts() {
		if kind, known := pictureKinds[f.GetKind()]; known {
			out = append(out, picture.Front{Kind: kind, Path: line(f.GetPath())})
		}
	}
	return out
}

func tails(a *pb.QueuesAnswer) []picture.Tail {
	var out []picture.Tail
	for _, n := range a.GetNodes() {
		for _, q := range n.GetQueues() {
			out = append(out, picture.Tail{Node: n.GetNode(), Path: line(q.GetTail())})
		}
	}
	return out
}

func line(p *pb.Path) picture.Path {
	out := make(picture.Path, 0, len(p.GetTimesS()))
	for i, t := range p.GetTimesS() {
		if i < len(p.GetPlacesM()) {
			out = append(out, picture.Point{Time: t, Place: p.GetPlacesM()[i]})
		}
	}
	return out
}

// reds are the times within the horizon at which the signal is not green.
func reds(g *pb.Signal, horizon float64) []picture.Red {
	var out []picture.Red
	end := 0.0 // of the last green
	for _, w := range greens(g, horizon) {
		if w.GetStartS() > end {
			out = append(out, picture.Red{Place: g.GetPlaceM(), Start: end, End: math.Min(w.GetStartS(), horizon)})
		}
		end = math.Max(end, w.GetEndS())
	}
	if end < horizon {
		out = append(out, picture.Red{Place: g.GetPlaceM(), Start: end, End: horizon})
	}
	return out
}

// greens lists the greens of a plan that touch the time from 0 to the horizon, in order.
func greens(g *pb.Signal, horizon float64) []*pb.GreenWindow {
	plan, cycle := g.GetWindows().GetGreens(), g.GetCycle()
	if cycle != nil {
		plan = nil
		offset := math.Mod(cycle.GetOffsetS(), cycle.GetCycleS())
		for start := offset - 2*cycle.GetCycleS(); start < horizon; start += cycle.GetCycleS() {
			for _, w := range cycle.GetGreens() {
				plan = append(plan, &pb.GreenWindow{StartS: start + w.GetStartS(), EndS: start + w.GetEndS()})
			}
		}
	}
	var out []*pb.GreenWindow
	for _, w := range plan {
		if w.GetEndS() > 0 && w.GetStartS() < horizon {
			out = append(out, w)
		}
	}
	return out
}

// restrictions are the steps of a schedule within the horizon that restrict the place.
func restrictions(place float64, steps []*pb.CapacityStep, horizon float64) []picture.Restriction {
	var out []picture.Restriction
	for i, s := range steps {
		end := horizon
		if i+1 < len(steps) {
			end = math.Min(horizon, steps[i+1].GetStartS())
		}
		start := math.Max(0, s.GetStartS())
		if s.GetUnrestricted() || start >= end {
			continue
		}
		out = append(out, picture.Restriction{
			Place: place, Start: start, End: end, Label: limitText(s),
			Closed: s.GetFlowVehPerH() == 0 && s.GetEndFlowVehPerH() == 0,
		})
	}
	return out
}

func limitText(s *pb.CapacityStep) string {
	from, to := s.GetFlowVehPerH(), s.GetFlowVehPerH()
	if s.EndFlowVehPerH != nil {
		to = s.GetEndFlowVehPerH()
	}
	switch {
	case from == 0 && to == 0:
		return "closed"
	case from != to:
		return fmt.Sprintf("%s to %s veh/h", grouped(from, 0), grouped(to, 0))
	}
	return grouped(from, 0) + " veh/h"
}
