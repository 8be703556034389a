package expr

// The functions that generated code with symbols calls. NAME stands for the name
// of the generated function.

const goDividedHelper = `
// NAMEDivided returns the divided differences of exp(x t) at the first node, at
// the first two, ..., at all; nodes may coincide. They are the first row of the
// exponential of t times the bidiagonal matrix of the nodes with ones above
// (A. McCurdy, K. C. Ng, B. N. Parlett, Accurate computation of divided
// differences of the exponential function, Math. Comp. 43, 1984): a series of
// positive terms for a fraction of t, then squaring, with the two diagonals
// that are known put in. No difference of nearly equal numbers is taken but of
// the nodes themselves.
func NAMEDivided(t float64, nodes ...float64) []float64 {
	n := len(nodes)
	sign := 1.0
	if t < 0 {
		t, sign = -t, -1
	}
	x := make([]float64, n)
	low, high := math.Inf(1), math.Inf(-1)
	for i, node := range nodes {
		x[i] = sign * node
		low, high = math.Min(low, x[i]), math.Max(high, x[i])
	}
	// f[i][j] is the difference at x[i], ..., x[j] over h^(j-i) exp(high h).
	h, steps := t, 0
	if n > 2 {
		for (high-low)*h > 1 && steps < 2000 {
			h /= 2
			steps++
		}
	}
	f := make([][]float64, n)
	g := make([][]float64, n)
	for i := range f {
		f[i], g[i] = make([]float64, n), make([]float64, n)
	}
	if n > 2 {
		// The rows of exp(a) = I + a (I + a/2 (I + a/3 (...))).
		scale := math.Exp((low - high) * h)
		for i := range f {
			r := f[i]
			for k := n + 18; k >= 1; k-- {
				for j := n - 1; j > i; j-- {
					r[j] = (r[j]*((x[j]-low)*h) + r[j-1]) / float64(k)
				}
				r[i] = 1 + r[i]*((x[i]-low)*h)/float64(k)
			}
			for j := i; j < n; j++ {
				r[j] *= scale
			}
		}
	}
	for step := 0; ; step++ {
		for i := range f {
			f[i][i] = math.Exp((x[i] - high) * h)
			if i+1 < n {
				d := math.Abs(x[i]-x[i+1]) * h
				q := math.Exp((math.Max(x[i], x[i+1]) - high) * h)
				if d > 0 {
					q *= -math.Expm1(-d) / d
				}
				f[i][i+1] = q
			}
		}
		if step == steps {
			break
		}
		for i := range f {
			for j := i; j < n; j++ {
				sum := 0.0
				for k := i; k <= j; k++ {
					sum += f[i][k] * f[k][j]
				}
				g[i][j] = math.Ldexp(sum, i-j)
			}
		}
		f, g = g, f
		h *= 2
	}
	out := f[0]
	scale := math.Exp(high * t)
	for j := range out {
		out[j] *= scale
		scale *= sign * t
	}
	out[0] = math.Exp(x[0] * t)
	return out
}
`

const goPairHelper = `
// NAMERates returns h - sqrt(d) and h + sqrt(d), d >= 0, the lesser one first.
// product is h^2 - d, from which the one nearer to 0 follows without
// cancellation.
func NAMERates(h, d, product float64) (low, high float64) {
	low, high = h-math.Sqrt(d), h+math.Sqrt(d)
	if h > 0 {
		low = product / high
	} else if low != 0 {
		high = product / low
	}
	return low, high
}

// NAMEPair returns the functions with the images 1/p, s/p and (s - h)/p for p =
// (s - h)^2 - d, entire functions of d: e^(ht) sinh(sqrt(d) t)/sqrt(d), its
// derivative, and e^(ht) cosh(sqrt(d) t), with sin and cos where d < 0. product
// is h^2 - d.
func NAMEPair(t, h, d, product float64) [3]float64 {
	if d < 0 {
		r := math.Sqrt(-d)
		sin, cos := math.Sincos(r * t)
		e := math.Exp(h * t)
		s, c := e*sin/r, e*cos
		return [3]float64{s, c + h*s, c}
	}
	low, high := NAMERates(h, d, product)
	if t < 0 {
		low, high = high, low
	}
	e, x, q := math.Exp(high*t), 2*math.Sqrt(d)*math.Abs(t), 1.0
	if x > 0 {
		q = -math.Expm1(-x) / x
	}
	s := e * q * t
	return [3]float64{s, math.Exp(low*t) + high*s, e * (1 + math.Exp(-x)) / 2}
}
`

