// Package service is the gRPC server of roadswell: it puts the solver behind the contract roadswell.v1.
//
// A call goes through four steps, each in its own files:
//
//  1. convert - contract to solver input, units included (units.go, scenario.go, relation.go, schedule.go);
//  2. check - everything that is wrong with a request, found before anything is computed and reported at once,
//     in the contract's own field paths and units (walk.go, limits.go, questions.go, paths.go, violation.go);
//  3. solve - [solver.Solve], under the caller's deadline and the server's budget (corridor.go);
//  4. answer - solver answers to contract answers (answer*.go); errors to status codes (errors.go).
//
// Around it stand interceptors that recover from panics, log and count (recovery.go, logging.go, metrics.go),
// put together in server.go. Calls share nothing but counters: the server may be called from any number of
// connections, and equal requests get equal answers.
//
// Forecasts are advisory: every response carries [Advisory], which defers to local codes and licensed engineers.
package service

// Advisory is sent with every response, to be shown wherever the forecast is.
const Advisory = "Advisory forecast of a kinematic-wave traffic model, not an observation of the road. " +
	"Local codes and standards and the judgement of licensed engineers take precedence."
