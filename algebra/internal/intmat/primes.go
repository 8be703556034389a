package intmat

import (
	"math/big"
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
		primes.list = append(primes.list, zp.PrimeBelow(below))
	}
	return primes.list[i]
}

// primeBits is a lower bound for the bits each prime of the sequence adds to
// a product.
const primeBits = 61

// primesFor returns how many primes have a product above 2 bound, which tells
// the integers of absolute value at most bound apart.
func primesFor(bound *big.Int) int {
	return (bound.BitLen()+1)/primeBits + 1
}
