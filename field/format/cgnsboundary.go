package format

// boundary reads the data sets of boundary conditions on faces.
func (r *cgnsReader) boundary(z *cgnsZone, into *cgnsValues) error {
	groups, err := r.labelled(z.node, "ZoneBC_t")
	if err != nil {
		return err
	}
	for _, g := range groups {
		conditions, err := r.labelled(g, "BC_t")
		if err != nil {
			return err
		}
		for _, bc := range conditions {
			if err := r.condition(z, bc, into); err != nil {
				return err
			}
		}
	}
	return nil
}

// condition finds the data sets of one boundary condition. Their arrays have one number per face of the condition, or a
// single one for all.
func (r *cgnsReader) condition(z *cgnsZone, bc *cgnsNode, into *cgnsValues) error {
	sets, err := r.labelled(bc, "BCDataSet_t")
	if err != nil {
		return err
	}
	for _, set := range sets {
		where, err := r.text(set, "GridLocation")
		if err != nil {
			return err
		}
		if where == "" {
			if where, err = r.text(bc, "GridLocation"); err != nil {
				return err
			}
		}
		if where != "FaceCenter" && where != "CellCenter" {
			continue
		}
		faces, err := r.pointList(z, set)
		if err == nil && faces == nil {
			faces, err = r.pointList(z, bc)
		}
		if err != nil {
			return err
		}
		if faces == nil {
			continue
		}
		data, err := r.labelled(set, "BCData_t")
		if err != nil {
			return err
		}
		for _, d := range append(data[:len(data):len(data)], set) {
			if err := r.arrays(d, faces.count, faces, into); err != nil {
				return err
			}
		}
	}
	return nil
}

// cgnsFaces are the elements of a condition: listed, or a range from first on.
type cgnsFaces struct {
	list  cgnsInts
	first int64
	count int
}

func (f *cgnsFaces) element(k int) int64 {
	if f.list.len() > 0 {
		return f.list.at(k)
	}
	return f.first + int64(k)
}

// pointList returns the elements of a condition; nil if it has none that are numbered.
func (r *cgnsReader) pointList(z *cgnsZone, n *cgnsNode) (*cgnsFaces, error) {
	for _, name := range []string{"PointList", "ElementList", "PointRange", "ElementRange"} {
		c, err := r.child(n, name)
		if err != nil {
			return nil, err
		}
		if c == nil {
			continue
		}
		list, err := r.ints(c)
		if err != nil {
			return nil, err
		}
		if name == "PointList" || name == "ElementList" {
			return &cgnsFaces{list: list, count: list.len()}, r.spend(elementBytes*list.len(), z.place)
		}
		if list.len() != 2 { // a range of a structured zone
			return nil, nil
		}
		first, last := list.at(0), list.at(1)
		if first < 1 || last < first || last-first >= maxPoints {
			return nil, r.fail(z.place+", condition "+quote(n.name), cgnsRemedy, "the range from %d to %d makes no sense",
				first, last)
		}
		count := int(last-first) + 1
		return &cgnsFaces{first: first, count: count}, r.spend(elementBytes*count, z.place)
	}
	return nil, nil
}
