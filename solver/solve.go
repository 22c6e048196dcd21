package solver

import "context"

// Budget bounds what a solve may cost. The zero value stands for the defaults.
type Budget struct {
	// Interactions is the greatest number of wave interactions; 0 means 10 million.
	Interactions int64
	// Memory is the greatest size of the solution [bytes]; 0 means 1 GiB.
	Memory int64
}

const (
	defaultInteractions = 10_000_000
	defaultMemory       = 1 << 30
)

// Stats says what a solve cost.
type Stats struct {
	// Interactions is the number of events processed: fronts that met, and looks at a node.
	Interactions int64
	// Fronts and Regions in the solution.
	Fronts, Regions int
	// Bytes that the solution holds.
	Bytes int64
}

// Solve returns the exact solution of the scenario from time 0 to its horizon.
//
// Errors: *[InvalidError] with all violations, before anything is computed; *[LimitError] when the budget is
// used up; *[ClosedFormError] when the exact solution leaves the family held in closed form; ctx.Err() when
// the context ends first.
func Solve(ctx context.Context, s Scenario, b Budget) (*Solution, error) {
	l, err := s.prepare()
	if err != nil {
		return nil, err
	}
	if b.Interactions <= 0 {
		b.Interactions = defaultInteractions
	}
	if b.Memory <= 0 {
		b.Memory = defaultMemory
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	k := newKernel(&s, l)
	if k.refused != nil {
		return nil, k.refused
	}
	if err := k.withinMemory(b); err != nil {
		return nil, err
	}
	if err := k.run(ctx, b); err != nil {
		return nil, err
	}
	if err := k.withinMemory(b); err != nil {
		return nil, err
	}
	return newSolution(&s, l, k), nil
}
