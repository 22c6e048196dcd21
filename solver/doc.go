// Package solver computes exact solutions of the kinematic-wave model of traffic on a one-way corridor.
//
// # Model
//
// Density k(x, t) [veh/m] and flow q [veh/s] obey conservation, k_t + q(k)_x = 0, with a concave relation q(k)
// on each segment (Lighthill & Whitham 1955, Proc. R. Soc. A 229, 317-345; Richards 1956, Oper. Res. 4, 42-51).
// Place x [m] grows downstream and time t [s] starts at 0. N(x, t) is the cumulative count: N_t = q, N_x = -k, and
// N = 0 at the entry at time 0. All numbers are SI, of all lanes together; speeds are in m/s.
//
// # Method
//
// Every relation is continuous and piecewise quadratic ([Relation]). On such a piece a density that is a linear
// function of place stays one, so the time-space plane falls into regions with a closed form for k and N
// (region.go). Between them run fronts (front.go): characteristics, which are straight, and shocks, which lie where
// the counts of the two sides are equal - a quadratic in place at each time, so that the path too is a closed form.
// No ordinary differential equation is integrated and there is neither a grid nor a time step. An event (kernel.go)
// is a region used up by the fronts beside it (meeting.go) or a node (node.go) whose surroundings changed; it solves
// one Riemann problem (riemann.go) and sends out new fronts. The cost grows with the number of wave interactions
// and with nothing else.
//
// # Guarantees
//
// Answers are exact to rounding: 1e-9 relative is promised and tested, against closed forms, a least-count
// (Lax-Hopf) minimisation and a finite-volume scheme. What has no closed form in this family is refused with
// an error, never approximated: [ClosedFormError] and [RuleClosedForm]. A [Solution] is immutable; the same input
// gives the same bits. Close to the apex of a fan (within some 1e-6 s and m) the density is ill-conditioned in the place
// asked for, as it is in truth; counts and fronts are not.
//
// # Conventions
//
// Congested is strictly denser than critical, or than the upper end of a capacity plateau: flow at capacity is not
// congested. Where demand and capacity are equal, demand governs and no queue forms; where capacity and downstream
// supply are equal, the node governs. A queue belongs to the node where it formed; see [Queue]. A question exactly on
// a front returns both sides. The count at a node is that of its upstream side; at the entry, the vehicles that
// entered. Delay refers to the speed at density zero; waiting before the entry is reported beside it. A state at a
// corner of the relation has the waves of the piece below: where traffic at capacity runs into a queue, its tail is a
// shock. Two places closer than a micrometre are one place.
//
// Not held yet, and refused: ramps, queue discharge below capacity, slow vehicles, relations that are not piecewise
// quadratic, rates that change linearly in time next to a curved relation, and a fan that crosses from a curved
// relation into a different one.
//
// # Reading order
//
// relation.go, diagram.go, region.go, front.go, riemann.go, meeting.go, crossing.go and overlooked.go with cubic.go
// and root.go, node.go, offer.go, send.go, plan.go, agenda.go, kernel.go, merge.go; then scenario.go, schedule.go,
// timetable.go, layout.go, build.go and initial.go for what goes in, validate.go for what may; and solution.go,
// index.go, fronts.go, queues.go (strips.go, queue_paths.go, peaks.go, cycles.go), trajectory.go (walk.go),
// polyline.go, trips.go, instantaneous.go, characteristic.go and totals.go for what can be asked.
package solver
