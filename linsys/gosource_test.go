package linsys_test

import (
	"context"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"example.org/closedform/linsys"
)

// TestGoSourceWarnsOfCancellation: three rates that differ by 1e-10 need
// coefficients of 1e20 for values of order 1.
func TestGoSourceWarnsOfCancellation(t *testing.T) {
	r, err := respond("x' = -x; y' = x - 1.0000000001*y; z' = y - 1.0000000002*z; x(0) = 1; y(0) = 0; z(0) = 0")
	require.NoError(t, err)
	src, err := r.GoSource(context.Background(), linsys.GoOptions{})
	require.NoError(t, err)
	assert.Contains(t, string(src), "// Cancellation: the terms of Z add up to 2.0e+20 in size")
	assert.NotContains(t, string(src), "the terms of X")

	r, err = respond("x' = -x + y; y' = -3*y; x(0) = 1; y(0) = 2")
	require.NoError(t, err)
	src, err = r.GoSource(context.Background(), linsys.GoOptions{})
	require.NoError(t, err)
	assert.NotContains(t, string(src), "Cancellation")
}
