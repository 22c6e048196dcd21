package solver_test

import (
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"regexp"
	"strings"
	"testing"
)

// publishedCase says which tests cover a published case, and what of it is still out of reach.
type publishedCase struct {
	id      string
	tests   []string
	pending string // why the case, or a part of it, has no test yet; empty when all of it is covered
}

// publishedCases lists every published case, in order.
var publishedCases = []publishedCase{
	{"P01", []string{"TestP01ShockBetweenTwoMeasuredStates"}, ""},
	{"P02", []string{"TestP02PileUpUnderTheLinearLaw"}, ""},
	{"P03", []string{"TestP03TailOfThePlatoonBehindADumpTruck"}, "the truck itself: slow vehicles are not a node yet"},
	{"P04", []string{"TestP04StationaryShockAndTheReversedFan"}, ""},
	{"P05", []string{"TestP05StoppingWaveAtARedLight"}, ""},
	{"P06", []string{"TestP06FullClosure"}, ""},
	{"P07", []string{"TestP07TailOfThePlatoonBehindATruck", "TestP07ClearanceOfThePlatoonBehindATruck"}, "the truck itself: slow vehicles are not a node yet"},
	{"P08", []string{"TestP08ClearanceAfterAMovingBottleneck"}, "the truck itself and passing it: slow vehicles are not a node yet"},
	{"P09", []string{"TestP09OneRedOnAnApproach"}, ""},
	{"P10", []string{"TestP10TriangularSignalCycle"}, ""},
	{"P11", []string{"TestP11DeterministicSignalQueue", "TestP11DeterministicSignalQueueOnTheRoad"}, ""},
	{"P12", []string{"TestP12SignalWithADownstreamRestriction"}, ""},
	{"P13", []string{"TestP13InverseSignalProblem"}, ""},
	{"P14", []string{"TestP14OversaturatedSignal", "TestP14OversaturatedSignalOnTheRoad"}, ""},
	{"P15", []string{"TestP15StartUpWaveFromHandbookValues"}, ""},
	{"P16", []string{"TestP16GreenLightBeforeAFullQueue"}, ""},
	{"P17", []string{"TestP17CarInsideTheFan"}, ""},
	{"P18", []string{"TestP18CarInsideTheFanForTheLinearLaw"}, "n > 1: power-law relations are smooth families, not supported yet"},
	{"P19", []string{"TestP19QueueTailThroughRedAndGreen", "TestP19StopLineDelay"}, ""},
	{"P20", []string{"TestP20ArrivalsAtHalfJamDensity"}, ""},
	{"P21", []string{"TestP21FiniteBlockOfStoppedCars"}, ""},
	{"P22", []string{"TestP22RampThatFocuses"}, ""},
	{"P23", []string{"TestP23LinearRamp"}, ""},
	{"P24", []string{"TestP24TwoShocksMerge"}, ""},
	{"P25", []string{"TestP25WhenMustTheAccidentBeCleared"}, ""},
	{"P26", []string{"TestP26FullClosureOrPartialClosure"}, ""},
	{"P27", []string{"TestP27RubberneckingInStages"}, ""},
	{"P28", []string{"TestP28ClosureThenOneLaneThenTwo"}, ""},
	{"P29", []string{"TestP29Resurfacing"}, ""},
	{"P30", []string{"TestP30TwoDemandLevelsOneCapacity"}, ""},
	{"P31", []string{"TestP31GateOpensWhenThirtyAreWaiting"}, ""},
	{"P32", []string{"TestP32ArrivalAndServiceBothChange"}, ""},
	{"P33", []string{"TestP33ArterialCollision"}, ""},
	{"P34", []string{"TestP34HandbookIncidentOneLaneOfThreeBlocked"}, ""},
	{"P35", []string{"TestP35IncidentWithFullWavePattern"}, ""},
	{"P36", []string{"TestP36RuralWorkZoneWithADemandPulse"}, ""},
	{"P37", []string{"TestP37MainLineBeforeAMergeWithRampPriority"}, "the ramp itself: on-ramps are not a node yet"},
	{"P38", []string{"TestP38LevelOfServiceLimits"}, ""},
	{"P39", nil, "handbook speed-flow curves are smooth families, not supported yet"},
	{"P40", []string{"TestP40RemainingCapacityInIncidentZones"}, ""},
	{"P41", []string{"TestP41WorkZoneCapacities"}, ""},
	{"P42", []string{"TestP42QueueGrowthWithAndWithoutCapacityDrop"}, "a drop that follows from the queue itself: queue discharge flow is not supported yet"},
	{"P43", []string{"TestP43JamDensityFromBackwardWaveSpeed"}, ""},
	{"P44", nil, "a relation fitted to measured speeds and densities: no calibration yet"},
	{"P45", nil, "a relation fitted to measured speeds and densities: no calibration yet"},
	{"P46", nil, "a relation fitted to measured speeds and densities: no calibration yet; its table is from memory"},
	{"P47", []string{"TestP47DensityFromFlow"}, ""},
	{"P48", []string{"TestP48CapacityOfTheLinearLaw"}, ""},
	{"P49", []string{"TestP49CountingInASpaceTimeBox"}, ""},
}

const publishedCaseCount = 49

func TestEveryPublishedCaseIsCoveredOrPending(t *testing.T) {
	if len(publishedCases) != publishedCaseCount {
		t.Errorf("%d cases are listed, want %d", len(publishedCases), publishedCaseCount)
	}
	exists := testsOfThisPackage(t)
	listed := map[string]bool{}
	for i, c := range publishedCases {
		if want := fmt.Sprintf("P%02d", i+1); c.id != want {
			t.Errorf("case %d is %s, want %s", i+1, c.id, want)
		}
		if len(c.tests) == 0 && c.pending == "" {
			t.Errorf("%s has neither a test nor a reason why not", c.id)
		}
		for _, name := range c.tests {
			listed[name] = true
			if !exists[name] || !strings.HasPrefix(name, "Test"+c.id) {
				t.Errorf("%s names %s, which is not a test of it", c.id, name)
			}
		}
	}
	numbered := regexp.MustCompile(`^TestP\d\d`)
	for name := range exists {
		if numbered.MatchString(name) && !listed[name] {
			t.Errorf("%s is not in the list", name)
		}
	}
}

// testsOfThisPackage are the names of the tests in this directory.
func testsOfThisPackage(t *testing.T) map[string]bool {
	t.Helper()
	entries := must(os.ReadDir("."))(t)
	names := map[string]bool{}
	for _, e := range entries {
		if !strings.HasSuffix(e.Name(), "_test.go") {
			continue
		}
		file := must(parser.ParseFile(token.NewFileSet(), e.Name(), nil, parser.SkipObjectResolution))(t)
		for _, d := range file.Decls {
			if f, ok := d.(*ast.FuncDecl); ok && f.Recv == nil && strings.HasPrefix(f.Name.Name, "Test") {
				names[f.Name.Name] = true
			}
		}
	}
	return names
}
