package algebra

import (
	"context"
	"errors"
	"math/big"
	"math/rand/v2"
	"strings"
	"sync"
	"testing"
	"time"
)

func rootsInts(c ...int64) []*big.Int {
	r := make([]*big.Int, len(c))
	for i, x := range c {
		r[i] = big.NewInt(x)
	}
	return r
}

func rootsMul(a, b []*big.Int) []*big.Int {
	r := make([]*big.Int, len(a)+len(b)-1)
	for i := range r {
		r[i] = new(big.Int)
	}
	for i, x := range a {
		for j, y := range b {
			r[i+j].Add(r[i+j], new(big.Int).Mul(x, y))
		}
	}
	return r
}

func rootsProduct(factors ...[]*big.Int) []*big.Int {
	r := rootsInts(1)
	for _, f := range factors {
		r = rootsMul(r, f)
	}
	return r
}

// rootsBinomial returns a s^n + b.
func rootsBinomial(a int64, n int, b int64) []*big.Int {
	r := make([]int64, n+1)
	r[0], r[n] = b, a
	return rootsInts(r...)
}

func rootsWilkinson(n int64) []*big.Int {
	r := rootsInts(1)
	for i := int64(1); i <= n; i++ {
		r = rootsMul(r, rootsInts(-i, 1))
	}
	return r
}

// rootsTridiagonal returns the characteristic polynomial of the n by n matrix
// tridiag(1, -2, 1): p_k = (s+2) p_{k-1} - p_{k-2}.
func rootsTridiagonal(n int) []*big.Int {
	a, b := rootsInts(1), rootsInts(2, 1)
	for range n - 1 {
		c := rootsMul(b, rootsInts(2, 1))
		for i, x := range a {
			c[i].Sub(c[i], x)
		}
		a, b = b, c
	}
	return b
}

// rootsMignotte returns s^n - 2 (a s - 1)^2, which has two roots very close to 1/a.
func rootsMignotte(n int, a int64) []*big.Int {
	r := make([]int64, n+1)
	r[0], r[1], r[2], r[n] = -2, 4*a, -2*a*a, 1
	return rootsInts(r...)
}

func rootsPow10(n int64) *big.Int { return new(big.Int).Exp(big.NewInt(10), big.NewInt(n), nil) }

func rootsRandom(rng *rand.Rand, n, bits int) []*big.Int {
	r := make([]*big.Int, n+1)
	for i := range r {
		r[i] = new(big.Int)
		for range bits / 50 {
			r[i].Lsh(r[i], 50).Add(r[i], big.NewInt(rng.Int64N(1<<50)))
		}
		if rng.IntN(2) == 0 {
			r[i].Neg(r[i])
		}
	}
	r[n].Add(r[n].Abs(r[n]), big.NewInt(1))
	r[0].Add(r[0].Abs(r[0]), big.NewInt(1))
	return r
}

// rootsSturm returns the number of real roots by Sturm's theorem, with integer
// pseudo-remainders made primitive.
func rootsSturm(c []*big.Int) int {
	a := make([]*big.Int, len(c))
	for i := range c {
		a[i] = new(big.Int).Set(c[i])
	}
	b := make([]*big.Int, len(c)-1)
	for i := range b {
		b[i] = new(big.Int).Mul(c[i+1], big.NewInt(int64(i+1)))
	}
	var plus, minus []int // signs at +-infinity
	for {
		s := a[len(a)-1].Sign()
		plus = append(plus, s)
		if len(a)%2 == 0 {
			s = -s
		}
		minus = append(minus, s)
		if len(b) == 0 {
			break
		}
		lead := new(big.Int).Abs(b[len(b)-1])
		for len(a) >= len(b) {
			t := new(big.Int).Mul(a[len(a)-1], big.NewInt(int64(b[len(b)-1].Sign())))
			shift := len(a) - len(b)
			for i := range a {
				a[i] = new(big.Int).Mul(a[i], lead)
				if i >= shift {
					a[i].Sub(a[i], new(big.Int).Mul(t, b[i-shift]))
				}
			}
			for len(a) > 0 && a[len(a)-1].Sign() == 0 {
				a = a[:len(a)-1]
			}
		}
		g := new(big.Int)
		for _, x := range a {
			g.GCD(nil, nil, g, new(big.Int).Abs(x))
		}
		for i := range a {
			a[i] = new(big.Int).Neg(new(big.Int).Quo(a[i], g))
		}
		a, b = b, a
	}
	variations := func(s []int) (n int) {
		for i := 1; i < len(s); i++ {
			if s[i] != s[i-1] {
				n++
			}
		}
		return n
	}
	return variations(minus) - variations(plus)
}

