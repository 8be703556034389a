package main

import (
	"fmt"
	"math"
	"math/big"

	"example.org/closedform/expr"
)

// window is the range of time that is shown, and why.
type window struct {
	from, to *big.Rat
	why      string
	fastest  float64 // the shortest time constant, for the sampling; 0 if none
}

// at returns the time at a share of the window.
func (w window) at(share *big.Rat) *big.Rat {
	x := new(big.Rat).Sub(w.to, w.from)
	return x.Add(x.Mul(x, share), w.from)
}

// chooseWindow chooses the range of time where the caller does not. It shows the
// slowest mode die out, three periods of the slowest oscillation, and of growing
// modes three time constants; but not more than forty periods of an oscillation
// that is still there at the end.
func chooseWindow(modes []modeRow, inputs []float64, origin, from, to *big.Rat) (window, error) {
	w := window{from: origin, to: to, why: "as asked for"}
	if from != nil {
		w.from = from
	}
	length, why := 0.0, ""
	longer := func(x float64, because string) {
		if x > length && !math.IsInf(x, 0) {
			length, why = x, because
		}
	}
	for _, m := range modes {
		tau := math.Abs(1 / m.sigma)
		if m.sigma < 0 {
			longer(4*tau, "four times the slowest time constant, "+short(tau))
		}
		if m.sigma != 0 && (w.fastest == 0 || tau < w.fastest) {
			w.fastest = tau
		}
	}
	for _, m := range modes {
		if m.omega > 0 && m.sigma >= 0 {
			longer(6*math.Pi/m.omega, "three periods of the slowest oscillation, "+m.period())
		}
	}
	for _, omega := range inputs {
		longer(6*math.Pi/omega, "three periods of the input, "+short(2*math.Pi/omega))
	}
	for _, m := range modes {
		if end := 3 / m.sigma; m.sigma > 0 && (length == 0 || end < length) {
			length, why = end, "three time constants of the fastest growth, "+short(1/m.sigma)
		}
	}
	for _, m := range modes {
		cycles := 80 * math.Pi / m.omega
		lasting := m.sigma >= 0 || -3/m.sigma > cycles
		if m.omega > 0 && lasting && cycles < length {
			length, why = cycles, "forty periods of the fastest lasting oscillation, "+m.period()
		}
	}
	if length == 0 {
		length, why = 10, "no mode sets a scale of time"
	}
	if to == nil {
		w.to = new(big.Rat).Add(w.from, roundUp(length))
		w.why = why
	}
	if w.to.Cmp(w.from) <= 0 {
		return w, fmt.Errorf("the range of time from %s to %s is empty", timeText(w.from), timeText(w.to))
	}
	return w, nil
}

// roundUp returns the least x' >= x, but for a hair, of the numbers 1, 1.2, 1.5,
// 2, 2.5, ... times a power of ten.
func roundUp(x float64) *big.Rat {
	exp := int64(math.Floor(math.Log10(x)))
	power := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(max(exp, -exp)), nil))
	if exp < 0 {
		power.Inv(power)
	}
	for _, tenths := range []int64{10, 12, 15, 20, 25, 30, 40, 50, 60, 80, 100} {
		r := new(big.Rat).Mul(power, big.NewRat(tenths, 10))
		if f, _ := r.Float64(); f >= x*(1-1e-6) {
			return r
		}
	}
	return new(big.Rat).Mul(power, big.NewRat(10, 1))
}

// inputFrequencies returns the frequencies of the sines and cosines in trees.
func inputFrequencies(trees []expr.Node, variable string) []float64 {
	var out []float64
	var visit func(n expr.Node) bool
	visit = func(n expr.Node) bool {
		if c, ok := n.(expr.Call); ok && (c.Func == "sin" || c.Func == "cos") {
			if omega := math.Abs(constantFloat(c.Arg, variable)); omega > 0 && !math.IsInf(omega, 0) {
				out = append(out, omega)
			}
		}
		expr.Children(n, visit)
		return true
	}
	for _, n := range trees {
		visit(n)
	}
	return out
}

// constantFloat returns the rate w of an angle w t or w (t - t0), with t taken
// for 1 and t0 for 0: the angles of responses have no other form.
func constantFloat(n expr.Node, variable string) float64 {
	switch v := n.(type) {
	case expr.Number:
		return v.Val.Float64()
	case expr.Symbol:
		if v.Name == variable {
			return 1
		}
	case expr.Sum: // t - t0
		return 1
	case expr.Neg:
		return -constantFloat(v.X, variable)
	case expr.Product:
		x := 1.0
		for _, f := range v.Factors {
			x *= constantFloat(f, variable)
		}
		return x
	case expr.Quotient:
		return constantFloat(v.Num, variable) / constantFloat(v.Den, variable)
	case expr.Call:
		if v.Func == "sqrt" {
			return math.Sqrt(constantFloat(v.Arg, variable))
		}
	}
	return math.NaN()
}
