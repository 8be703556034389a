package mpoly

// keyed is a packed monomial with the number of what it belongs to.
type keyed struct {
	key    uint64
	number int32
}

// insertionLimit is the length up to which insertion beats distribution.
const insertionLimit = 40

// sortKeyed sorts a by ascending keys, which have the given number of bits, in
// O(len(a) keyBits), keeping the order of equal ones. The result is in the
// memory of a or of b, which is as long.
//
// Source: Knuth, The Art of Computer Programming 3, sections 5.2.1 (insertion)
// and 5.2.5 (radix sorting).
func sortKeyed(a, b []keyed, keyBits int) []keyed {
	if len(a) <= insertionLimit {
		for i := 1; i < len(a); i++ {
			x := a[i]
			j := i
			for ; j > 0 && a[j-1].key > x.key; j-- {
				a[j] = a[j-1]
			}
			a[j] = x
		}
		return a
	}
	for shift := 0; shift < keyBits; shift += 8 {
		var start [256]int
		for i := range a {
			start[a[i].key>>shift&255]++
		}
		if start[a[0].key>>shift&255] == len(a) {
			continue // one digit only
		}
		sum := 0
		for d, c := range start {
			start[d] = sum
			sum += c
		}
		for _, x := range a {
			at := &start[x.key>>shift&255]
			b[*at] = x
			*at++
		}
		a, b = b, a
	}
	return a
}