// rootsCheck checks everything RootSet promises, at the given precision.
func rootsCheck(t *testing.T, c []*big.Int, r *RootSet, prec uint) {
	t.Helper()
	ctx := context.Background()
	n := len(c) - 1
	if r.Len() != n {
		t.Fatalf("%d roots of a polynomial of degree %d", r.Len(), n)
	}
	if want := rootsSturm(c); r.NumReal() != want {
		t.Fatalf("%d real roots, %d by Sturm's theorem", r.NumReal(), want)
	}
	z := make([]ComplexBall, n)
	for i := range z {
		var err error
		if z[i], err = r.Enclose(ctx, i, prec); err != nil {
			t.Fatal(err)
		}
		if fine, err := r.Enclose(ctx, i, 2*prec+50); err != nil || !fine.Overlaps(z[i]) {
			t.Fatalf("root %d at two precisions: %v and %v, %v", i, z[i], fine, err)
		}
		// rad <= 2^-prec |root|, checked for the largest radius and modulus.
		_, abs := z[i].AbsBounds()
		bound := new(big.Float).SetMantExp(abs, -int(prec))
		if z[i].Re.Rad().Cmp(bound) > 0 || z[i].Im.Rad().Cmp(bound) > 0 {
			t.Fatalf("root %d has radii %v and %v, more than %v", i, z[i].Re.Rad(), z[i].Im.Rad(), bound)
		}
		j := r.Conjugate(i)
		if real := i < r.NumReal(); real != (j == i) || real != z[i].Im.isZero() {
			t.Fatalf("root %d is real or not", i)
		}
		if r.Conjugate(j) != i {
			t.Fatalf("%d is not the conjugate of its conjugate", i)
		}
	}
	for i := range z {
		for j := range i {
			if z[i].Overlaps(z[j]) {
				t.Fatalf("roots %d and %d overlap", i, j)
			}
		}
		if i > 0 && i < r.NumReal() {
			if s, certain := z[i].Re.Sub(z[i-1].Re, 64).Sign(); !certain || s <= 0 {
				t.Fatalf("real roots %d and %d are out of order", i-1, i)
			}
		}
		if i < r.NumReal() {
			continue
		}
		j := r.Conjugate(i)
		w := z[j].Conj()
		if w.Re.Mid().Cmp(z[i].Re.Mid()) != 0 || w.Im.Mid().Cmp(z[i].Im.Mid()) != 0 || w.Im.Rad().Cmp(z[i].Im.Rad()) != 0 {
			t.Fatalf("roots %d and %d are not mirrors", i, j)
		}
		up := (i-r.NumReal())%2 == 0
		if s, certain := z[i].Im.Sign(); !certain || up != (s > 0) || up != (j == i+1) {
			t.Fatalf("root %d is on the wrong side", i)
		}
		if i >= r.NumReal()+2 {
			d := z[i].Re.Sub(z[i-2].Re, 64)
			size := z[i].absUp().addUp(z[i-2].absUp())
			if s, certain := d.Sign(); certain && s < 0 && d.absDown().cmp(size.mulPow2(-98)) > 0 {
				t.Fatalf("pairs %d and %d are out of order", i-2, i)
			}
		}
	}
	// Vieta: the product of a_n and all s - z_i has the coefficients.
	p := []ComplexBall{{Re: BallFromInt(c[n])}}
	for _, root := range z {
		q := make([]ComplexBall, len(p)+1)
		for i, x := range p {
			q[i+1] = q[i+1].Add(x, 2*prec)
			q[i] = q[i].Sub(x.Mul(root, 2*prec), 2*prec)
		}
		p = q
	}
	for i, x := range p {
		complexBallContains(t, "coefficient", x, complexBallPoint{new(big.Rat).SetInt(c[i]), new(big.Rat)})
	}
	// That would be true of huge balls: the constant term must be known well.
	if k := p[0].Re.RelPrec(); c[0].Sign() != 0 && k < int(prec)-n-10 {
		t.Fatalf("the product of the roots has %d proven bits of %d", k, prec)
	}
}

