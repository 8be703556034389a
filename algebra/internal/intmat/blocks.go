package intmat

import "math/big"

// diagonalBlocks returns the index sets of the strongly connected components
// of the graph with an arc i -> j for every nonzero entry in row i, column j.
// Listing the components in order makes the matrix block triangular under a
// simultaneous permutation of rows and columns, so determinant and
// characteristic polynomial are products over the blocks. The cost is O(n^2).
//
// Source: R. Tarjan, Depth-first search and linear graph algorithms,
// section 4.
func diagonalBlocks(a [][]*big.Int) [][]int {
	n := len(a)
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
				if w == v || a[v][w].Sign() == 0 {
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
				blocks = append(blocks, block)
			}
		}
	}
	return blocks
}
