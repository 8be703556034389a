package main

import (
	"bytes"
	"context"
	"fmt"
	"image/color"
	"math"
	"math/big"
	"sort"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgpdf"
	"gonum.org/v1/plot/vg/vgsvg"

	"example.org/closedform/expr"
)

const (
	plotWidth  = 15 * vg.Centimeter
	plotHeight = 6 * vg.Centimeter
	samples    = 800
)

// curve is a state over time.
type curve struct {
	name     string
	points   plotter.XYs
	variable string
}

// sample evaluates a state over the window: evenly, and more densely where the
// fastest mode dies out. Every value is enclosed to plotting accuracy.
func sample(ctx context.Context, name string, f expr.Function, w window) (curve, error) {
	var shares []*big.Rat
	for i := range samples + 1 {
		shares = append(shares, big.NewRat(int64(i), samples))
	}
	length := new(big.Rat).Sub(w.to, w.from)
	if l, _ := length.Float64(); w.fastest > 0 && 6*w.fastest < l/4 {
		for i := 1; i <= samples/4; i++ {
			if s := new(big.Rat).SetFloat64(6 * w.fastest / l * float64(i) / (samples / 4)); s != nil {
				shares = append(shares, s)
			}
		}
	}
	sort.Slice(shares, func(i, j int) bool { return shares[i].Cmp(shares[j]) < 0 })
	c := curve{name: name, variable: f.Variable()}
	for _, s := range shares {
		t := w.at(s)
		x, _ := t.Float64()
		y, err := valueForPlot(ctx, f, t)
		if err != nil {
			return c, err
		}
		if math.IsInf(y, 0) || math.Abs(y) > 1e300 {
			return c, expr.Errorf(expr.LimitExceeded, expr.Pos{}, "at %s = %s the values are too large for a plot; choose an earlier -to", f.Variable(), timeText(t))
		}
		c.points = append(c.points, plotter.XY{X: x, Y: y})
	}
	return c, nil
}

// valueForPlot returns f(t) to nine digits, or to 2^-60 if it is near zero.
func valueForPlot(ctx context.Context, f expr.Function, t *big.Rat) (float64, error) {
	for prec := uint(96); ; prec *= 2 {
		b, err := f.Enclose(ctx, t, prec)
		if err != nil {
			return 0, err
		}
		rad, _ := b.Rad().Float64()
		if b.RelPrec() >= 30 || rad < 0x1p-60 || prec > 1<<14 {
			y, _ := b.Mid().Float64()
			return y, nil
		}
	}
}

// plot returns the plot of a curve.
func (c curve) plot(label string) (*plot.Plot, error) {
	p := plot.New()
	p.X.Label.Text = c.variable
	p.Y.Label.Text = label
	for _, axis := range []*plot.Axis{&p.X, &p.Y} {
		axis.Label.TextStyle.Font.Size = 10
		axis.Tick.Label.Font.Size = 9
	}
	p.X.Tick.Label.YAlign = draw.YTop
	grid := plotter.NewGrid()
	grid.Vertical.Color = color.Gray{225}
	grid.Horizontal.Color = color.Gray{225}
	line, err := plotter.NewLine(c.points)
	if err != nil {
		return nil, err
	}
	line.Width = vg.Points(1.1)
	line.Color = color.RGBA{R: 20, G: 60, B: 110, A: 255}
	p.Add(grid, line)
	// A state that is constant, but for rounding, gets a band to lie in.
	low, high := p.Y.Min, p.Y.Max
	if high-low <= 1e-9*math.Max(math.Abs(low), math.Abs(high)) || high == low {
		half := math.Max(1, math.Abs(low)/10)
		p.Y.Min, p.Y.Max = low-half, high+half
	}
	margin := (p.Y.Max - p.Y.Min) / 25
	p.Y.Min, p.Y.Max = p.Y.Min-margin, p.Y.Max+margin
	return p, nil
}

// svg returns the plot as an svg element.
func (c curve) svg() (string, error) {
	p, err := c.plot(c.name)
	if err != nil {
		return "", err
	}
	canvas := vgsvg.New(plotWidth, plotHeight)
	p.Draw(draw.New(canvas))
	var b bytes.Buffer
	if _, err := canvas.WriteTo(&b); err != nil {
		return "", err
	}
	// The declarations before the element have no place inside a document.
	s := b.String()
	return s[strings.Index(s, "<svg"):], nil
}

// pdf returns the plot as a PDF file. Its font has the letters of Western
// languages only: other names are written as the number of the state, and
// the caption has the name.
func (c curve) pdf(number int) ([]byte, error) {
	label := c.name
	for _, r := range c.name {
		if r > 0x7e {
			label = fmt.Sprintf("state %d", number)
		}
	}
	c.variable = strings.Map(func(r rune) rune {
		if r > 0x7e {
			return '?'
		}
		return r
	}, c.variable)
	p, err := c.plot(label)
	if err != nil {
		return nil, err
	}
	canvas := vgpdf.New(plotWidth, plotHeight)
	p.Draw(draw.New(canvas))
	var b bytes.Buffer
	_, err = canvas.WriteTo(&b)
	return b.Bytes(), err
}