// rootsPerturbed returns 10^k p + s^i, which has clusters at the multiple roots of p.
func rootsPerturbed(p []*big.Int, k int64, i int) []*big.Int {
	r := rootsMul(p, []*big.Int{rootsPow10(k)})
	r[i].Add(r[i], big.NewInt(1))
	return r
}

func TestRootsHard(t *testing.T) {
	rng := rand.New(rand.NewPCG(31, 32))
	cases := map[string][]*big.Int{
		"linear":      rootsInts(-3, 7),
		"s":           rootsInts(0, 1),
		"s^2-2":       rootsInts(-2, 0, 1),
		"s^2+1":       rootsInts(1, 0, 1),
		"s^2+s+1":     rootsInts(1, 1, 1),
		"s^3-s":       rootsInts(0, -1, 0, 1),
		"s(s^2+2)":    rootsInts(0, 2, 0, 1),
		"imaginary":   rootsProduct(rootsInts(1, 0, 1), rootsInts(2, 0, 1), rootsInts(4, 0, 1), rootsInts(1000003, 0, 1)),
		"same Re":     rootsProduct(rootsInts(2, 2, 1), rootsInts(5, 2, 1), rootsInts(10, 2, 1), rootsInts(1, 1)),
		"Wilkinson":   rootsWilkinson(20),
		"Mignotte":    rootsMignotte(20, 10),
		"Mignotte 2":  rootsMignotte(15, 1000000),
		"s^5-1":       rootsBinomial(1, 5, -1),
		"s^16+1":      rootsBinomial(1, 16, 1),
		"s^64-1":      rootsBinomial(1, 64, -1),
		"2^62":        rootsInts(1<<62, 1, -1<<63, 1<<31, 1),
		"tridiagonal": rootsTridiagonal(30),
		"1000 bits":   rootsRandom(rng, 20, 1000),
		"scaled":      rootsProduct([]*big.Int{big.NewInt(-1), rootsPow10(30)}, rootsInts(-1, 1), []*big.Int{new(big.Int).Neg(rootsPow10(30)), big.NewInt(1)}),
		"scaled 2":    rootsProduct([]*big.Int{big.NewInt(1), big.NewInt(0), rootsPow10(600)}, rootsInts(-2, 0, 0, 1), []*big.Int{rootsPow10(400), big.NewInt(0), big.NewInt(1)}),
		"close":       rootsProduct([]*big.Int{new(big.Int).Neg(rootsPow10(80)), rootsPow10(80)}, []*big.Int{new(big.Int).Add(rootsPow10(80), big.NewInt(1)), new(big.Int).Neg(rootsPow10(80))}, rootsInts(1, 0, 1)),
		"cube":        rootsPerturbed(rootsProduct(rootsInts(-2, 0, 0, 1), rootsInts(-2, 0, 0, 1), rootsInts(-2, 0, 0, 1)), 100, 0),
		"cluster":     rootsPerturbed(rootsProduct(rootsInts(-1, 1), rootsInts(1, -2, 1), rootsInts(1, -2, 1), rootsInts(1, 0, 1)), 200, 1),
		"very close":  rootsProduct([]*big.Int{new(big.Int).Neg(rootsPow10(1000)), rootsPow10(1000)}, []*big.Int{new(big.Int).Add(rootsPow10(1000), big.NewInt(1)), new(big.Int).Neg(rootsPow10(1000))}, rootsInts(3, 1)),
		"near axis":   rootsProduct([]*big.Int{new(big.Int).Add(rootsPow10(60), big.NewInt(1)), new(big.Int).Mul(big.NewInt(-2), rootsPow10(60)), rootsPow10(60)}, rootsInts(-3, 1)),
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			start := time.Now()
			r, err := NewRootSet(context.Background(), c)
			if err != nil {
				t.Fatal(err)
			}
			t.Logf("degree %d isolated in %v", r.Len(), time.Since(start))
			rootsCheck(t, c, r, 64)
			rootsCheck(t, c, r, 300)
		})
	}
}

