package expr

import "strings"

// Matrix is a matrix of expressions, row by row, all rows of one length; a
// matrix with one column stands for a vector. It is for display: the text form
// "[a, b; c, d]" is not read by Parse, and no function has matrix values.
type Matrix struct {
	place
	Rows [][]Node
}

// Mat returns the m x n matrix with the entry f(i, j) in row i, column j,
// counted from 0.
func Mat(m, n int, f func(i, j int) Node) Node {
	rows := make([][]Node, m)
	for i := range rows {
		rows[i] = make([]Node, n)
		for j := range rows[i] {
			rows[i][j] = f(i, j)
		}
	}
	return Matrix{Rows: rows}
}

// Col returns the column of the given entries.
func Col(entries ...Node) Node {
	return Mat(len(entries), 1, func(i, _ int) Node { return entries[i] })
}

// String writes the rows one after another: "[a, b; c, d]".
func (n Matrix) String() string { return write(n, text{}).text }

// writeMatrix writes the entries, each standing alone in its cell.
func writeMatrix(n Matrix, w notation) piece {
	cells := make([][]string, len(n.Rows))
	for i, row := range n.Rows {
		cells[i] = make([]string, len(row))
		for j, x := range row {
			cells[i][j] = write(x, w).text
		}
	}
	return piece{w.matrix(cells), precAtom}
}

func joinCells(cells [][]string, cell, row string) string {
	rows := make([]string, len(cells))
	for i := range cells {
		rows[i] = strings.Join(cells[i], cell)
	}
	return strings.Join(rows, row)
}

func (text) matrix(cells [][]string) string { return "[" + joinCells(cells, ", ", "; ") + "]" }

// mostMatrixColumns is what the matrix environments of amsmath hold unless told
// otherwise.
const mostMatrixColumns = 10

func (latex) matrix(cells [][]string) string {
	row := ` \\ `
	if body := joinCells(cells, "", ""); strings.Contains(body, `\frac`) {
		row = ` \\[2pt] ` // fractions are higher than a line
	}
	body := joinCells(cells, " & ", row)
	if len(cells) > 0 && len(cells[0]) > mostMatrixColumns {
		return `\left(\begin{array}{` + strings.Repeat("c", len(cells[0])) + "} " + body + ` \end{array}\right)`
	}
	return `\begin{pmatrix} ` + body + ` \end{pmatrix}`
}

func (m mathml) matrix(cells [][]string) string {
	var b strings.Builder
	b.WriteString("<mtable>")
	for _, row := range cells {
		b.WriteString("<mtr>")
		for _, c := range row {
			b.WriteString("<mtd>" + mrow(c) + "</mtd>")
		}
		b.WriteString("</mtr>")
	}
	b.WriteString("</mtable>")
	return m.paren(b.String())
}

// MathMLEquation writes an equation as a displayed math element of MathML Core.
func MathMLEquation(e Equation) string {
	return `<math xmlns="http://www.w3.org/1998/Math/MathML" display="block">` +
		mrow(write(e.Left, mathml{}).text, "<mo>=</mo>", write(e.Right, mathml{}).text) + "</math>"
}
