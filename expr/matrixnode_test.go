package expr_test

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/expr"
)

func TestMatrix(t *testing.T) {
	m := expr.Mat(2, 2, func(i, j int) expr.Node { return expr.Add(expr.Sym("a_1"), expr.Int(int64(2*i+j))) })
	assert.Equal(t, "[a_1, a_1 + 1; a_1 + 2, a_1 + 3]", m.String())
	assert.Equal(t, "2*[x; y]", expr.Mul(expr.Int(2), expr.Col(expr.Sym("x"), expr.Sym("y"))).String())
	assert.Equal(t, `\begin{pmatrix} x \\ -1 \end{pmatrix}`, expr.LaTeX(expr.Col(expr.Sym("x"), expr.Int(-1))))
	assert.Equal(t, []string{"a_1"}, expr.Names(m))
	assert.Contains(t, expr.MathML(m), "<mtable><mtr><mtd>")
	// pmatrix holds ten columns.
	wide := expr.LaTeX(expr.Mat(1, 11, func(_, j int) expr.Node { return expr.Int(int64(j)) }))
	assert.True(t, strings.HasPrefix(wide, `\left(\begin{array}{ccccccccccc} 0 & 1`), wide)
	// A matrix is no function.
	_, err := expr.FunctionOf(m, "t", expr.Limits{})
	var e *expr.Error
	require.ErrorAs(t, err, &e)
	assert.Equal(t, expr.OutsideClass, e.Kind)
	calls := 0
	expr.Children(m, func(expr.Node) bool { calls++; return calls < 3 })
	assert.Equal(t, 3, calls)
}