func TestRootsCertifyRoughPoints(t *testing.T) {
	// The roots are known: 1 ... a and k +- i for k = 1 ... b, and the points near them.
	rng := rand.New(rand.NewPCG(37, 38))
	certified := 0
	for range 400 {
		c := rootsWilkinson(1 + rng.Int64N(5))
		var exact []complexBallPoint
		for k := range len(c) - 1 {
			exact = append(exact, complexBallPoint{big.NewRat(int64(k+1), 1), new(big.Rat)})
		}
		for k := range rng.Int64N(3) {
			c = rootsMul(c, rootsInts((k+1)*(k+1)+1, -2*(k+1), 1))
			for _, im := range []int64{1, -1} {
				exact = append(exact, complexBallPoint{big.NewRat(k+1, 1), big.NewRat(im, 1)})
			}
		}
		// At times too far for a certificate.
		scale := int64(1) << (6 + rng.IntN(20))
		off := func(x *big.Rat) Ball {
			return BallFromRat(new(big.Rat).Add(x, big.NewRat(rng.Int64N(1<<20)-1<<19, scale<<20)), 80).point()
		}
		z := make([]ComplexBall, len(exact))
		for i, p := range exact {
			z[i] = ComplexBall{off(p.re), off(p.im)}
		}
		discs, gaps, err := certifyRoots(context.Background(), c, z, 128)
		if err != nil {
			t.Fatal(err)
		}
		if discs == nil {
			continue
		}
		certified++
		in := make([]int, len(exact))
		for i, d := range discs {
			if magUp(64*uint64(len(z)), 0).mulDown(d.rad).cmp(gaps[i]) > 0 {
				t.Fatalf("disc of radius %v with gap %v", d.rad.float(true), gaps[i].float(true))
			}
			for k, p := range exact {
				dist := d.at.Sub(ComplexBall{BallFromRat(p.re, 80), BallFromRat(p.im, 80)}, 100)
				switch {
				case dist.absDown().cmp(d.rad) <= 0:
					in[k]++
					if d.at.isReal() != (p.im.Sign() == 0) {
						t.Fatalf("root %v + %vi is real or not", p.re, p.im)
					}
				case dist.absUp().cmp(gaps[i]) < 0:
					t.Fatalf("a root lies in the gap around disc %d", i)
				}
			}
		}
		for k, n := range in {
			if n != 1 {
				t.Fatalf("%d discs contain the root %v + %vi", n, exact[k].re, exact[k].im)
			}
		}
	}
	if certified < 100 || certified == 400 {
		t.Errorf("%d of 400 point sets certified", certified)
	}
}

func TestRootsNewtonStepFromTheEdge(t *testing.T) {
	// The root 1 of (s-1)(s-2), or of its square-free multiples, on the edge of
	// the largest disc that a certificate allows.
	for _, c := range [][]*big.Int{rootsWilkinson(2), rootsProduct(rootsWilkinson(3), rootsInts(2, -2, 1))} {
		r, err := NewRootSet(context.Background(), c)
		if err != nil {
			t.Fatal(err)
		}
		for _, sign := range []int64{1, -1} {
			for prec := uint(9); prec < 200; prec++ {
				rad := magPow2(-10)
				at := BallFromRat(big.NewRat(1<<10+sign, 1<<10), 64)
				gap := magPow2(0).subDown(rad)
				if sign < 0 {
					gap = magPow2(0)
				}
				x := newIsolatedRoot(rootDisc{ComplexBall{Re: at}, rad}, gap)
				d, err := r.refine(context.Background(), x, prec)
				if err != nil {
					t.Fatal(err)
				}
				if z := d.at.widen(d.rad); !z.Re.Contains(big.NewRat(1, 1)) || z.Re.RelPrec() < int(prec) {
					t.Fatalf("at %d bits: %v +- %v", prec, z.Re.Mid(), z.Re.Rad())
				}
			}
		}
	}
}

func TestRootsRandom(t *testing.T) {
	rng := rand.New(rand.NewPCG(33, 34))
	for range 60 {
		c := rootsRandom(rng, 1+rng.IntN(12), 50)
		if rng.IntN(2) == 0 { // small coefficients, many of them 0
			for i := 1; i+1 < len(c); i++ {
				c[i].SetInt64(rng.Int64N(5) - 2)
			}
		}
		r, err := NewRootSet(context.Background(), c)
		if err != nil {
			t.Fatal(err)
		}
		rootsCheck(t, c, r, 100)
	}
}

