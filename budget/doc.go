// Package budget computes where every watt of a DC-DC converter goes.
//
// The door: a Design is checked by Validate, made ready once by Prepare, and
// asked at any number of operating points by Model.At, which fills a Budget of
// the caller's. Findings and words are made apart from the figures. The package
// does no input or output, reads no clock and starts no goroutine; its answers
// depend on nothing but the design and the point.
//
// Units are SI base units and °C throughout; voltages are magnitudes.
package budget
