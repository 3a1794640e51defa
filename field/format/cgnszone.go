package format

import (
	"shearprint/field/format/hdf5"
	"shearprint/field/r3"
)

// cgnsZone is a zone while it is read.
type cgnsZone struct {
	node       *cgnsNode
	place      string // for messages
	structured bool
	size       []int64 // vertices along each index, or the number of vertices
	cells      []int64 // cells along each index, or the number of cells
	volume     bool    // a zone of cells, whose boundary is meant

	faces  [][]int32 // corners, as vertex numbers of the zone from 0
	number []int64   // element number of each face, from 1
}

func (r *cgnsReader) readZone(n *cgnsNode) error {
	z := &cgnsZone{node: n, place: "zone " + quote(n.name), volume: r.cellDim == 3}
	if err := r.zoneSize(z); err != nil {
		return err
	}
	points, err := r.coordinates(z)
	if err != nil {
		return err
	}
	if z.structured {
		err = r.patch(z)
	} else {
		err = r.elements(z)
	}
	if err != nil || len(z.faces) == 0 {
		return err
	}
	values, err := r.values(z)
	if err != nil {
		return err
	}
	if z.volume {
		r.sections++
	}
	return r.add(z, points, values)
}

func (r *cgnsReader) zoneSize(z *cgnsZone) error {
	kind, err := r.text(z.node, "ZoneType")
	if err != nil {
		return err
	}
	dims, err := r.ints(z.node)
	if err != nil {
		return err
	}
	k := 1
	if z.structured = kind == "Structured"; z.structured {
		k = r.cellDim
	} else if kind != "Unstructured" {
		return r.fail(z.place, cgnsRemedy, "its type %s is neither Structured nor Unstructured", quote(kind))
	}
	if len(dims) < 2*k {
		return r.fail(z.place, cgnsRemedy, "it does not tell its size")
	}
	z.size, z.cells = dims[:k], dims[k:2*k]
	count := int64(1)
	for _, d := range z.size {
		if d < 1 || d > maxPoints || count > maxPoints/d {
			return r.fail(z.place, cgnsRemedy, "a size of %d makes no sense", d)
		}
		count *= d
	}
	if z.structured && z.volume {
		return r.fail(z.place, "export the wall as a zone of two dimensions", "surfaces of structured volumes are not read")
	}
	return nil
}

// points returns the number of the zone's vertices.
func (z *cgnsZone) points() int {
	n := 1
	for _, d := range z.size {
		n *= int(d)
	}
	return n
}

// cellCount returns the number of the zone's cells.
func (z *cgnsZone) cellCount() int {
	n := 1
	for _, d := range z.cells {
		n *= int(max(d, 0))
	}
	return n
}

func (r *cgnsReader) coordinates(z *cgnsZone) ([]r3.Vec, error) {
	grids, err := r.labelled(z.node, "GridCoordinates_t")
	if err != nil {
		return nil, err
	}
	if len(grids) == 0 {
		return nil, r.fail(z.place, cgnsRemedy, "it has no coordinates")
	}
	points := make([]r3.Vec, 0)
	for k, name := range []string{"CoordinateX", "CoordinateY", "CoordinateZ"} {
		c, err := r.child(grids[0], name)
		if err != nil {
			return nil, err
		}
		if c == nil {
			if k == 2 { // a surface in the plane
				continue
			}
			return nil, r.fail(z.place, "write Cartesian coordinates", "it has no %s", name)
		}
		v, err := r.numbers(c, z.points(), z.place)
		if err != nil {
			return nil, err
		}
		if k == 0 {
			points = make([]r3.Vec, v.Count())
		}
		for i := range points {
			*[]*float64{&points[i].X, &points[i].Y, &points[i].Z}[k] = v.Float(i)
		}
	}
	return points, nil
}

// numbers reads an array that must have the given number of elements.
func (r *cgnsReader) numbers(n *cgnsNode, want int, place string) (*hdf5.Value, error) {
	v, err := r.value(n)
	if err != nil {
		return nil, err
	}
	got := 0
	if v != nil && v.Kind != hdf5.Text {
		got = v.Count()
	}
	if got != want {
		return nil, r.fail(place+", "+quote(n.name), "write it without rind planes, one number per point or face",
			"it has %d numbers where there should be %d", got, want)
	}
	return v, nil
}

// patch makes the faces of a structured surface; the first index runs fastest.
func (r *cgnsReader) patch(z *cgnsZone) error {
	ni, nj := int32(z.size[0]), int32(z.size[1])
	if int64(ni-1)*int64(nj-1) > maxTriangles {
		return r.tooLarge(z)
	}
	for j := range nj - 1 {
		for i := range ni - 1 {
			a := j*ni + i
			z.faces = append(z.faces, []int32{a, a + 1, a + 1 + ni, a + ni})
			z.number = append(z.number, int64(len(z.faces)))
		}
	}
	return nil
}

func (r *cgnsReader) tooLarge(z *cgnsZone) error {
	return r.fail(z.place, "split the run", "more than %d faces", maxTriangles)
}

// add joins the zone to the run.
func (r *cgnsReader) add(z *cgnsZone, points []r3.Vec, v *cgnsValues) error {
	raw := &r.raw
	if v == nil && r.matched {
		r.skipped = append(r.skipped, z.node.name)
		return nil
	}
	if v != nil && len(raw.Tris) > 0 && raw.Tau == nil && raw.FaceTau == nil {
		return r.fail(z.place, "write the wall shear stress of all zones, or drop those without it",
			"earlier zones have no wall shear stress")
	}
	if len(raw.Points)+len(points) > maxPoints || len(raw.Tris)+len(z.faces) > maxTriangles {
		return r.tooLarge(z)
	}
	first := int32(len(raw.Points))
	raw.Points = append(raw.Points, points...)
	number := 0
	if len(raw.Tris) > 0 {
		number = faceOf(raw, len(raw.Tris)-1) + 1
	}
	var get *cgnsColumns
	if v != nil {
		get = r.pick(v)
	}
	if get != nil && !r.atFaces {
		for i := range points {
			get.append(i, &raw.Tau, &raw.P, &raw.Cp)
		}
	}
	for i, corners := range z.faces {
		moved := make([]int32, len(corners))
		for k, c := range corners {
			if c < 0 || int(c) >= len(points) {
				return r.fail(z.place, cgnsRemedy, "element %d names point %d of %d", z.number[i], c+1, len(points))
			}
			moved[k] = first + c
		}
		n := fan(raw, number+i, moved)
		for range n {
			if get != nil && r.atFaces {
				get.append(i, &raw.FaceTau, &raw.FaceP, &raw.FaceCp)
			}
		}
	}
	return nil
}
