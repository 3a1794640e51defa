package format

import "slices"

// cgnsArray is an array of a zone whose numbers have not been read yet.
type cgnsArray struct {
	node  *cgnsNode
	count int
	faces *cgnsFaces // whose numbers they are; nil for those of all faces or points in their order
}

// cgnsValues are the names of a zone's arrays, at its points or at its faces, and under each name the arrays that have
// it: those of several boundary conditions.
type cgnsValues struct {
	names  []string
	arrays [][]cgnsArray
}

// values finds the solutions and boundary data of a zone and tells which arrays are tau, p and cp. Face values win over
// point values. The columns have no tau where the zone has none.
func (r *cgnsReader) values(z *cgnsZone) (*cgnsValues, columns, error) {
	points, faces := &cgnsValues{}, &cgnsValues{}
	solutions, err := r.labelled(z.node, "FlowSolution_t")
	if err != nil {
		return nil, columns{}, err
	}
	for _, s := range solutions {
		where, err := r.text(s, "GridLocation")
		if err != nil {
			return nil, columns{}, err
		}
		switch {
		case where == "" || where == "Vertex":
			err = r.arrays(s, z.points(), nil, points)
		case (where == "CellCenter" || where == "FaceCenter") && !z.volume:
			err = r.arrays(s, z.cellCount(), nil, faces)
		}
		if err != nil {
			return nil, columns{}, err
		}
	}
	if err := r.boundary(z, faces); err != nil {
		return nil, columns{}, err
	}
	c := matchColumns(r.source, faces.names, r.opt)
	if c.tau[0] >= 0 {
		return faces, c, r.settle(z, c, true)
	}
	c = matchColumns(r.source, points.names, r.opt)
	if c.tau[0] >= 0 {
		return points, c, r.settle(z, c, false)
	}
	return nil, c, nil
}

// settle keeps how the names of the first zone with values were understood; other zones must have the same at the same
// places. What came before without values is left out.
func (r *cgnsReader) settle(z *cgnsZone, c columns, atFaces bool) error {
	if !r.matched {
		r.match, r.atFaces, r.matched = c, atFaces, true
		r.raw.Points, r.raw.Tris, r.raw.Face, r.zones, r.volumes = nil, nil, nil, 0, 0
		return nil
	}
	if atFaces != r.atFaces {
		return r.fail(z.place, "write all zones alike", "some zones have their values at points, others at faces")
	}
	if c.coefficient != r.match.coefficient {
		return r.fail(z.place, "write all zones alike, or name the array with --tau",
			"some zones have the wall shear stress, others its coefficient")
	}
	return nil
}

// arrays adds the arrays below a node.
func (r *cgnsReader) arrays(n *cgnsNode, count int, faces *cgnsFaces, into *cgnsValues) error {
	list, err := r.labelled(n, "DataArray_t")
	if err != nil {
		return err
	}
	for _, a := range list {
		k := slices.Index(into.names, a.name)
		if k < 0 {
			if k = len(into.names); k >= maxColumns {
				return r.fail(quote(n.name), "export what is needed", "there are more than %d arrays", maxColumns)
			}
			into.names, into.arrays = append(into.names, a.name), append(into.arrays, nil)
		}
		into.arrays[k] = append(into.arrays[k], cgnsArray{a, count, faces})
	}
	return nil
}

// fill hands out the numbers of a column: to the zone's points, or to each triangle of its faces.
func (r *cgnsReader) fill(z *cgnsZone, v *cgnsValues, col int, set func(i int, x float64)) error {
	whole := 0
	for _, a := range v.arrays[col] {
		got, err := r.numbers(a, z.place)
		if err != nil {
			return err
		}
		switch {
		case a.faces != nil:
			for k := range a.count {
				z.put(a.faces.element(k), got.Float(min(k, got.Count()-1)), set)
			}
		case r.atFaces:
			for i := range min(got.Count(), len(z.ends)) {
				z.putFace(i, got.Float(i), set)
			}
			whole++
		default:
			for i := range got.Count() {
				if k := z.point(i); k >= 0 {
					set(k, got.Float(i))
				}
			}
			whole++
		}
	}
	if whole > 1 {
		r.repeated = v.names[col]
	}
	return nil
}

// put hands a number to the triangles of the face that the element is.
func (z *cgnsZone) put(element int64, x float64, set func(i int, x float64)) {
	if i := z.faceOf(element); i >= 0 {
		z.putFace(i, x, set)
	}
}

// putFace hands a number to the triangles of face i.
func (z *cgnsZone) putFace(i int, x float64, set func(i int, x float64)) {
	for t := z.start(i) - 2*i; t < int(z.ends[i])-2*(i+1); t++ {
		set(t, x)
	}
}
