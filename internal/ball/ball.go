// Package ball computes with real and complex balls: a midpoint and a radius
// that is guaranteed to cover the true value.
package ball
