package intpoly

import "math/big"

// rng is SplitMix64.
type rng uint64

func (s *rng) next() uint64 {
	*s += 0x9E3779B97F4A7C15
	z := uint64(*s)
	z = (z ^ z>>30) * 0xBF58476D1CE4E5B9
	z = (z ^ z>>27) * 0x94D049BB133111EB
	return z ^ z>>31
}

// integer returns an integer of at most the given bits, of random sign.
func (s *rng) integer(bits int) *big.Int {
	x := new(big.Int)
	for x.BitLen() < bits {
		x.Lsh(x, 64).Or(x, new(big.Int).SetUint64(s.next()))
	}
	x.Rsh(x, uint(x.BitLen()-bits))
	x.Sub(x, new(big.Int).Lsh(big.NewInt(int64(s.next()%2)), uint(bits)))
	return x
}

// ints returns the polynomial with word coefficients, lowest first.
func ints(c ...int64) Poly {
	p := make(Poly, len(c))
	for i, x := range c {
		p[i] = big.NewInt(x)
	}
	return trim(p)
}

// randomPoly has exactly the given degree and a non-zero constant term.
func randomPoly(seed uint64, degree, bits int) Poly {
	s := rng(seed)
	p := make(Poly, degree+1)
	for i := range p {
		p[i] = s.integer(bits)
	}
	for _, i := range []int{0, degree} {
		if p[i].Sign() == 0 {
			p[i] = big.NewInt(1)
		}
	}
	return p
}

func randomPolys(seed uint64, count, degree, bits int) []Poly {
	out := make([]Poly, count)
	for i := range out {
		out[i] = randomPoly(seed*1000+uint64(i), degree, bits)
	}
	return out
}

func product(ps []Poly) Poly {
	r := ints(1)
	for _, p := range ps {
		r = Mul(r, p)
	}
	return r
}

// translate returns p(s + a).
func translate(p Poly, a int64) Poly {
	var r Poly
	for i := len(p) - 1; i >= 0; i-- {
		r = Add(Mul(r, ints(a, 1)), New(p[i]))
	}
	return r
}

// swinnertonDyer returns the product of s - (+-sqrt q_1 +- sqrt q_2 ...),
// irreducible for different primes q, yet a product of factors of degree at
// most two modulo every prime.
func swinnertonDyer(primes ...int64) Poly {
	p := ints(0, 1)
	for _, q := range primes {
		// p(s + sqrt q) = a + b sqrt q; the next one is a^2 - q b^2.
		var a, b Poly
		for i := len(p) - 1; i >= 0; i-- {
			a, b = Add(Add(Mul(a, ints(0, 1)), b.Scale(big.NewInt(q))), New(p[i])), Add(Mul(b, ints(0, 1)), a)
		}
		p = Sub(Mul(a, a), Mul(b, b).Scale(big.NewInt(q)))
	}
	return p
}

// wilkinson returns (s-1)(s-2)...(s-n).
func wilkinson(n int64) Poly {
	p := ints(1)
	for i := int64(1); i <= n; i++ {
		p = Mul(p, ints(-i, 1))
	}
	return p
}

// powerMinus returns s^n - c.
func powerMinus(n int, c int64) Poly {
	p := make([]int64, n+1)
	p[0], p[n] = -c, 1
	return ints(p...)
}

// cyclotomic returns the n-th cyclotomic polynomial, from s^n - 1 by division
// by those of the proper divisors of n.
func cyclotomic(n int) Poly {
	p := powerMinus(n, 1)
	for d := 1; d < n; d++ {
		if n%d == 0 {
			p, _ = DivExact(p, cyclotomic(d))
		}
	}
	return p
}

// tridiagonal returns det(s I - T) for T with diagonal 2 and neighbours -1.
func tridiagonal(n int) Poly {
	a, b := ints(1), ints(-2, 1)
	for range n - 1 {
		a, b = b, Sub(Mul(ints(-2, 1), b), a)
	}
	return b
}

// characteristic returns the characteristic polynomial of an n by n Hessenberg
// matrix with entries in -9..9 and 1..9 below the diagonal.
func characteristic(seed uint64, n int) Poly {
	s := rng(seed)
	ps := []Poly{ints(1)}
	var below []int64
	for k := range n {
		// p_(k+1) = (s - h_kk) p_k - sum over i < k of
		// h_ik (product of the subdiagonal from i to k) p_i.
		p := Mul(ints(9-int64(s.next()%19), 1), ps[k])
		t := big.NewInt(1)
		for i := k - 1; i >= 0; i-- {
			t = new(big.Int).Mul(t, big.NewInt(below[i]))
			p = Sub(p, ps[i].Scale(new(big.Int).Mul(t, big.NewInt(int64(s.next()%19)-9))))
		}
		ps = append(ps, p)
		below = append(below, int64(s.next()%9)+1)
	}
	return ps[n]
}
