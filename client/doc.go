// Package client calls a roadswell server from Go.
//
// [Dial] makes a [Client], which is safe for concurrent use and meant to be kept; [Client.Solve] sends one scenario
// with questions and returns the answers, in the contract's own messages (package roadswellv1) and units. What
// goes wrong comes back as an *[Error] that carries the status code, the stable reason, and for a request that
// cannot be accepted one *[FieldError] a field; errors.As reaches both.
//
// Forecasts are advisory: the response's advisory text belongs wherever the forecast is shown, and local codes and
// the judgement of licensed engineers take precedence.
package client
