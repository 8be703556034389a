package intmat

import (
	"sync"

	"example.org/closedform/algebra/internal/zp"
)

// primes grows a list of the largest primes below 2^62, in decreasing order;
// it never shrinks, so that every caller sees the same sequence.
var primes struct {
	sync.Mutex
	list []uint64
}

// prime returns the i-th largest prime below 2^62, counting from 0.
func prime(i int) uint64 {
	primes.Lock()
	defer primes.Unlock()
	for len(primes.list) <= i {
		below := uint64(zp.MaxPrime)
		if k := len(primes.list); k > 0 {
			below = primes.list[k-1]
		}
		p := zp.PrimeBelow(below)
		if p < 1<<primeBits-1<<(primeBits-30) {
			panic("intmat: too many primes")
		}
		primes.list = append(primes.list, p)
	}
	return primes.list[i]
}

// primeBits is the bits of the primes of the sequence: k of them have a
// product above 2^(62 k - 1), since each is above 2^62 (1 - 2^-30) and k is
// below 2^29.
const primeBits = 62

// primesFor returns how many primes tell integers below 2^bits in absolute
// value apart with a margin: their product is above 4 2^bits.
func primesFor(bits int) int {
	return (bits + 3 + primeBits - 1) / primeBits
}

// primesBeside returns how many primes do so together with the modulus 2^64:
// none when such integers fit a signed word, else enough for their product P
// to have 2^bits < (2^63 - 4) P.
func primesBeside(bits int) int {
	if bits <= 63 {
		return 0
	}
	return (bits - 61 + primeBits - 1) / primeBits
}
