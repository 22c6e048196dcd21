package service

import (
	"slices"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

func (a *answerer) states(q *pb.StatesQuestion) (*pb.Answer_States, error) {
	out := &pb.StatesAnswer{}
	for _, p := range q.GetPoints() {
		sample, err := a.solution.At(p.GetPlaceM(), p.GetTimeS())
		if err != nil {
			return nil, a.failed(err)
		}
		found := &pb.PointState{
			At: p, Upstream: state(sample.Up), Downstream: state(sample.Down), OnFront: sample.OnFront, CountVeh: sample.Count,
		}
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Points = append(out.Points, found)
	}
	return &pb.Answer_States{States: out}, nil
}

// bytesPerNumber is the size of a number of a grid in the response.
const bytesPerNumber = 8

func (a *answerer) grid(q *pb.GridQuestion) (*pb.Answer_Grid, error) {
	cells := len(q.GetPlacesM()) * len(q.GetTimesS())
	wanted := gridColumns(q.GetQuantities(), cells)
	if err := a.spendBytes(cells * bytesPerNumber * len(wanted)); err != nil {
		return nil, err
	}
	out := &pb.GridAnswer{PlacesM: q.GetPlacesM(), TimesS: q.GetTimesS()}
	for row, t := range q.GetTimesS() {
		if err := a.gridRow(out, wanted, row, t); err != nil {
			return nil, err
		}
	}
	for _, c := range wanted {
		c.deliver(out)
	}
	return &pb.Answer_Grid{Grid: out}, nil
}

// gridRow adds the states at all places at one time.
func (a *answerer) gridRow(out *pb.GridAnswer, wanted []*gridColumn, row int, t float64) error {
	for i, x := range out.GetPlacesM() {
		s, err := a.solution.At(x, t)
		if err != nil {
			return a.failed(err)
		}
		for _, c := range wanted {
			c.values = append(c.values, c.read(s))
		}
		if s.Up == s.Down {
			continue
		}
		two := &pb.TwoSidedPoint{Index: int64(row*len(out.GetPlacesM()) + i), Downstream: state(s.Down)}
		if err := a.spend(two); err != nil {
			return err
		}
		out.TwoSided = append(out.TwoSided, two)
	}
	return a.spendBytes(0) // the row itself is paid for; see whether the call is over
}

// gridColumn collects one quantity of a grid.
type gridColumn struct {
	values  []float64
	read    func(solver.Sample) float64
	deliver func(*pb.GridAnswer)
}

// gridColumns are the columns for the quantities asked for, each once; for all where none is named.
func gridColumns(asked []pb.GridQuantity, cells int) []*gridColumn {
	var out []*gridColumn
	for _, q := range []pb.GridQuantity{
		pb.GridQuantity_GRID_QUANTITY_DENSITY, pb.GridQuantity_GRID_QUANTITY_FLOW,
		pb.GridQuantity_GRID_QUANTITY_SPEED, pb.GridQuantity_GRID_QUANTITY_COUNT,
	} {
		if len(asked) > 0 && !slices.Contains(asked, q) {
			continue
		}
		c := &gridColumn{values: make([]float64, 0, cells)}
		switch q {
		case pb.GridQuantity_GRID_QUANTITY_DENSITY:
			c.read = func(s solver.Sample) float64 { return densityFromSI(s.Up.Density) }
			c.deliver = func(g *pb.GridAnswer) { g.DensityVehPerKm = c.values }
		case pb.GridQuantity_GRID_QUANTITY_FLOW:
			c.read = func(s solver.Sample) float64 { return flowFromSI(s.Up.Flow) }
			c.deliver = func(g *pb.GridAnswer) { g.FlowVehPerH = c.values }
		case pb.GridQuantity_GRID_QUANTITY_SPEED:
			c.read = func(s solver.Sample) float64 { return speedFromSI(s.Up.Speed) }
			c.deliver = func(g *pb.GridAnswer) { g.SpeedKmPerH = c.values }
		case pb.GridQuantity_GRID_QUANTITY_COUNT:
			c.read = func(s solver.Sample) float64 { return s.Count }
			c.deliver = func(g *pb.GridAnswer) { g.CountVeh = c.values }
		}
		out = append(out, c)
	}
	return out
}
