package algebra

import (
	"context"
	"math/big"
)

// DivideResolvent divides a vector r(s) of polynomials by s I - a, a square:
// r = (s I - a) quo + rem with a constant rem. The quotient comes from the top,
// quo[k-1] = r[k] + a quo[k], at a matrix-vector product for each degree of r.
func DivideResolvent[E any](ctx context.Context, a Matrix[E], r []Poly[E]) (quo []Poly[E], rem []E, err error) {
	a.mustBeSquare("resolvent")
	if a.m != len(r) {
		panic(ShapeError{Op: "division by a resolvent", R1: a.m, C1: a.n, R2: len(r), C2: 1})
	}
	top := -1
	for _, p := range r {
		top = max(top, p.Degree())
	}
	if q, ok := any(a).(Matrix[Rat]); ok {
		if _, ok := any(a.ring).(Rationals); ok {
			quo, rem, err := divideResolventQ(ctx, q, any(r).([]Poly[Rat]), top)
			return any(quo).([]Poly[E]), any(rem).([]E), err
		}
	}
	coefs := make([][]E, a.m)
	v := make([]E, a.m)
	for i := range coefs {
		coefs[i] = make([]E, max(top, 0))
		v[i] = a.ring.Zero()
	}
	for k := top; k >= 0; k-- {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		v = a.MulVec(v)
		for i := range v {
			if k <= r[i].Degree() {
				v[i] = a.ring.Add(v[i], r[i].Coef(k))
			}
			if k > 0 {
				coefs[i][k-1] = v[i]
			}
		}
	}
	quo = make([]Poly[E], a.m)
	for i := range quo {
		quo[i] = ownPoly(a.ring, coefs[i])
	}
	return quo, v, nil
}

// divideResolventQ works on integers: with a = b/d and r = p/e, the vectors
// m[k] = e d^(top-k) quo[k-1] satisfy m[k] = d^(top-k) p[k] + b m[k+1].
func divideResolventQ(ctx context.Context, a Matrix[Rat], r []Poly[Rat], top int) ([]Poly[Rat], []Rat, error) {
	n := a.m
	b, d := a.intRows()
	e := big.NewInt(1)
	var g big.Int
	for _, p := range r {
		if p.q != nil && p.q.den != nil {
			g.GCD(nil, nil, e, p.q.den)
			e.Mul(e, new(big.Int).Quo(p.q.den, &g))
		}
	}
	p := make([][]*big.Int, n)
	for i := range p {
		p[i] = r[i].q.ints()
		if f := new(big.Int).Quo(e, r[i].q.denominator()); !isOne(f) {
			p[i] = r[i].q.ints().Scale(f)
		}
	}
	rows := sparseRows(b)
	integral := isOne(d)
	v := make([]*big.Int, n)
	for i := range v {
		v[i] = new(big.Int)
	}
	coefs := make([][]*big.Int, n)
	for i := range coefs {
		coefs[i] = make([]*big.Int, max(top, 0))
	}
	power := big.NewInt(1) // d^(top-k)
	var t big.Int
	for k := top; k >= 0; k-- {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		next := make([]*big.Int, n)
		for i := range next {
			s := new(big.Int)
			for _, x := range rows[i] {
				if v[x.col].Sign() != 0 {
					s.Add(s, t.Mul(x.val, v[x.col]))
				}
			}
			if k < len(p[i]) {
				if integral {
					s.Add(s, p[i][k])
				} else {
					s.Add(s, t.Mul(power, p[i][k]))
				}
			}
			next[i] = s
			if k > 0 {
				coefs[i][k-1] = s
			}
		}
		v = next
		if k > 0 && !integral {
			power = new(big.Int).Mul(power, d)
		}
	}
	// power is d^top now; quo[k-1] is m[k] d^k over e d^top.
	if !integral {
		scale := new(big.Int).Set(d)
		for k := 1; k <= top; k++ {
			for i := range coefs {
				coefs[i][k-1] = new(big.Int).Mul(coefs[i][k-1], scale)
			}
			scale.Mul(scale, d)
		}
	}
	den := new(big.Int).Mul(e, power)
	quo := make([]Poly[Rat], n)
	rem := make([]Rat, n)
	for i := range quo {
		quo[i] = Poly[Rat]{ring: Q, q: newQBig(coefs[i], den)}
		rem[i] = RatFromFrac(v[i], den)
	}
	return quo, rem, nil
}

// entry is a non-zero entry of a row.
type entry struct {
	col int
	val *big.Int
}

func sparseRows(a [][]*big.Int) [][]entry {
	out := make([][]entry, len(a))
	for i, row := range a {
		for j, x := range row {
			if x.Sign() != 0 {
				out[i] = append(out[i], entry{j, x})
			}
		}
	}
	return out
}

// denominator returns the denominator for reading only; the zero polynomial
// has 1.
func (p *qpoly) denominator() *big.Int {
	if p == nil || p.den == nil {
		return big.NewInt(1)
	}
	return p.den
}

func isOne(x *big.Int) bool { return x.IsInt64() && x.Int64() == 1 }