// goRootsHelper is called by the cascade where a factor has a degree above 2.
const goRootsHelper = `
// NAMERoots returns the roots of the monic polynomial with the coefficients c
// below the leading one, if all roots are real and of one sign, or 0. Newton's
// method descends from 0 to the greatest root, where all are negative, and
// deflation by roots of increasing size keeps their relative accuracy (J. H.
// Wilkinson, Rounding Errors in Algebraic Processes, chapter 2).
func NAMERoots(c []float64) ([]float64, bool) {
	n := len(c)
	a := append(append([]float64(nil), c...), 1)
	sign := 1.0
	for k := range a {
		if a[k] < 0 {
			sign = -1
		}
	}
	for k := range a {
		if sign < 0 && (n-k)%2 == 1 {
			a[k] = -a[k]
		}
		if !(a[k] >= 0) {
			return nil, false
		}
	}
	roots := make([]float64, n)
	for m := n; m >= 1; m-- {
		x, found := 0.0, false
		for step := 0; step < 1000 && !found; step++ {
			p, slope, size := 0.0, 0.0, 0.0
			for k := m; k >= 0; k-- {
				slope = slope*x + p
				p = p*x + a[k]
				size = size*-x + math.Abs(a[k])
			}
			if found = p <= 0x1p-53*size; !found {
				if slope <= 0 {
					return nil, false
				}
				next := x - p/slope
				found = next == x
				x = next
			}
		}
		if !found {
			return nil, false
		}
		roots[m-1] = sign * x
		for k := m - 1; k >= 1; k-- {
			a[k] += x * a[k+1]
		}
		a = a[1:]
	}
	return roots, true
}
`

