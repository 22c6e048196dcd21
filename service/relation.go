package service

import (
	"errors"
	"fmt"
	"regexp"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// units turn the numbers of a relation into those of a consistent system of units. A relation does not care
// which: km, h and veh fit together as well as m, s and veh. So each relation is made twice, first in the
// contract's own units, where whatever is wrong with it comes out in numbers the caller knows.
type units struct {
	flow, density, speed func(float64) float64
}

func unchanged(x float64) float64 { return x }

var (
	contractUnits = units{unchanged, unchanged, unchanged}
	siUnits       = units{flowToSI, densityToSI, speedToSI}
)

// relation converts the relation of one segment, all lanes together. It reports what is wrong under field and
// returns the zero Relation then.
func (c *converter) relation(seg *pb.Segment, field string) solver.Relation {
	lanes := 1.0
	if seg.Lanes != nil {
		lanes = seg.GetLanes()
	}
	if !(lanes > 0) || !isFinite(lanes) {
		c.bad.add(field+".lanes", pb.FieldReason_FIELD_REASON_POSITIVE, printNumber(lanes), "more than 0")
	}
	form, path := seg.GetRelation(), field+".relation"
	if _, made := c.form(form, path, contractUnits); !made {
		return solver.Relation{}
	}
	r, made := c.form(form, path, siUnits)
	if !made || !(lanes > 0) || !isFinite(lanes) {
		return r
	}
	return r.Lanes(lanes)
}

// form makes the relation in the given units; false after reporting why it cannot.
func (c *converter) form(f *pb.FlowDensityRelation, path string, u units) (solver.Relation, bool) {
	before := len(c.bad.list)
	r, name, err := build(f, u)
	if name == "" {
		c.bad.required(path, "one form of relation, such as triangular")
		return r, false
	}
	path += "." + name
	if t := f.GetTriangular(); t != nil {
		c.givenZeros(t, path)
	}
	var invalid *solver.InvalidError
	if errors.As(err, &invalid) {
		for _, x := range invalid.Violations {
			c.relationViolation(path, x)
		}
	}
	return r, err == nil && len(c.bad.list) == before
}

// build makes the form that was given and returns its name in the contract; "" where none was given.
func build(f *pb.FlowDensityRelation, u units) (solver.Relation, string, error) {
	var r solver.Relation
	var err error
	switch x := f.GetForm().(type) {
	case *pb.FlowDensityRelation_Triangular:
		r, err = buildTriangular(x.Triangular, u)
		return r, "triangular", err
	case *pb.FlowDensityRelation_Trapezoidal:
		r, err = buildTrapezoidal(x.Trapezoidal, u)
		return r, "trapezoidal", err
	case *pb.FlowDensityRelation_Greenshields:
		r, err = solver.Greenshields(u.speed(x.Greenshields.GetFreeSpeedKmPerH()), u.density(x.Greenshields.GetJamDensityVehPerKm()))
		return r, "greenshields", err
	case *pb.FlowDensityRelation_PiecewiseLinear:
		r, err = buildPiecewise(x.PiecewiseLinear, u)
		return r, "piecewise_linear", err
	case *pb.FlowDensityRelation_QuadraticFree:
		r, err = buildQuadraticFree(x.QuadraticFree, u)
		return r, "quadratic_free", err
	}
	return r, "", nil
}

func buildTriangular(t *pb.TriangularRelation, u units) (solver.Relation, error) {
	return solver.Triangular(solver.TriangularParams{
		FreeSpeed: u.speed(t.GetFreeSpeedKmPerH()), Capacity: u.flow(t.GetCapacityVehPerH()),
		JamDensity: u.density(t.GetJamDensityVehPerKm()), WaveSpeed: u.speed(t.GetWaveSpeedKmPerH()),
	})
}

func buildTrapezoidal(t *pb.TrapezoidalRelation, u units) (solver.Relation, error) {
	return solver.Trapezoidal(solver.TrapezoidalParams{
		FreeSpeed: u.speed(t.GetFreeSpeedKmPerH()), Capacity: u.flow(t.GetCapacityVehPerH()),
		JamDensity: u.density(t.GetJamDensityVehPerKm()), WaveSpeed: u.speed(t.GetWaveSpeedKmPerH()),
	})
}

func buildPiecewise(p *pb.PiecewiseLinearRelation, u units) (solver.Relation, error) {
	corners := make([]solver.FlowPoint, len(p.GetCorners()))
	for i, c := range p.GetCorners() {
		corners[i] = solver.FlowPoint{Density: u.density(c.GetDensityVehPerKm()), Flow: u.flow(c.GetFlowVehPerH())}
	}
	return solver.PiecewiseLinear(corners)
}

func buildQuadraticFree(q *pb.QuadraticFreeRelation, u units) (solver.Relation, error) {
	return solver.QuadraticFree(u.speed(q.GetFreeSpeedKmPerH()), u.speed(q.GetCriticalSpeedKmPerH()),
		u.density(q.GetCriticalDensityVehPerKm()), u.density(q.GetJamDensityVehPerKm()))
}

// givenZeros refuses zeros that were given: to the solver a zero means "not known", to a caller a slip.
func (c *converter) givenZeros(t *pb.TriangularRelation, path string) {
	for name, p := range map[string]*float64{
		"free_speed_km_per_h": t.FreeSpeedKmPerH, "capacity_veh_per_h": t.CapacityVehPerH,
		"jam_density_veh_per_km": t.JamDensityVehPerKm, "wave_speed_km_per_h": t.WaveSpeedKmPerH,
	} {
		if p != nil && *p == 0 {
			c.bad.add(path+"."+name, pb.FieldReason_FIELD_REASON_POSITIVE, "0", "more than 0, or left out")
		}
	}
}

// relationFields are the solver's names for the numbers of a relation.
var relationFields = map[string]string{
	"FreeSpeed": "free_speed_km_per_h", "Capacity": "capacity_veh_per_h", "JamDensity": "jam_density_veh_per_km",
	"WaveSpeed": "wave_speed_km_per_h", "CriticalSpeed": "critical_speed_km_per_h",
	"CriticalDensity": "critical_density_veh_per_km",
	"Density":         "density_veh_per_km", "Flow": "flow_veh_per_h",
}

var cornerField = regexp.MustCompile(`^\[(\d+)\](?:\.(\w+))?$`)

// relationViolation reports a violation found while making a relation in the contract's units.
func (c *converter) relationViolation(path string, x solver.Violation) {
	field := path
	if m := cornerField.FindStringSubmatch(x.Field); m != nil {
		field = fmt.Sprintf("%s.corners[%s]", path, m[1])
		if m[2] != "" {
			field = join(field, relationFields[m[2]])
		}
	} else if name := relationFields[x.Field]; name != "" {
		field = join(path, name)
	}
	allowed := relabelUnits.Replace(x.Allowed)
	c.bad.addUnlessKnown(field, string(x.Rule), valueAt(c.request, field), allowed)
}
