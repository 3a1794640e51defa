package format

import "shearprint/field"

// connect gives values without triangles their surface: opt.Surface if there is one, else the grid that the table's own
// numbers i and j or the order of its rows tell, else, for nearly planar points, the Delaunay triangles.
func (t *tableReader) connect(opt Options) (field.Raw, error) {
	raw := &t.raw
	t.dropPlaceless()
	switch {
	case len(raw.Points) == 0:
		return *raw, t.fail("", "check the export", "no row of the table has a position")
	case opt.Surface != nil:
		return *raw, nil // attach does it, as for every kind of file
	case t.grid[0] != nil:
		return *raw, t.connectIndices()
	}
	if n := rowLength(raw.Points); n > 0 {
		rows := len(raw.Points) / n
		note(raw, field.Note, "structured", n*rows, "", "the rows form a grid of %d by %d points; its cells are the faces",
			n, rows)
		addCells(raw, n, rows, func(i, j int) int32 { return int32(j*n + i) })
		return *raw, nil
	}
	return *raw, triangulate(t.source, raw)
}

// dropPlaceless drops rows without a finite position: empty lines of spreadsheets, mostly.
func (t *tableReader) dropPlaceless() {
	raw := &t.raw
	n := 0
	first := -1
	for i, p := range raw.Points {
		if !p.Finite() {
			if first < 0 {
				first = i
			}
			continue
		}
		raw.Points[n] = p
		moveRow(raw, n, i)
		for _, g := range t.grid {
			if g != nil {
				g[n] = g[i]
			}
		}
		n++
	}
	if first < 0 {
		return
	}
	note(raw, field.Doubtful, "rows-without-place", len(raw.Points)-n, "",
		"%d rows have no position and were left out; the first is row %d",
		len(raw.Points)-n, first+1)
	t.cut(n)
}

// moveRow copies the values of row i to row n.
func moveRow(raw *field.Raw, n, i int) {
	if raw.Tau != nil {
		raw.Tau[n] = raw.Tau[i]
	}
	if raw.P != nil {
		raw.P[n] = raw.P[i]
	}
	if raw.Cp != nil {
		raw.Cp[n] = raw.Cp[i]
	}
}
