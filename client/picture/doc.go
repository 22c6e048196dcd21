// Package picture draws the time-space diagram of a solved corridor.
//
// A time-space diagram has time to the right and place upward, so that whatever
// moves with the traffic rises and whatever moves against it falls. On it
// the package lays, from the bottom layer to the top one:
//
//   - the density as a colour field, light where the road is empty and dark where it
//     is jammed, with a colour bar in vehicles per kilometre;
//   - contacts and fan edges as thin pale lines, vehicle trajectories as thin dark ones;
//   - node places, reds at stop lines, capacity restrictions and closures;
//   - shocks as solid dark lines and queue tails as a dashed line of their own colour.
//
// Every kind of line differs in weight or dash as well as in colour, and the colour field
// darkens evenly (see [Ramp]), so the picture survives a grey printer and a
// reader who cannot tell colours apart.
//
// # Units and extent
//
// A [Diagram] speaks seconds, metres and vehicles per kilometre (all lanes together). Time
// runs from 0 to Horizon, place from Entry to Exit with the direction of travel. Lines
// that leave this window are cut at its border; nothing outside it is drawn or named in the
// legend.
//
// # What is guaranteed
//
// The same Diagram gives the same bytes, from [Diagram.WriteSVG] and from [Diagram.WritePNG],
// and both show the same page. A Diagram is only read, so several
// goroutines may draw it at once. The field is never interpolated: each pixel shows the
// nearest sample, so that a front is not smeared by the drawing. Input that
// cannot be drawn truthfully (a value that is not a number, lists whose lengths disagree, a
// period that ends before it starts) is refused with a [FieldError] for each fault.
//
// # Where to read
//
// diagram.go says what can be drawn, check.go what is refused, page.go how the sheet is
// laid out, write.go how it becomes a file; ramp.go, field.go, strokes.go, bars.go, names.go,
// ticks.go and legend.go each draw one part.
//
// Solving, units of other kinds, interaction and animation are out of scope.
package picture
