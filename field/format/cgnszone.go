package format

import (
	"cmp"
	"slices"

	"shearprint/field/format/hdf5"
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
	moved   []int32 // the run's number of each point within the zone, -1 for those of no face; nil where all are kept
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

// point returns the number of a point among those that are kept; -1 for one that is left out.
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

// compact numbers the points that faces have, and returns how many they are: of a volume most are inside, and curved
// faces have more than their corners.
func (z *cgnsZone) compact() int {
	all := z.points()
	if z.structured {
		return all
	}
	moved := make([]int32, all)
	for _, p := range z.corners {
		moved[p] = 1
	}
	n := int32(0)
	for i := range moved {
		if moved[i]--; moved[i] == 0 {
			moved[i] = n
			n++
		}
	}
	if int(n) < all {
		z.moved = moved
		for i, p := range z.corners {
			z.corners[i] = moved[p]
		}
	}
	return int(n)
}

// triangles returns how many triangles the faces make.
func (z *cgnsZone) triangles() int { return len(z.corners) - 2*len(z.ends) }

func (r *cgnsReader) readZone(n *cgnsNode) error {
	z := &cgnsZone{node: n, place: "zone " + quote(n.name), volume: r.cellDim == 3}
	if err := r.zoneSize(z); err != nil {
		return err
	}
	read := r.elements
	if z.structured {
		read = r.patch
	}
	if err := read(z); err != nil || len(z.ends) == 0 {
		return err
	}
	values, c, err := r.values(z)
	if err != nil {
		return err
	}
	return r.add(z, values, c)
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

// coordinates adds the zone's points, count of which are kept, to the run.
func (r *cgnsReader) coordinates(z *cgnsZone, count int) error {
	grids, err := r.labelled(z.node, "GridCoordinates_t")
	if err != nil {
		return err
	}
	if len(grids) == 0 {
		return r.fail(z.place, cgnsRemedy, "it has no coordinates")
	}
	grid := grids[0]
	for _, g := range grids {
		if g.name == "GridCoordinates" { // the others are of a moving grid
			grid = g
		}
	}
	raw := &r.raw
	first := len(raw.Points)
	for k, name := range []string{"CoordinateX", "CoordinateY", "CoordinateZ"} {
		c, err := r.child(grid, name)
		if err != nil {
			return err
		}
		if c == nil {
			if k == 2 { // a surface in the plane
				continue
			}
			return r.fail(z.place, "write Cartesian coordinates", "it has no %s", name)
		}
		v, err := r.numbers(cgnsArray{node: c, count: z.points()}, z.place)
		if err != nil {
			return err
		}
		if k == 0 { // not before the file is known to have so many
			raw.Points = slices.Grow(raw.Points, count)[:first+count]
			clear(raw.Points[first:])
		}
		here := raw.Points[first:]
		for i := range v.Count() {
			if p := z.point(i); p >= 0 {
				*[]*float64{&here[p].X, &here[p].Y, &here[p].Z}[k] = v.Float(i)
			}
		}
	}
	return nil
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
	cells := int(ni-1) * int(nj-1)
	if err := r.spend(4*pointBytes*cells, z.place); err != nil {
		return err
	}
	z.room(cells, 4*cells)
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
