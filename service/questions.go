package service

import (
	"fmt"
	"math"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// longestFreeText bounds labels and titles, bytes.
const longestFreeText = 200

// Path tolerances, m. Finer ones than the least would only multiply points that no road is surveyed to.
const (
	defaultTolerance = 1.0
	leastTolerance   = 0.001
)

// questionChecker finds what is wrong with questions before anything is computed.
type questionChecker struct {
	bad         *violations
	entry, exit float64 // m
	horizon     float64 // s
	items       int     // asked for so far
}

// checkQuestions reports all that is wrong with the questions. Node names are checked after the solve.
func checkQuestions(req *pb.SolveRequest, limits Limits, bad *violations) {
	s := req.GetScenario()
	c := questionChecker{bad: bad, horizon: s.GetHorizonS()}
	c.corridor(s)
	c.text(s.GetTitle(), "scenario.title")
	c.forgive()
	for i, q := range req.GetQuestions() {
		field := fmt.Sprintf("questions[%d]", i)
		c.text(q.GetLabel(), field+".label")
		c.question(q, s, field)
	}
	if c.items > limits.Items {
		bad.add("questions", pb.FieldReason_FIELD_REASON_LIMIT, "",
			fmt.Sprintf("at most %d points, departures and the like in one call; these ask for %d", limits.Items, c.items))
	}
}

// corridor measures how far the road reaches; nowhere, where a length is at fault.
func (c *questionChecker) corridor(s *pb.Scenario) {
	c.entry = s.GetOriginM()
	c.exit = c.entry
	for _, seg := range s.GetSegments() {
		if !(seg.GetLengthM() > 0) {
			c.exit = c.entry
			return
		}
		c.exit += seg.GetLengthM()
	}
}

// forgive checks no place or time against a corridor or a horizon that is itself at fault.
func (c *questionChecker) forgive() {
	if !(c.exit > c.entry) || !isFinite(c.exit-c.entry) {
		c.entry, c.exit = math.Inf(-1), math.Inf(1)
	}
	if !(c.horizon > 0) {
		c.horizon = math.Inf(1)
	}
}

func (c *questionChecker) question(q *pb.Question, s *pb.Scenario, field string) {
	switch x := q.GetAsk().(type) {
	case *pb.Question_States:
		c.points(x.States.GetPoints(), field+".states.points")
	case *pb.Question_Grid:
		c.grid(x.Grid, field+".grid")
	case *pb.Question_Fronts:
		c.fronts(x.Fronts, field+".fronts")
	case *pb.Question_Queues:
		c.queues(x.Queues, s, field+".queues")
	case *pb.Question_Trajectories:
		c.trajectories(x.Trajectories, field+".trajectories")
	case *pb.Question_TravelTimes:
		c.travelTimes(x.TravelTimes, field+".travel_times")
	case *pb.Question_Characteristics:
		c.points(x.Characteristics.GetStarts(), field+".characteristics.starts")
	case *pb.Question_Totals:
		c.times(x.Totals.GetTimesS(), field+".totals.times_s")
		c.items += len(x.Totals.GetTimesS()) * (1 + len(s.GetSegments()))
	case *pb.Question_Cycles:
		c.cycles(x.Cycles, s, field+".cycles")
	default:
		c.bad.required(field, "one thing to ask, such as queues")
	}
}

func (c *questionChecker) grid(g *pb.GridQuestion, field string) {
	c.some(len(g.GetPlacesM()), field+".places_m")
	c.some(len(g.GetTimesS()), field+".times_s")
	c.places(g.GetPlacesM(), field+".places_m")
	c.times(g.GetTimesS(), field+".times_s")
	for i, quantity := range g.GetQuantities() {
		if quantity < pb.GridQuantity_GRID_QUANTITY_DENSITY || quantity > pb.GridQuantity_GRID_QUANTITY_COUNT {
			c.bad.add(fmt.Sprintf("%s.quantities[%d]", field, i), pb.FieldReason_FIELD_REASON_UNKNOWN, quantity.String(),
				"density, flow, speed or count")
		}
	}
	c.items += len(g.GetPlacesM()) * len(g.GetTimesS())
}

func (c *questionChecker) fronts(f *pb.FrontsQuestion, field string) {
	c.tolerance(f.PathToleranceM, field)
	for i, k := range f.GetKinds() {
		if k < pb.FrontKind_FRONT_KIND_SHOCK || k > pb.FrontKind_FRONT_KIND_EDGE {
			c.bad.add(fmt.Sprintf("%s.kinds[%d]", field, i), pb.FieldReason_FIELD_REASON_UNKNOWN, k.String(),
				"a shock, a contact or an edge")
		}
	}
}

func (c *questionChecker) queues(q *pb.QueuesQuestion, s *pb.Scenario, field string) {
	c.tolerance(q.PathToleranceM, field)
	c.times(q.GetTimesS(), field+".times_s")
	c.places(q.GetPlacesM(), field+".places_m")
	nodes := len(q.GetNodes())
	if nodes == 0 {
		nodes = len(s.GetSegments()) + len(s.GetBottlenecks()) + len(s.GetSignals()) + 1
	}
	c.items += nodes * (1 + len(q.GetTimesS()) + len(q.GetPlacesM()))
}

func (c *questionChecker) cycles(q *pb.CyclesQuestion, s *pb.Scenario, field string) {
	names := make([]string, len(s.GetSignals()))
	cycles := map[string]int{}
	for i, g := range s.GetSignals() {
		names[i] = g.GetName()
		cycles[g.GetName()] = c.cyclesOf(g)
	}
	asked := q.GetSignals()
	if len(asked) == 0 {
		asked = names
	}
	for i, name := range asked {
		count, known := cycles[name]
		if !known {
			c.bad.add(fmt.Sprintf("%s.signals[%d]", field, i), pb.FieldReason_FIELD_REASON_UNKNOWN, printText(name),
				"a signal of the scenario: "+listed(names))
		}
		c.items += count
	}
}

// cyclesOf is about how many cycles a signal has within the horizon; 0 where that cannot be told.
func (c *questionChecker) cyclesOf(g *pb.Signal) int {
	if p := g.GetCycle(); p != nil {
		cycles := c.horizon / p.GetCycleS() * float64(len(p.GetGreens()))
		if !(cycles >= 0 && cycles < math.MaxInt32) {
			return 0 // refused as a plan
		}
		return 1 + int(cycles)
	}
	return 1 + len(g.GetWindows().GetGreens())
}

func (c *questionChecker) trajectories(q *pb.TrajectoriesQuestion, field string) {
	c.tolerance(q.PathToleranceM, field)
	c.points(q.GetStarts(), field+".starts")
	c.places(q.GetPassingPlacesM(), field+".passing_places_m")
	c.items += len(q.GetStarts()) * len(q.GetPassingPlacesM())
}

func (c *questionChecker) travelTimes(q *pb.TravelTimesQuestion, field string) {
	from, to := c.entry, c.exit
	if q.FromM != nil {
		from = q.GetFromM()
		c.place(from, field+".from_m")
	}
	if q.ToM != nil {
		to = q.GetToM()
		c.place(to, field+".to_m")
	}
	if to < from {
		c.bad.add(field+".to_m", pb.FieldReason_FIELD_REASON_ORDER, printNumber(to), fmt.Sprintf("not upstream of from_m, %g", from))
	}
	c.some(len(q.GetDeparturesS()), field+".departures_s")
	c.times(q.GetDeparturesS(), field+".departures_s")
	c.items += len(q.GetDeparturesS())
}

func (c *questionChecker) text(s, field string) {
	if len(s) > longestFreeText {
		c.bad.add(field, pb.FieldReason_FIELD_REASON_LIMIT, fmt.Sprintf("%d bytes long", len(s)),
			fmt.Sprintf("at most %d bytes", longestFreeText))
	}
}

// some refuses a list without entries.
func (c *questionChecker) some(count int, field string) {
	if count == 0 {
		c.bad.required(field, "at least one entry")
	}
}

func (c *questionChecker) points(list []*pb.PlaceTime, field string) {
	c.some(len(list), field)
	c.items += len(list)
	for i, p := range list {
		if !c.inCorridor(p.GetPlaceM()) {
			c.place(p.GetPlaceM(), fmt.Sprintf("%s[%d].place_m", field, i))
		}
		if !c.inTime(p.GetTimeS()) {
			c.time(p.GetTimeS(), fmt.Sprintf("%s[%d].time_s", field, i))
		}
	}
}

func (c *questionChecker) places(list []float64, field string) {
	for i, x := range list {
		if !c.inCorridor(x) {
			c.place(x, fmt.Sprintf("%s[%d]", field, i))
		}
	}
}

func (c *questionChecker) times(list []float64, field string) {
	for i, t := range list {
		if !c.inTime(t) {
			c.time(t, fmt.Sprintf("%s[%d]", field, i))
		}
	}
}

func (c *questionChecker) inCorridor(x float64) bool { return x >= c.entry && x <= c.exit }

func (c *questionChecker) inTime(t float64) bool { return t >= 0 && t <= c.horizon }

func (c *questionChecker) place(x float64, field string) {
	if !c.inCorridor(x) {
		c.bad.add(field, pb.FieldReason_FIELD_REASON_RANGE, printNumber(x),
			fmt.Sprintf("from %g m to %g m, the ends of the corridor", c.entry, c.exit))
	}
}

func (c *questionChecker) time(t float64, field string) {
	if !c.inTime(t) {
		c.bad.add(field, pb.FieldReason_FIELD_REASON_RANGE, printNumber(t), fmt.Sprintf("from 0 s to the horizon, %g s", c.horizon))
	}
}

func (c *questionChecker) tolerance(given *float64, field string) {
	if given != nil && !(*given >= leastTolerance) {
		c.bad.add(field+".path_tolerance_m", pb.FieldReason_FIELD_REASON_RANGE, printNumber(*given),
			fmt.Sprintf("at least %g m", leastTolerance))
	}
}

// tolerance is the path tolerance of a question that was accepted.
func tolerance(given *float64) float64 {
	if given == nil {
		return defaultTolerance
	}
	return *given
}
