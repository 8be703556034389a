package expr

// Limits bounds what an input may ask for, so that a slip of the pen costs an
// error and not the machine. A zero field means its default.
type Limits struct {
	Nesting int // depth of an expression tree; default 500
	Text    int // bytes of a text; default 4 MiB
	Terms   int // terms of an expanded expression; default 20,000
	Degree  int // order of an input: power of t, power to be expanded; default 250
	Bits    int // bits of a number; default 100,000
	States  int // states of a model; default 200
}

// WithDefaults returns l with the defaults in place of zeros.
func (l Limits) WithDefaults() Limits {
	set := func(x *int, d int) {
		if *x == 0 {
			*x = d
		}
	}
	set(&l.Nesting, 500)
	set(&l.Text, 4<<20)
	set(&l.Terms, 20_000)
	set(&l.Degree, 250)
	set(&l.Bits, 100_000)
	set(&l.States, 200)
	return l
}