func TestRootsTridiagonal100(t *testing.T) {
	c := rootsTridiagonal(100)
	start := time.Now()
	r, err := NewRootSet(context.Background(), c)
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("degree 100 isolated in %v", time.Since(start))
	if r.NumReal() != 100 {
		t.Fatalf("%d real roots", r.NumReal())
	}
	// The eigenvalues are -4 sin^2(k pi / 202), k = 100 ... 1 ascending.
	for i := range 100 {
		z, err := r.Enclose(context.Background(), i, 500)
		if err != nil {
			t.Fatal(err)
		}
		s, _ := Pi(600).MulInt(big.NewInt(int64(100-i)), 600).Quo(BallFromInt(big.NewInt(202)), 600).SinCos(600)
		if want := s.Sqr(600).MulPow2(2).Neg(); !z.Re.Overlaps(want) || want.RelPrec() < 500 {
			t.Fatalf("root %d is %v, want %v", i, z.Re.Mid(), want.Mid())
		}
	}
}

func TestRootsOfUnity(t *testing.T) {
	r, err := NewRootSet(context.Background(), rootsBinomial(1, 7, -1))
	if err != nil {
		t.Fatal(err)
	}
	// After the root 1, the pairs e^(+-2 pi i k/7) by real part: k = 3, 2, 1.
	for i := 1; i < 7; i++ {
		k := int64(3 - (i-1)/2)
		if i%2 == 0 {
			k = -k
		}
		s, c := Pi(300).MulInt(big.NewInt(2*k), 300).Quo(BallFromInt(big.NewInt(7)), 300).SinCos(300)
		z, err := r.Enclose(context.Background(), i, 200)
		if err != nil || !z.Overlaps(ComplexBall{c, s}) {
			t.Fatalf("root %d: %v, %v", i, z, err)
		}
	}
}

func TestRootsOrderOfEqualRealParts(t *testing.T) {
	// Pairs -1 +- i, -1 +- 2i, -1 +- 3i, given in another order, then 0 +- i.
	c := rootsProduct(rootsInts(10, 2, 1), rootsInts(2, 2, 1), rootsInts(1, 0, 1), rootsInts(5, 2, 1))
	r, err := NewRootSet(context.Background(), c)
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []int64{1, -1, 2, -2, 3, -3, 1, -1} {
		z, err := r.Enclose(context.Background(), i, 100)
		re := big.NewRat(-1, 1)
		if i >= 6 {
			re.SetInt64(0)
		}
		if err != nil {
			t.Fatal(err)
		}
		complexBallContains(t, "root", z, complexBallPoint{re, big.NewRat(want, 1)})
	}
}

func TestRootsThousandDigits(t *testing.T) {
	r, err := NewRootSet(context.Background(), rootsInts(-2, 0, 1))
	if err != nil {
		t.Fatal(err)
	}
	z, err := r.Enclose(context.Background(), 1, 3400)
	if err != nil {
		t.Fatal(err)
	}
	got, ok := z.Re.Decimal(1001)
	root := new(big.Int).Sqrt(new(big.Int).Mul(big.NewInt(2), rootsPow10(2000))).String()
	if !ok || strings.Replace(got, ".", "", 1)[:1000] != root[:1000] {
		t.Errorf("sqrt 2 = %s", got)
	}
	for name, c := range map[string][]*big.Int{"Wilkinson": rootsWilkinson(20), "Mignotte": rootsMignotte(20, 10)} {
		r, err := NewRootSet(context.Background(), c)
		if err != nil {
			t.Fatal(err)
		}
		start := time.Now()
		rootsCheck(t, c, r, 3400)
		t.Logf("%s: 1000 digits of all roots and their check in %v", name, time.Since(start))
	}
}

