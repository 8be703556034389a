// Package crosscheck compares the exact results of the library with the floating
// point ones of gonum, which shares no line with it: eigenvalues, and the
// exponential of a matrix for responses. It also compares the time that values take
// with that of the exponential of a matrix and of an integrator.
package crosscheck

import "math"

// integrate solves y' = f(y), y(0) = y0 up to the last of the times, which rise from
// 0, with steps that keep the estimated error of each within rtol |y| + rtol, and
// calls visit with y at each time. It is the method of Dormand and Prince of the
// orders 5 and 4 with its interpolation of the order 4 (J. R. Dormand, P. J. Prince,
// A family of embedded Runge-Kutta formulae, J. Comp. Appl. Math. 6, 1980; E. Hairer,
// S. P. Norsett, G. Wanner, Solving Ordinary Differential Equations I, section II.6,
// both from memory).
func integrate(f func(dy, y []float64), y0, times []float64, rtol float64, visit func(k int, y []float64)) {
	n := len(y0)
	y, next, at, out := append([]float64(nil), y0...), make([]float64, n), make([]float64, n), make([]float64, n)
	var k [7][]float64
	for i := range k {
		k[i] = make([]float64, n)
	}
	f(k[0], y)
	t, h, done := 0.0, 1e-3, 0
	for done < len(times) {
		for s := 1; s < 7; s++ {
			row := stages[s-1]
			for i := range at {
				sum := 0.0
				for j, a := range row {
					sum += a * k[j][i]
				}
				at[i] = y[i] + h*sum
			}
			f(k[s], at)
		}
		copy(next, at) // the last stage is the step
		worst := 0.0
		for i := range next {
			e := 0.0
			for j, d := range embedded {
				e += d * k[j][i]
			}
			worst = max(worst, math.Abs(h*e)/(rtol+rtol*max(math.Abs(y[i]), math.Abs(next[i]))))
		}
		if worst <= 1 {
			for done < len(times) && times[done] <= t+h {
				theta := (times[done] - t) / h
				for i := range out {
					bend := 0.0
					for j, d := range dense {
						bend += d * k[j][i]
					}
					step := next[i] - y[i]
					c3 := h*k[0][i] - step
					c4 := step - h*k[6][i] - c3
					out[i] = y[i] + theta*(step+(1-theta)*(c3+theta*(c4+(1-theta)*h*bend)))
				}
				visit(done, out)
				done++
			}
			t += h
			y, next = next, y
			k[0], k[6] = k[6], k[0]
		}
		h *= min(5, max(0.2, 0.9*math.Pow(worst, -0.2)))
	}
}

// The coefficients of the stages 2 to 7, of the difference of the two orders, and of
// the interpolation.
var (
	stages = [6][]float64{
		{1.0 / 5},
		{3.0 / 40, 9.0 / 40},
		{44.0 / 45, -56.0 / 15, 32.0 / 9},
		{19372.0 / 6561, -25360.0 / 2187, 64448.0 / 6561, -212.0 / 729},
		{9017.0 / 3168, -355.0 / 33, 46732.0 / 5247, 49.0 / 176, -5103.0 / 18656},
		{35.0 / 384, 0, 500.0 / 1113, 125.0 / 192, -2187.0 / 6784, 11.0 / 84},
	}
	embedded = []float64{71.0 / 57600, 0, -71.0 / 16695, 71.0 / 1920, -17253.0 / 339200, 22.0 / 525, -1.0 / 40}
	dense    = []float64{
		-12715105075.0 / 11282082432, 0, 87487479700.0 / 32700410799, -10690763975.0 / 1880347072,
		701980252875.0 / 199316789632, -1453857185.0 / 822651844, 69997945.0 / 29380423,
	}
)
