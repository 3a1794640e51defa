package format

// addTriangles adds the triangles of a primitive; its points begin at base.
func (r *gltfReader) addTriangles(p placed, base, end int) error {
	n := end - base
	var index accessor
	if p.prim.Indices != nil {
		var err error
		if index, err = r.accessor(*p.prim.Indices, "indices"); err != nil {
			return err
		}
		if index.width != 1 || index.typ != 5121 && index.typ != 5123 && index.typ != 5125 {
			return r.fail(p.place, "export again", "its indices are not whole numbers")
		}
		n = index.count
	}
	mode := 4
	if p.prim.Mode != nil {
		mode = *p.prim.Mode
	}
	count := n / 3
	if mode != 4 {
		count = max(0, n-2)
	}
	if count > r.maxElements()-len(r.raw.Tris) {
		return r.fail(p.place, "export each mesh once", "repeated meshes grow to more than %d triangles", r.maxElements())
	}
	if mode == 4 && n%3 != 0 {
		return r.fail(p.place, "export again", "%d corners make no whole number of triangles", n)
	}
	if mode == 4 && p.prim.Indices != nil && index.typ == 5125 && index.data != nil && index.sparse == nil &&
		p.m.det() > 0 {
		return r.plainTriangles(&index, p, base, end-base)
	}
	corner, err := r.corners(index, p, base, n, end-base)
	if err != nil {
		return err
	}
	first := len(r.raw.Tris)
	r.raw.Tris = grow(r.raw.Tris, count)
	mirrored := p.m.det() < 0
	for t, out := 0, r.raw.Tris[first:]; t < count; t++ {
		var v [3]int32
		switch {
		case mode == 4:
			v = [3]int32{corner[3*t], corner[3*t+1], corner[3*t+2]}
		case mode == 5 && t%2 == 0:
			v = [3]int32{corner[t], corner[t+1], corner[t+2]}
		case mode == 5:
			v = [3]int32{corner[t], corner[t+2], corner[t+1]}
		default:
			v = [3]int32{corner[t+1], corner[t+2], corner[0]}
		}
		if mirrored {
			v[1], v[2] = v[2], v[1]
		}
		out[t] = v
	}
	return nil
}

// corners returns the indices, checked against the number of points; without an index accessor, the points in order.
func (r *gltfReader) corners(a accessor, p placed, base, n, points int) ([]int32, error) {
	out := make([]int32, n)
	if p.prim.Indices == nil {
		for i := range out {
			out[i] = int32(base + i)
		}
		return out, nil
	}
	bad := -1
	a.column(0, func(i int, x float64) {
		if !(x < float64(points)) {
			bad = i
			return
		}
		out[i] = int32(base + int(x))
	})
	if bad >= 0 {
		return nil, r.badIndex(p, bad, points)
	}
	return out, nil
}

// plainTriangles is addTriangles for the usual case: triangles by 32-bit indices.
func (r *gltfReader) plainTriangles(a *accessor, p placed, base, points int) error {
	first := len(r.raw.Tris)
	r.raw.Tris = grow(r.raw.Tris, a.count/3)
	out := r.raw.Tris[first:]
	for i := range a.count {
		v := little.Uint32(a.data[i*a.stride:])
		if int64(v) >= int64(points) {
			return r.badIndex(p, i, points)
		}
		out[i/3][i%3] = int32(base + int(v))
	}
	return nil
}

func (r *gltfReader) badIndex(p placed, i, points int) error {
	return r.fail(p.place, "export again", "index %d names a point beyond the %d that there are", i, points)
}
