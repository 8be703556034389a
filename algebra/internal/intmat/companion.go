package intmat

import "math/big"

// companionPoly returns the characteristic polynomial of a companion matrix,
// nil for any other: ones below the diagonal, zeros elsewhere but for the
// last column, which holds the coefficients with signs reversed; or the
// transpose of that.
//
// Source: R. Horn, C. Johnson, Matrix Analysis, section 3.3.
func (s *square) companionPoly() []*big.Int {
	n := s.n
	if n < 3 { // nothing to save
		return nil
	}
	lower, upper := s.is(1, 0, 1), s.is(0, 1, 1)
	if lower == upper { // not both, as (2, 0) or (0, 2) is no one
		return nil
	}
	for i := range n - 1 { // the order of tests finds most others at once
		for j := range n - 1 {
			if lower && !s.is(i, j, unit(i == j+1)) || upper && !s.is(i, j, unit(j == i+1)) {
				return nil
			}
		}
		if lower && !s.is(n-1, i, unit(i == n-2)) || upper && !s.is(i, n-1, unit(i == n-2)) {
			return nil
		}
	}
	out := newSlab(n+1, s.w+1)
	x := make([]uint64, s.w+1) // -x may need one more bit
	for i := range n {
		entry := s.at(i, n-1)
		if upper {
			entry = s.at(n-1, i)
		}
		copy(x, entry)
		x[s.w] = uint64(int64(x[s.w-1]) >> 63)
		negateLimbs(x)
		out.set(i, x)
	}
	clear(x)
	x[0] = 1
	out.set(n, x)
	return out.values
}

// is tells whether an entry is the small nonnegative v.
func (s *square) is(i, j int, v uint64) bool {
	x := s.at(i, j)
	for _, limb := range x[1:] {
		if limb != 0 {
			return false
		}
	}
	return x[0] == v
}

func unit(b bool) uint64 {
	if b {
		return 1
	}
	return 0
}
