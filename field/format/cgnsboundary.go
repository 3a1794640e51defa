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

// condition reads the data sets of one boundary condition. Their arrays have one number per face of the condition.
func (r *cgnsReader) condition(z *cgnsZone, bc *cgnsNode, into *cgnsValues) error {
	sets, err := r.labelled(bc, "BCDataSet_t")
	if err != nil || len(sets) == 0 {
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
		list, err := r.pointList(set)
		if err == nil && list == nil {
			list, err = r.pointList(bc)
		}
		if err != nil || list == nil {
			return err
		}
		index := z.indexIn(list)
		data, err := r.labelled(set, "BCData_t")
		if err != nil {
			return err
		}
		for _, d := range append(data, set) {
			if err := r.merge(d, z, len(list), index, into); err != nil {
				return err
			}
		}
	}
	return nil
}

// merge adds arrays of one boundary condition to columns that others may have begun.
func (r *cgnsReader) merge(n *cgnsNode, z *cgnsZone, want int, index []int, into *cgnsValues) error {
	more := &cgnsValues{}
	if err := r.arrays(n, z, want, index, more); err != nil {
		return err
	}
	for k, name := range more.names {
		fresh := more.columns[k]
		found := false
		for j, have := range into.names {
			if have == name {
				old := into.columns[j]
				into.columns[j] = func(i int) float64 {
					if x := fresh(i); x == x {
						return x
					}
					return old(i)
				}
				found = true
			}
		}
		if !found {
			into.names, into.columns = append(into.names, name), append(into.columns, fresh)
		}
	}
	return nil
}

// pointList returns the element numbers of a condition, listed or as a range; nil if it has none.
func (r *cgnsReader) pointList(n *cgnsNode) ([]int64, error) {
	for _, name := range []string{"PointList", "ElementList"} {
		c, err := r.child(n, name)
		if err != nil {
			return nil, err
		}
		if c != nil {
			return r.ints(c)
		}
	}
	for _, name := range []string{"PointRange", "ElementRange"} {
		c, err := r.child(n, name)
		if err != nil {
			return nil, err
		}
		if c == nil {
			continue
		}
		ends, err := r.ints(c)
		if err != nil || len(ends) != 2 || ends[1] < ends[0] || ends[1]-ends[0] > maxTriangles {
			return nil, err
		}
		var list []int64
		for e := ends[0]; e <= ends[1]; e++ {
			list = append(list, e)
		}
		return list, nil
	}
	return nil, nil
}

// indexIn returns, per face, its place in a list of element numbers; -1 where it is not in it.
func (z *cgnsZone) indexIn(list []int64) []int {
	at := make(map[int64]int, len(list))
	for i, e := range list {
		at[e] = i
	}
	index := make([]int, len(z.number))
	for i, e := range z.number {
		k, ok := at[e]
		if !ok {
			k = -1
		}
		index[i] = k
	}
	return index
}
