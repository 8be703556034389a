package algebra

import (
	"fmt"
	"math"

	"example.org/closedform/algebra/internal/word"
)

// Check verifies the normal form of x.
func (x Rat) Check() error {
	if x.big != nil {
		if x.num != 0 || x.den != 0 {
			return fmt.Errorf("two representations at once: %d/%d and %v", x.num, x.den, x.big)
		}
		if fits63(x.big.Num()) && fits63(x.big.Denom()) {
			return fmt.Errorf("%v fits a word and is not inline", x.big)
		}
		return nil
	}
	switch d := x.denom(); {
	case d < 1 || x.num == math.MinInt64:
		return fmt.Errorf("%d/%d is out of the inline range", x.num, d)
	case word.GCD(word.Abs(x.num), uint64(d)) != 1:
		return fmt.Errorf("%d/%d is not in lowest terms", x.num, d)
	}
	return nil
}

// IsInline tells whether x is held without a big.Rat.
func (x Rat) IsInline() bool { return x.big == nil }
