package format

import (
	"cmp"
	"slices"

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

	corners []int32 // of all faces, one after the other: numbers of the zone's points from 0
	ends    []int32 // of each face in corners
	runs    []cgnsRun
	moved   []int32 // where compact put each point, -1 for none; nil for where it was
}

// cgnsRun says that elements with numbers in a row are faces in a row.
type cgnsRun struct {
	element     int64
	face, count int
}

// room takes memory for faces that are to come.
func (z *cgnsZone) room(faces, corners int) {
	z.ends, z.corners = slices.Grow(z.ends, faces), slices.Grow(z.corners, corners)
}

// close makes a face of the corners that were added since the last, and gives it the number of its element. Numbers
// come in rising order.
func (z *cgnsZone) close(element int64) {
	face := len(z.ends)
	z.ends = append(z.ends, int32(len(z.corners)))
	if k := len(z.runs) - 1; k >= 0 && z.runs[k].element+int64(z.runs[k].count) == element {
		z.runs[k].count++
		return
	}
	z.runs = append(z.runs, cgnsRun{element, face, 1})
}

// faceOf returns the face that the element is; -1 if it is none.
func (z *cgnsZone) faceOf(element int64) int {
	k, _ := slices.BinarySearchFunc(z.runs, element, func(run cgnsRun, e int64) int {
		return cmp.Compare(run.element+int64(run.count), e+1)
	})
	if k == len(z.runs) || element < z.runs[k].element {
		return -1
	}
	return z.runs[k].face + int(element-z.runs[k].element)
}

// start returns where the corners of face i begin.
func (z *cgnsZone) start(i int) int {
	if i == 0 {
		return 0
	}
	return int(z.ends[i-1])
}

// point returns where a point is after compact; -1 for one that is left out.
func (z *cgnsZone) point(i int) int {
	if z.moved == nil {
		return i
	}
	return int(z.moved[i])
}

// onlyFaces drops all faces that are in none of the conditions, and returns how many they were.
func (z *cgnsZone) onlyFaces(conditions []cgnsArray) (dropped int) {
	keep := make([]bool, len(z.ends))
	for _, a := range conditions {
		if a.faces == nil {
			return 0
		}
		for k := range a.faces.count {
			if i := z.faceOf(a.faces.element(k)); i >= 0 {
				keep[i] = true
			}
		}
	}
	old := *z
	z.corners, z.ends, z.runs = nil, nil, nil
	for _, run := range old.runs {
		for k := range run.count {
			if i := run.face + k; keep[i] {
				z.corners = append(z.corners, old.corners[old.start(i):old.ends[i]]...)
				z.close(run.element + int64(k))
			}
		}
	}
	return len(old.ends) - len(z.ends)
}

// compact returns the points that faces have: of a volume most are inside.
func (z *cgnsZone) compact(points []r3.Vec) []r3.Vec {
	z.moved = make([]int32, len(points))
	for _, p := range z.corners {
		z.moved[p] = 1
	}
	n := int32(0)
	for i, p := range points {
		if z.moved[i]--; z.moved[i] == 0 {
			z.moved[i] = n
			points[n] = p
			n++
		}
	}
	for i, p := range z.corners {
		z.corners[i] = z.moved[p]
	}
	return points[:n]
}

// triangles returns how many triangles the faces make.
func (z *cgnsZone) triangles() int { return len(z.corners) - 2*len(z.ends) }

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
	if err != nil || len(z.ends) == 0 {
		return err
	}
	values, c, err := r.values(z)
	if err != nil {
		return err
	}
	return r.add(z, points, values, c)
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
	if dims.len() < 2*k {
		return r.fail(z.place, cgnsRemedy, "it does not tell its size")
	}
	for i := range k {
		z.size, z.cells = append(z.size, dims.at(i)), append(z.cells, dims.at(k+i))
	}
	count := int64(1)
	for i, d := range z.size {
		if d < 1 || d > maxPoints || count > maxPoints/d {
			return r.fail(z.place, cgnsRemedy, "a size of %d makes no sense", d)
		}
		if z.structured && z.cells[i] != d-1 {
			return r.fail(z.place, cgnsRemedy, "%d points in a row cannot have %d cells between them", d, z.cells[i])
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
		n *= int(min(max(d, 0), maxPoints)) // two dimensions at most
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
	grid := grids[0]
	for _, g := range grids {
		if g.name == "GridCoordinates" { // the others are of a moving grid
			grid = g
		}
	}
	points := make([]r3.Vec, 0)
	for k, name := range []string{"CoordinateX", "CoordinateY", "CoordinateZ"} {
		c, err := r.child(grid, name)
		if err != nil {
			return nil, err
		}
		if c == nil {
			if k == 2 { // a surface in the plane
				continue
			}
			return nil, r.fail(z.place, "write Cartesian coordinates", "it has no %s", name)
		}
		v, err := r.numbers(cgnsArray{node: c, count: z.points()}, z.place)
		if err != nil {
			return nil, err
		}
		if k == 0 {
			if err := r.spend(24*v.Count(), z.place); err != nil {
				return nil, err
			}
			points = make([]r3.Vec, v.Count())
		}
		for i := range points {
			*[]*float64{&points[i].X, &points[i].Y, &points[i].Z}[k] = v.Float(i)
		}
	}
	return points, nil
}

// numbers reads an array, which must have as many numbers as it has places; a condition's may have one for all.
func (r *cgnsReader) numbers(a cgnsArray, place string) (*hdf5.Value, error) {
	v, err := r.value(a.node)
	if err != nil {
		return nil, err
	}
	got := 0
	if v != nil && v.Kind != hdf5.Text {
		got = v.Count()
	}
	if got != a.count && (got != 1 || a.faces == nil) {
		return nil, r.fail(place+", "+quote(a.node.name), "write it without rind planes, one number per point or face",
			"it has %d numbers where there should be %d", got, a.count)
	}
	return v, nil
}

// patch makes the faces of a structured surface; the first index runs fastest.
func (r *cgnsReader) patch(z *cgnsZone) error {
	ni, nj := int32(z.size[0]), int32(z.size[1])
	if 2*int64(ni-1)*int64(nj-1) > maxTriangles {
		return r.tooLarge(z)
	}
	z.room(int(ni-1)*int(nj-1), 4*int(ni-1)*int(nj-1))
	for j := range nj - 1 {
		for i := range ni - 1 {
			a := j*ni + i
			z.corners = append(z.corners, a, a+1, a+1+ni, a+ni)
			z.close(int64(len(z.ends)) + 1)
		}
	}
	return nil
}

func (r *cgnsReader) tooLarge(z *cgnsZone) error {
	return r.fail(z.place, "split the run", "more than %d triangles", maxTriangles)
}