func TestRootsDoNotDependOnHistory(t *testing.T) {
	ctx := context.Background()
	c := rootsProduct(rootsInts(-3, 1, 0, 2, 1), rootsInts(7, 1, 1))
	precs := []uint{10, 2000, 64, 65, 200, 64, 1000}
	fresh := make([][]ComplexBall, len(precs))
	for k, prec := range precs {
		r, err := NewRootSet(ctx, c)
		if err != nil {
			t.Fatal(err)
		}
		for i := range r.Len() {
			z, err := r.Enclose(ctx, i, prec)
			if err != nil {
				t.Fatal(err)
			}
			fresh[k] = append(fresh[k], z)
		}
	}
	shared, err := NewRootSet(ctx, c)
	if err != nil {
		t.Fatal(err)
	}
	var wg sync.WaitGroup
	for range 3 {
		for k, prec := range precs {
			wg.Go(func() {
				for i := range shared.Len() {
					z, err := shared.Enclose(ctx, i, prec)
					w := fresh[k][i]
					if err != nil || z.Re.Mid().Cmp(w.Re.Mid()) != 0 || z.Im.Mid().Cmp(w.Im.Mid()) != 0 || z.Re.Rad().Cmp(w.Re.Rad()) != 0 {
						t.Errorf("root %d at %d bits depends on what was asked before (%v)", i, prec, err)
					}
				}
			})
		}
	}
	wg.Wait()
}

func TestRootsRejects(t *testing.T) {
	ctx := context.Background()
	rng := rand.New(rand.NewPCG(35, 36))
	f := rootsRandom(rng, 4, 200)
	for name, c := range map[string][]*big.Int{
		"s^2":         rootsInts(0, 0, 1),
		"(s-1)^2":     rootsInts(1, -2, 1),
		"(s^2+1)^2 s": rootsProduct(rootsInts(1, 0, 1), rootsInts(1, 0, 1), rootsInts(0, 1)),
		"Wilkinson^2": rootsProduct(rootsWilkinson(10), rootsInts(-3, 1)),
		"f^2":         rootsProduct(f, f, rootsRandom(rng, 3, 200)),
		"1000 bits":   rootsProduct(rootsRandom(rng, 30, 1000), rootsInts(-3, 5), rootsInts(-3, 5)),
	} {
		if _, err := NewRootSet(ctx, c); !errors.Is(err, ErrNotSquareFree) {
			t.Errorf("%s: error %v", name, err)
		}
	}
	for _, c := range [][]*big.Int{nil, rootsInts(0), rootsInts(5), rootsInts(5, 0, 0)} {
		if _, err := NewRootSet(ctx, c); err == nil || errors.Is(err, ErrNotSquareFree) {
			t.Errorf("%v: error %v", c, err)
		}
	}
	arg := rootsInts(-6, 1, 1, 0)
	r, err := NewRootSet(ctx, arg)
	if err != nil || r.Len() != 2 {
		t.Fatalf("a leading zero: %v", err)
	}
	arg[0].SetInt64(99) // must not be shared
	rootsCheck(t, rootsInts(-6, 1, 1), r, 200)
}

func TestRootsCancel(t *testing.T) {
	done, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := NewRootSet(done, rootsInts(-2, 0, 1)); !errors.Is(err, context.Canceled) {
		t.Errorf("NewRootSet: %v", err)
	}
	r, err := NewRootSet(context.Background(), rootsTridiagonal(12))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := r.Enclose(done, 0, 100); !errors.Is(err, context.Canceled) {
		t.Errorf("Enclose: %v", err)
	}
	soon, cancel := context.WithTimeout(context.Background(), 30*time.Millisecond)
	defer cancel()
	start := time.Now()
	if _, err = NewRootSet(soon, rootsTridiagonal(150)); !errors.Is(err, context.DeadlineExceeded) {
		t.Errorf("NewRootSet: %v", err)
	}
	if _, err = r.Enclose(soon, 0, 5_000_000); !errors.Is(err, context.DeadlineExceeded) {
		t.Errorf("Enclose: %v", err)
	}
	if d := time.Since(start); d > 2*time.Second { // 100 ms, with room for a busy machine and the race detector
		t.Errorf("cancelled after %v", d)
	}
	if z, err := r.Enclose(context.Background(), 0, 200); err != nil || z.Re.RelPrec() < 199 {
		t.Errorf("after a cancelled call: %v", err)
	}
}

func BenchmarkRootSet(b *testing.B) {
	for _, c := range []struct {
		name string
		p    []*big.Int
	}{
		{"degree2", rootsInts(-2, 0, 1)}, {"degree5", rootsInts(-1, -1, 0, 0, 0, 1)}, {"Wilkinson20", rootsWilkinson(20)},
		{"Mignotte20", rootsMignotte(20, 10)}, {"unity64", rootsBinomial(1, 64, -1)}, {"tridiagonal100", rootsTridiagonal(100)},
	} {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				if _, err := NewRootSet(context.Background(), c.p); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
