// Package chain3 evaluates a closed-form response.
//
//	y1' + 2*y1 - y2 = 0
//	y2' - y1 + 2*y2 - y3 = 0
//	y3' - y2 + 2*y3 = 0
//	y1(0) = 1
//	y2(0) = 0
//	y3(0) = 0
package chain3

import "math"

// ResponseState holds the values of the states at one time.
type ResponseState struct {
	Y1 float64 // y1
	Y2 float64 // y2
	Y3 float64 // y3
}

// Response returns the states at the time t:
//
//	y1 = 1/2*(exp(-2*t)*cosh(sqrt(2)*t) + exp(-2*t))
//	y2 = sqrt(2)/2*exp(-2*t)*sinh(sqrt(2)*t)
//	y3 = 1/2*(exp(-2*t)*cosh(sqrt(2)*t) - exp(-2*t))
//
// Error: for 0 <= t <= 9 every value differs from the exact one by at most
//
//	Y1  7.3e-16, or 7.3e-16 of its largest value there
//	Y2  4.8e-16, or 2.4e-15 of its largest value there
//	Y3  6.2e-16, or 7.6e-15 of its largest value there
//
// given that math.Exp is within 2 units in the last place, and math.Sin, math.Cos and
// math.Sincos within 4 units of 2^-53.
func Response(t float64) ResponseState {
	// 3.414213562373095 is 2 + sqrt(2), 0.25 is 1/4, 0.585786437626905 is 2 - sqrt(2),
	// 0.3535533905932738 is sqrt(2)/4.
	e1 := math.Exp(-2 * t)
	e2 := math.Exp(-3.414213562373095 * t)
	e3 := math.Exp(-0.585786437626905 * t)
	return ResponseState{
		Y1: 0.25*e2 + 0.25*e3 + 0.5*e1,
		Y2: -0.3535533905932738*e2 + 0.3535533905932738*e3,
		Y3: 0.25*e2 + 0.25*e3 - 0.5*e1,
	}
}

// ResponseValues returns the states at all times, in dst as far as it has room.
func ResponseValues(dst []ResponseState, times []float64) []ResponseState {
	dst = dst[:0]
	for _, t := range times {
		dst = append(dst, Response(t))
	}
	return dst
}

// ResponseRates returns the derivatives of the states at the time t.
//
// Error: for 0 <= t <= 9 every value differs from the exact one by at most
//
//	Y1  1.5e-15, or 7.3e-16 of its largest value there
//	Y2  1.1e-15, or 1.1e-15 of its largest value there
//	Y3  1.3e-15, or 1.1e-14 of its largest value there
//
// given the same of package math as for Response.
func ResponseRates(t float64) ResponseState {
	// 3.414213562373095 is 2 + sqrt(2), 0.585786437626905 is 2 - sqrt(2), 0.8535533905932737 is
	// (2 + sqrt(2))/4, 0.14644660940672624 is (2 - sqrt(2))/4, 1.2071067811865475 is (1 +
	// sqrt(2))/2, 0.20710678118654752 is (sqrt(2) - 1)/2.
	e1 := math.Exp(-2 * t)
	e2 := math.Exp(-3.414213562373095 * t)
	e3 := math.Exp(-0.585786437626905 * t)
	return ResponseState{
		Y1: -0.8535533905932737*e2 - 0.14644660940672624*e3 - e1,
		Y2: 1.2071067811865475*e2 - 0.20710678118654752*e3,
		Y3: -0.8535533905932737*e2 - 0.14644660940672624*e3 + e1,
	}
}
