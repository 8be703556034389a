package algebra_test

import (
	"testing"

	"github.com/stretchr/testify/assert"

	"example.org/closedform/algebra"
)

func TestShapeErrorText(t *testing.T) {
	var err error = algebra.ShapeError{Op: "product", R1: 2, C1: 3, R2: 4, C2: 1}
	assert.EqualError(t, err, "algebra: product of a 2 x 3 and a 4 x 1 matrix")
}
