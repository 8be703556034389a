package intmat

import (
	"math/bits"
	"slices"
)

// diagonalBlocks returns the index sets of the strongly connected components
// of the graph with an arc i -> j for every nonzero entry in row i, column j.
// Listing the components in order makes the matrix block triangular under a
// simultaneous permutation of rows and columns, so determinant and
// characteristic polynomial are products over the blocks. Every set is in
// increasing order, which keeps a banded block banded. The cost is O(n^2).
//
// Source: R. Tarjan, Depth-first search and linear graph algorithms,
// section 4.
func diagonalBlocks(a *square) [][]int {
	n := a.n
	if n > 0 && n <= 64 && connected(a) {
		all := make([]int, n)
		for i := range all {
			all[i] = i
		}
		return [][]int{all}
	}
	index, low := make([]int, n), make([]int, n) // index 0: not visited yet
	onStack := make([]bool, n)
	next := make([]int, n) // next column to look at
	var stack, path []int
	var blocks [][]int
	visited := 0
	for root := range n {
		if index[root] != 0 {
			continue
		}
		path = append(path, root)
		for len(path) > 0 {
			v := path[len(path)-1]
			if index[v] == 0 {
				visited++
				index[v], low[v] = visited, visited
				stack, onStack[v] = append(stack, v), true
			}
			descended := false
			for next[v] < n {
				w := next[v]
				next[v]++
				if w == v || a.isZero(v, w) {
					continue
				}
				if index[w] == 0 {
					path = append(path, w)
					descended = true
					break
				}
				if onStack[w] {
					low[v] = min(low[v], index[w])
				}
			}
			if descended {
				continue
			}
			path = path[:len(path)-1]
			if len(path) > 0 {
				u := path[len(path)-1]
				low[u] = min(low[u], low[v])
			}
			if low[v] == index[v] {
				var block []int
				for {
					w := stack[len(stack)-1]
					stack, onStack[w] = stack[:len(stack)-1], false
					block = append(block, w)
					if w == v {
						break
					}
				}
				slices.Sort(block)
				blocks = append(blocks, block)
			}
		}
	}
	return blocks
}

// connected tells whether the graph of [diagonalBlocks] is strongly
// connected, for at most 64 vertices: whether all can be reached from vertex
// 0, and vertex 0 from all. Sets of vertices are words.
func connected(a *square) bool {
	var out, in [64]uint64
	for i := range a.n {
		for j := range a.n {
			if !a.isZero(i, j) {
				out[i] |= 1 << j
				in[j] |= 1 << i
			}
		}
	}
	all := ^uint64(0) >> (64 - a.n)
	return closure(&out) == all && closure(&in) == all
}

// closure returns the vertices that can be reached from vertex 0.
func closure(arcs *[64]uint64) uint64 {
	seen, fresh := uint64(1), uint64(1)
	for fresh != 0 {
		v := bits.TrailingZeros64(fresh)
		fresh &= fresh - 1
		fresh |= arcs[v] &^ seen
		seen |= arcs[v]
	}
	return seen
}
