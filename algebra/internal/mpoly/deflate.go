package mpoly

// strides returns, packed, the gcd of the exponents of each variable in p and
// q, and whether one of them is more than 1. Variables that do not occur have
// stride 0.
func strides(p, q Poly) (s []uint64, any bool) {
	w := wordsOf(p.n)
	s = make([]uint64, w)
	for i := range p.n {
		g := 0
		for _, r := range [2]Poly{p, q} {
			at, shift := fieldOf(i)
			for k := at; k < len(r.exps) && g != 1; k += w {
				for a := int(r.exps[k] >> shift & fieldMask); a != 0; {
					g, a = a, g%a
				}
			}
		}
		at, shift := fieldOf(i)
		s[at] |= uint64(g) << shift
		any = any || g > 1
	}
	return s, any
}

// scaleExponents returns p with the exponents of each variable divided, or
// multiplied, by its stride. That keeps the order of the terms.
func (p Poly) scaleExponents(stride []uint64, multiply bool) Poly {
	w := wordsOf(p.n)
	exps := make([]uint64, len(p.exps))
	for i := range p.n {
		g := uint64(exponent(stride, i))
		at, shift := fieldOf(i)
		for k := at; k < len(exps); k += w {
			d := p.exps[k] >> shift & fieldMask
			switch {
			case d == 0:
			case multiply:
				exps[k] |= d * g << shift
			default:
				exps[k] |= d / g << shift
			}
		}
	}
	p.exps = exps
	return p
}
