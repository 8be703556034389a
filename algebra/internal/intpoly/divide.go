package intpoly

import (
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// DivExact returns p / q when q divides p over Z, and ok false when it does
// not. It panics when q is zero. A quotient modulo a word prime is tried
// first, so that refusals are cheap; the quotient itself costs
// (deg p - deg q) deg q products of coefficients.
func DivExact(p, q Poly) (quo Poly, ok bool) {
	if len(q) == 0 {
		panic("intpoly: division by the zero polynomial")
	}
	if len(p) == 0 {
		return nil, true
	}
	if len(p) < len(q) || !divides(q.lead(), p.lead()) || !divides(q[0], p[0]) {
		return nil, false
	}
	if len(q) > 1 {
		f := zp.NewField(gcdPrime(0))
		if b := reduce(q, f); len(b) == len(q) && len(f.RemPoly(reduce(p, f), b)) > 0 {
			return nil, false
		}
	}
	return divide(p, q)
}

// divide is DivExact for deg p >= deg q >= 0 without the filter.
func divide(p, q Poly) (Poly, bool) {
	if quo, ok, decided := divFlat(p, q); decided {
		return quo, ok
	}
	return divSchoolbook(p, q)
}

// isDivisor reports whether q divides p, deg p >= deg q >= 0, without the
// filter.
func isDivisor(p, q Poly) bool {
	if _, _, ok, decided := provenQuotient(p, q); decided {
		return ok
	}
	_, ok := divSchoolbook(p, q)
	return ok
}

// divides reports whether d divides x.
func divides(d, x *big.Int) bool {
	if d.Sign() == 0 {
		return x.Sign() == 0
	}
	if d.IsInt64() && (d.Int64() == 1 || d.Int64() == -1) {
		return true
	}
	return new(big.Int).Rem(x, d).Sign() == 0
}

// divSchoolbook divides from the top; deg p >= deg q >= 0.
func divSchoolbook(p, q Poly) (Poly, bool) {
	n, m := len(p), len(q)
	quo := make(Poly, n-m+1)
	unit := q.lead().IsInt64() && q.lead().Int64() == 1
	var acc, t, rem big.Int
	// residue leaves p_k minus the part of (quo q)_k known so far in acc.
	residue := func(k int) {
		acc.Set(p[k])
		for j := max(0, k-m+1); j <= min(k, n-m); j++ {
			if quo[j] != nil && quo[j].Sign() != 0 && q[k-j].Sign() != 0 {
				acc.Sub(&acc, t.Mul(quo[j], q[k-j]))
			}
		}
	}
	for k := n - m; k >= 0; k-- {
		residue(k + m - 1)
		quo[k] = new(big.Int)
		if unit {
			quo[k].Set(&acc)
			continue
		}
		quo[k].QuoRem(&acc, q.lead(), &rem)
		if rem.Sign() != 0 {
			return nil, false
		}
	}
	for k := 0; k < m-1; k++ {
		residue(k)
		if acc.Sign() != 0 {
			return nil, false
		}
	}
	return quo, true
}

// reduce returns p modulo the field's prime.
func reduce(p Poly, f zp.Field) zp.Poly { return reduceTo(make(zp.Poly, len(p)), p, f) }

// reduceTo is reduce into the memory of a, as long as p.
func reduceTo(a zp.Poly, p Poly, f zp.Field) zp.Poly {
	for i, c := range p {
		a[i] = f.FromBig(c)
	}
	n := len(a)
	for n > 0 && a[n-1] == 0 {
		n--
	}
	return a[:n]
}
