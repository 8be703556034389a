package mpoly

import (
	"context"
)

// recombine groups the local factors into the restrictions of true factors: it
// returns sets of numbers of local factors of equal multiplicity, such that no
// proper subset of a set belongs to a true factor. Failing a test is a proof of
// that; passing it is not one of the contrary. All subsets are tried, by
// ascending size, so the cost is exponential in the number of local factors
// that are no restrictions of true ones by themselves.
func (r *lineFactors) recombine(ctx context.Context) (groups [][]int, err error) {
	top := 0
	for _, m := range r.mult {
		top = max(top, m)
	}
	for m := 1; m <= top; m++ {
		var left []int
		for i := range r.mult {
			if r.mult[i] == m {
				left = append(left, i)
			}
		}
		g, err := r.recombineEqual(ctx, left)
		if err != nil {
			return nil, err
		}
		groups = append(groups, g...)
	}
	return groups, nil
}

// recombineEqual is recombine for local factors of one multiplicity.
func (r *lineFactors) recombineEqual(ctx context.Context, left []int) (groups [][]int, err error) {
	traces := r.traces()
	for size := 1; 2*size <= len(left); {
		pick, err := r.findSubset(ctx, left, size, traces)
		if err != nil {
			return nil, err
		}
		if pick == nil {
			size++
			continue
		}
		groups = append(groups, pick)
		left = without(left, pick)
	}
	// The complement of a true factor is one, so what is left has none.
	if len(left) > 0 {
		groups = append(groups, left)
	}
	return groups, nil
}

// traces returns, for each local factor, the coefficient of t^(degree+1) in
// lead(t) times its trace: these add up to zero over the factors of a true one.
func (r *lineFactors) traces() []uint64 {
	f := r.line.f
	s := make([]uint64, len(r.factor))
	for i, g := range r.factor {
		var sum dotSum
		for k := range r.degree + 2 {
			if j := r.degree + 1 - k; j < len(r.lead) {
				sum = f.cross(sum, g[k][len(g[k])-2:len(g[k])-1], r.lead[j:j+1])
			}
		}
		s[i] = f.redc(sum.hi, sum.lo)
	}
	return s
}

// findSubset returns the first subset of the given size that passes the test,
// nil when none does.
func (r *lineFactors) findSubset(ctx context.Context, left []int, size int, traces []uint64) ([]int, error) {
	if len(left) < size {
		return nil, nil
	}
	f := r.line.f
	at := make([]int, size) // ascending positions in left
	for i := range at {
		at[i] = i
	}
	pick := make([]int, size)
	for tried := 1; ; tried++ {
		if tried%1024 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		sum := uint64(0)
		for i, a := range at {
			pick[i] = left[a]
			sum = f.Add(sum, traces[pick[i]])
		}
		if sum == 0 && r.isFactor(ctx, pick) {
			return pick, ctx.Err()
		}
		i := size - 1
		for i >= 0 && at[i] == len(left)-size+i {
			i--
		}
		if i < 0 {
			return nil, ctx.Err()
		}
		for at[i]++; i+1 < size; i++ {
			at[i+1] = at[i] + 1
		}
	}
}

// without returns the elements of a that are not in b, both ascending.
func without(a, b []int) []int {
	var c []int
	for _, x := range a {
		if len(b) > 0 && x == b[0] {
			b = b[1:]
			continue
		}
		c = append(c, x)
	}
	return c
}