const goCascadeHelper = `
// NAMECascade returns the impulse responses of a cascade of factors 1/p(s): for
// each factor the output and its derivatives below the degree n of p. A factor
// is given by h, the mean of its roots, and for n > 1 by the n coefficients of p
// below the leading one and the n-1 of p(s + h) below those.
//
// Where all rates are real, the outputs are divided differences. Otherwise the
// exponential of the block matrix comes from a Taylor series for a fraction of
// t, after a shift to the mean of the trace, and squaring, with the blocks of
// degree 1 and 2 put in as they are known. Its accuracy is normwise: relative to
// the largest entries of the matrix.
func NAMECascade(t float64, factors ...[]float64) []float64 {
	n, mean := 0, 0.0
	degree := func(p []float64) int { return max(1, len(p)/2) }
	var nodes []float64
	allReal := true
	for _, p := range factors {
		switch d := degree(p); {
		case d == 1:
			nodes = append(nodes, p[0])
		case d == 2 && p[3] <= 0:
			low, high := NAMERates(p[0], -p[3], p[1])
			nodes = append(nodes, low, high)
		ROOTS
		default:
			allReal = false
		}
		d := degree(p)
		if allReal { // those that last longest come last
			for i, j := n, n+d-1; i < j && (nodes[i] > nodes[j]) == (t > 0); i, j = i+1, j-1 {
				nodes[i], nodes[j] = nodes[j], nodes[i]
			}
		}
		n += d
		mean += float64(d) * p[0]
	}
	out := make([]float64, n)
	if allReal {
		diff := NAMEDivided(t, nodes...)
		at := 0
		for _, p := range factors {
			// s^k in Newton's basis: w[0] + w[1] (s - last node) + ...
			d := degree(p)
			w := make([]float64, d)
			w[0] = 1
			for k := range w {
				for j := 0; j <= k; j++ {
					out[at+k] += w[j] * diff[at+d-1-j]
				}
				for j := d - 1; j >= 0; j-- {
					w[j] *= nodes[at+d-1-j]
					if j > 0 {
						w[j] += w[j-1]
					}
				}
			}
			at += d
		}
		return out
	}
	mean /= float64(n)
	if t == 0 {
		out[degree(factors[0])-1] = 1
		return out
	}
	// Powers of a scale about as large as the rates make the entries alike.
	size := 1 / math.Abs(t)
	for _, p := range factors {
		d := degree(p)
		size = math.Max(size, math.Abs(p[0]-mean))
		for k := 0; k+1 < d; k++ {
			size = math.Max(size, math.Pow(math.Abs(p[k+d+1]), 1/float64(d-k)))
		}
	}
	_, scale := math.Frexp(size)
	h, steps := t, 0
	for norm := math.Ldexp(math.Abs(t), scale+1); norm > 1 && steps < 2000; norm /= 2 {
		h /= 2
		steps++
	}
	matrix := func() [][]float64 {
		m := make([][]float64, n)
		for i := range m {
			m[i] = make([]float64, n)
		}
		return m
	}
	a, f, g := matrix(), matrix(), matrix()
	multiply := func(x [][]float64) { // f becomes x f
		for i := range x {
			clear(g[i])
			for k, a := range x[i] {
				for j := 0; a != 0 && j < n; j++ {
					g[i][j] += a * f[k][j]
				}
			}
		}
		f, g = g, f
	}
	end := n // of the rows of a factor, the first factor last
	for _, p := range factors {
		d := degree(p)
		for i := end - d; i < end; i++ {
			a[i][i] = (p[0] - mean) * h
			if i+1 < n {
				a[i][i+1] = math.Ldexp(h, scale)
			}
		}
		for k := 0; k+1 < d; k++ {
			a[end-1][end-d+k] -= math.Ldexp(p[k+d+1]*h, scale*(k+1-d))
		}
		end -= d
	}
	// exp(a) = I + a (I + a/2 (I + a/3 (...)))
	for k := n + 18; k >= 0; k-- {
		for i := range f {
			for j := range f {
				f[i][j] /= float64(k + 1)
			}
		}
		multiply(a)
		for i := range f {
			f[i][i]++
		}
	}
	for i := range f {
		for j := range f {
			f[i][j] *= math.Exp(mean * h)
		}
	}
	for step := 0; ; step++ {
		end = n
		for _, p := range factors {
			switch degree(p) {
			case 1:
				f[end-1][end-1] = math.Exp(p[0] * h)
			case 2:
				e := NAMEPair(h, p[0], -p[3], p[1])
				f[end-2][end-2], f[end-1][end-1] = e[2], e[2]
				f[end-2][end-1] = math.Ldexp(e[0], scale)
				f[end-1][end-2] = -math.Ldexp(p[3]*e[0], -scale)
			}
			end -= degree(p)
		}
		if step == steps {
			break
		}
		multiply(f)
		h *= 2
	}
	at := 0
	end = n
	for _, p := range factors {
		// Powers of s = (s - h) + h from those of s - h.
		d := degree(p)
		w := make([]float64, d)
		w[0] = 1
		for k := range w {
			for j := 0; j <= k; j++ {
				out[at+k] += w[j] * math.Ldexp(f[end-d+j][n-1], scale*(end-d+j+1-n))
			}
			for j := d - 1; j >= 0; j-- {
				w[j] *= p[0]
				if j > 0 {
					w[j] += w[j-1]
				}
			}
		}
		at += d
		end -= d
	}
	return out
}
`

// goRootsCase is the case of the cascade for degrees above 2.
const goRootsCase = `case d > 2:
			roots, ok := NAMERoots(p[1 : d+1])
			nodes = append(nodes, roots...)
			allReal = allReal && ok`
