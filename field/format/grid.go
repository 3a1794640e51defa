package format

import (
	"shearprint/field"
	"shearprint/field/r3"
)

// addCells makes the quadrilaterals of a grid of n by rows points, two triangles each.
func addCells(raw *field.Raw, n, rows int, at func(i, j int) int32) {
	raw.Tris = make([][3]int32, 0, 2*(n-1)*(rows-1))
	raw.Face = make([]int32, 0, cap(raw.Tris))
	cell := 0
	for j := range rows - 1 {
		for i := range n - 1 {
			q := [4]int32{at(i, j), at(i+1, j), at(i+1, j+1), at(i, j+1)}
			if q[0] >= 0 && q[1] >= 0 && q[2] >= 0 && q[3] >= 0 {
				raw.Tris = append(raw.Tris, [3]int32{q[0], q[1], q[2]}, [3]int32{q[0], q[2], q[3]})
				raw.Face = append(raw.Face, int32(cell), int32(cell))
				cell++
			}
		}
	}
}

// gridAxes returns the two of the numbers i, j and k that vary; i and j where that does not decide. A column k that
// holds no grid numbers (it may be the turbulent energy) does not count.
func (t *tableReader) gridAxes() [2][]float64 {
	var vary [][]float64
	for _, g := range t.grid {
		constant, whole := true, true
		for _, x := range g {
			constant = constant && x == g[0]
			whole = whole && x == float64(int64(x))
		}
		if !constant && whole {
			vary = append(vary, g)
		}
	}
	if len(vary) == 2 {
		return [2][]float64{vary[0], vary[1]}
	}
	return [2][]float64{t.grid[0], t.grid[1]}
}

// connectIndices makes the cells of a grid whose rows carry their numbers i and j, in any order; cells that lack a
// corner are holes.
func (t *tableReader) connectIndices() error {
	raw := &t.raw
	axes := t.gridAxes()
	lo, hi := [2]float64{}, [2]float64{}
	for k, g := range axes {
		lo[k], hi[k] = g[0], g[0]
		for row, x := range g {
			if x != float64(int64(x)) {
				return t.fail("header", "rename the columns if they are something else",
					"columns i and j are to number a grid, but row %d has %g", row+1, x)
			}
			lo[k], hi[k] = min(lo[k], x), max(hi[k], x)
		}
	}
	n, rows := hi[0]-lo[0]+1, hi[1]-lo[1]+1
	// A grid that is mostly empty would take memory that no row of the file accounts for.
	const sparsest = 4
	if n < 2 || rows < 2 || float64(n*rows) > float64(sparsest*float64(len(raw.Points)))+1000 {
		return t.fail("header", "rename the columns if they are something else",
			"columns i and j would make a grid of %.0f by %.0f points of %d rows", n, rows, len(raw.Points))
	}
	number := make([]int32, int(n*rows))
	for k := range number {
		number[k] = -1
	}
	twice := 0
	for row := range raw.Points {
		k := int(axes[0][row]-lo[0]) + int(n)*int(axes[1][row]-lo[1])
		if number[k] >= 0 {
			twice++
		}
		number[k] = int32(row)
	}
	if twice > 0 {
		return t.fail("header", "export one zone a file", "%d rows repeat the numbers i and j of others", twice)
	}
	w := int(n)
	addCells(raw, w, int(rows), func(i, j int) int32 { return number[j*w+i] })
	if len(raw.Tris) == 0 {
		return t.fail("header", "give the geometry with --surface", "the grid of i and j has no whole cell")
	}
	note(raw, field.Note, "structured", len(raw.Points), "",
		"columns i and j make a grid of %d by %d points; its cells are the faces",
		w, int(rows))
	return nil
}

// jumpRatio is how much longer than its neighbours a step must be to be the way back to the start of a row.
const jumpRatio = 2

// rowLength finds the length of the rows of a structured grid whose points come row after row: at the end of each row,
// and nowhere else, the step to the next point is a jump. It returns 0 where the points are not such a grid.
func rowLength(points []r3.Vec) int {
	total := len(points)
	step := func(i int) float64 { return points[i+1].Sub(points[i]).Norm() }
	jump := func(i int) bool {
		d := step(i)
		return d > float64(jumpRatio*step(i-1)) && (i+2 >= total || d > float64(jumpRatio*step(i+1)))
	}
	n := 0
	for i := 1; i+1 < total; i++ {
		if jump(i) {
			n = i + 1
			break
		}
	}
	const shortest = 3
	if n < shortest || total%n != 0 || total/n < 2 {
		return 0
	}
	for i := 1; i+1 < total; i++ {
		if jump(i) != ((i+1)%n == 0) {
			return 0
		}
	}
	if !smoothCells(points, n) {
		return 0
	}
	return n
}

// smoothCells tells whether the cells of a grid make a surface: neighbours do not face away from one another, and no
// more than some are without area, as at a pole.
func smoothCells(points []r3.Vec, n int) bool {
	rows := len(points) / n
	normal := func(i, j int) r3.Vec {
		k := j*n + i
		return points[k+n+1].Sub(points[k]).Cross(points[k+n].Sub(points[k+1]))
	}
	flat := 0
	for j := range rows - 1 {
		for i := range n - 1 {
			c := normal(i, j)
			if c == (r3.Vec{}) {
				flat++
			}
			if i+2 < n && c.Dot(normal(i+1, j)) < 0 || j+2 < rows && c.Dot(normal(i, j+1)) < 0 {
				return false
			}
		}
	}
	const mostFlat = 4 // one cell in four
	return mostFlat*flat <= (n-1)*(rows-1)
}
