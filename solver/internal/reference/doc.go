// Package reference holds slow, obvious solutions of the kinematic-wave (LWR) model that the tests of package
// solver compare it with. Nothing but tests uses it. None of it shares algebra with the solver:
//
//   - [Godunov] is a finite-volume scheme (cells, time steps) for a whole solver.Scenario. It converges to the
//     entropy solution at first order (in what sense: see [Result]).
//   - [LaxHopf] is the least-count formula, minimised by brute force, on a homogeneous road without nodes.
//   - [SolveFluidQueue] is the deterministic fluid queue at a point, in closed form.
//   - [RedGreen], [HalfJamTail] and [BlockRear] are the square-root laws of a queue's tail under the linear
//     speed-density relation.
//   - [Law] is a flow-density law written down anew from the user's numbers, with its Legendre transform.
//
// Sources: Godunov 1959, Mat. Sbornik 47, 271-306, in the demand-supply form of Daganzo 1995, Transp. Res. B
// 29, 79-93, and Lebacque 1996, Proc. 13th ISTTT, 647-677; the least-count formula: Lax 1957, Comm. Pure
// Appl. Math. 10, 537-566, and Hopf 1965, J. Math. Mech. 14, 951-973, for traffic Daganzo 2005, Transp. Res.
// B 39, 187-196; the tail laws: Lighthill & Whitham 1955, Proc. R. Soc. A 229, 317-345, part II.
//
// Units are SI: m, s, veh/m and veh/s of all lanes.
package reference
