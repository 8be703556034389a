package main

import (
	"context"
	"os"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// TestDetails runs every operation once on small inputs whose answers are known
// by hand.
func TestDetails(t *testing.T) {
	tests := []struct{ op, name, data, want string }{
		// [[2, 1], [1, 2]] has the eigenvalues 1 and 3.
		{"charpoly", "a.mat", "2 2\n2 1\n1 2\n", "deg:2,bits:3"},
		{"minpoly", "a.mat", "2 2\n2 0\n0 2\n", "deg:1,bits:2"},
		{"det", "a.mat", "2 2\n2 1\n1 2\n", "bits:2"},
		{"inv", "a.mat", "2 2\n2 1\n1 2\n", "ok:1,denbits:2,bits:2"},
		// 2 x = -9, 3 y = -2
		{"solve_dixon", "a.mat", "2 2\n2 0\n0 3\n", "ok:1,denbits:2"},
		{"solve", "a.mat", "2 2\n0 1\n-1 0\n", "deg:2,factors:1,real:0,proven:1"},
		// (s - 1)^2 (s^2 + 1)
		{"factor", "a.poly", "4 1 -2 2 -2 1\n", "factors:2:2^1,1^2"},
		{"sqfree", "a.poly", "4 1 -2 2 -2 1\n", "factors:2:2^1,1^2"},
		{"roots", "a.poly", "4 1 -2 2 -2 1\n", "roots:3,real:1"},
		// gcd((s - 1)(s + 2), (s - 1)(s + 3)), and a square
		{"gcd", "a.pair", "2 -2 1 1\n2 -3 2 1\n", "deg:1,bits:1"},
		{"mul", "mul.pair", "1 1 1\n1 1 1\n", "deg:2,bits:2"},
	}
	for _, tt := range tests {
		t.Run(tt.op, func(t *testing.T) {
			require.Contains(t, operationsOn(tt.name), tt.op)
			run, err := operations[tt.op](context.Background(), []byte(tt.data))
			require.NoError(t, err)
			describe, err := run()
			require.NoError(t, err)
			assert.Equal(t, tt.want, describe())
		})
	}
}

func TestBadInput(t *testing.T) {
	file := filepath.Join(t.TempDir(), "a.mat")
	require.NoError(t, os.WriteFile(file, []byte("2 2\n1 x"), 0o600))
	assert.ErrorContains(t, one("det", file), "not an integer")
	assert.ErrorContains(t, one("factor", file), "no operation")
	assert.Error(t, one("det", file+".missing.mat"))
	require.NoError(t, os.WriteFile(file, []byte("99999999 99999999"), 0o600))
	assert.Error(t, one("det", file))
}
