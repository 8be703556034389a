package algebra

import "math/big"

// Multiple is the term C s^Shift P of a linear combination.
type Multiple[E any] struct {
	C     E
	P     Poly[E]
	Shift int
}

// Combine returns the sum of the terms over the ring r. Over Q it works on
// integers over one denominator and normalises once.
func Combine[E any](r Ring[E], terms []Multiple[E]) Poly[E] {
	if _, ok := any(r).(Rationals); ok {
		return any(combineQ(any(terms).([]Multiple[Rat]))).(Poly[E])
	}
	sum := Poly[E]{ring: r}
	for _, t := range terms {
		sum = sum.Add(t.P.Scale(t.C).ShiftUp(t.Shift))
	}
	return sum
}

func combineQ(terms []Multiple[Rat]) Poly[Rat] {
	common := big.NewInt(1)
	length := 0
	var g big.Int
	for _, t := range terms {
		if t.P.q == nil || t.C.IsZero() {
			continue
		}
		length = max(length, t.P.q.length()+t.Shift)
		if d := mulDen(t.P.q.den, t.C.Den()); !isOne(d) {
			g.GCD(nil, nil, common, d)
			common.Mul(common, new(big.Int).Quo(d, &g))
		}
	}
	sum := make([]*big.Int, length)
	for i := range sum {
		sum[i] = new(big.Int)
	}
	var t big.Int
	for _, m := range terms {
		if m.P.q == nil || m.C.IsZero() {
			continue
		}
		// c/d p/e = (c common/(d e)) p/common
		f := m.C.Num()
		if !isOne(common) {
			f.Mul(f, common)
			f.Quo(f, new(big.Int).Mul(m.C.Den(), m.P.q.denominator()))
		}
		one := isOne(f)
		for i, x := range m.P.q.ints() {
			if one {
				sum[i+m.Shift].Add(sum[i+m.Shift], x)
			} else {
				sum[i+m.Shift].Add(sum[i+m.Shift], t.Mul(f, x))
			}
		}
	}
	return Poly[Rat]{ring: Q, q: newQBig(sum, common)}
}
