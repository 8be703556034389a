package intmat

import (
	"context"
	"math/big"

	"example.org/closedform/algebra/internal/zp"
)

// MinPoly returns the minimal polynomial of a square A, the coefficient of
// s^i at index i. It is monic with integer coefficients by Gauss's lemma, and
// 1 when A is empty.
//
// The minimal polynomial of A modulo a prime divides the image of the wanted
// one, so the largest degree d seen is a lower bound for its degree. If d = n,
// as the Hessenberg form modulo the first prime often shows, it is the
// characteristic polynomial ([CharPoly]). Otherwise images of degree d are
// combined to a polynomial f with f(A) = 0 modulo the product M of their
// primes, until
//
//	2 sum_i |f_i| R^i < M,
//
// R a bound for the absolute row sums of A. That bounds the entries of f(A)
// below M/2, whence f(A) = 0; and no polynomial of lower degree does that. Every
// image is an exact computation, O(n^3) word operations when A has few
// blocks per eigenvalue.
//
// Source: M. Neunhoeffer, C. Praeger, Computing minimal polynomials of
// matrices, for the images; the bound is derived here.
func MinPoly(ctx context.Context, a [][]*big.Int) ([]*big.Int, error) {
	return squareOf(a).minPoly(ctx)
}

// MinPolyWords is [MinPoly] for the matrix of order n with rows a.
func MinPolyWords(ctx context.Context, n int, a []int64) ([]*big.Int, error) {
	return squareOfWords(n, a).minPoly(ctx)
}

func (s *square) minPoly(ctx context.Context) ([]*big.Int, error) {
	n := s.n
	cyclic, err := s.image(ctx, zp.NewField(prime(0))).Cyclic(ctx)
	if err != nil {
		return nil, err
	}
	if cyclic {
		return s.charPoly(ctx)
	}
	norm := new(big.Int).Lsh(big.NewInt(1), uint(s.rowSumBits()))
	var fields []zp.Field
	var images [][]uint64
	degree, used := 0, 0
	for batch := 1; ; batch = len(fields)/2 + 1 {
		newFields, newImages := make([]zp.Field, batch), make([][]uint64, batch)
		nanos := modularNanos(n, batch, 5)
		err := forEach(ctx, batch, nanos, func(ctx context.Context, i int) error {
			f := zp.NewField(prime(used + i))
			image, err := s.image(ctx, f).MinPoly(ctx)
			newFields[i], newImages[i] = f, image
			return err
		})
		if err != nil {
			return nil, err
		}
		used += batch
		for i, image := range newImages {
			d := len(image) - 1
			if d > degree { // the primes so far were unlucky
				fields, images, degree = nil, nil, d
			}
			if d == degree {
				fields, images = append(fields, newFields[i]), append(images, image)
			}
		}
		if degree == n {
			return s.charPoly(ctx)
		}
		poly, err := newCRT(fields).liftAll(ctx, images, nil)
		if err != nil {
			return nil, err
		}
		half := new(big.Int).Lsh(big.NewInt(1), uint(primeBits*len(fields)-2))
		if vanishes(poly, norm, half) {
			return poly, nil
		}
	}
}

// vanishes tells whether sum |f_i| norm^i <= half, a number below half the
// modulus.
func vanishes(f []*big.Int, norm, half *big.Int) bool {
	sum, abs := new(big.Int), new(big.Int)
	for i := len(f) - 1; i >= 0; i-- {
		sum.Mul(sum, norm)
		sum.Add(sum, abs.Abs(f[i]))
		if i > 0 && sum.Cmp(half) > 0 && norm.Sign() > 0 {
			return false
		}
	}
	return sum.Cmp(half) <= 0
}
