package format

import (
	"math"
	"strings"

	"shearprint/field"
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

// cgnsValues are the columns of a zone: at its vertices, or at its faces in their order.
type cgnsValues struct {
	names   []string
	columns []func(i int) float64 // by face or vertex number; NaN where unknown
	atFaces bool
}

// values reads the solutions and boundary data of a zone. Face values win over vertex values.
func (r *cgnsReader) values(z *cgnsZone) (*cgnsValues, error) {
	vertex, face := &cgnsValues{}, &cgnsValues{atFaces: true}
	solutions, err := r.labelled(z.node, "FlowSolution_t")
	if err != nil {
		return nil, err
	}
	for _, s := range solutions {
		where, err := r.text(s, "GridLocation")
		if err != nil {
			return nil, err
		}
		switch {
		case where == "" || where == "Vertex":
			err = r.arrays(s, z, z.points(), nil, vertex)
		case (where == "CellCenter" || where == "FaceCenter") && !z.volume:
			err = r.arrays(s, z, z.cellCount(), z.cellIndex(), face)
		}
		if err != nil {
			return nil, err
		}
	}
	if err := r.boundary(z, face); err != nil {
		return nil, err
	}
	c := matchColumns(r.source, face.names, r.opt)
	if c.tau[0] >= 0 {
		return face, r.settle(c, true)
	}
	c = matchColumns(r.source, vertex.names, r.opt)
	if c.tau[0] >= 0 {
		return vertex, r.settle(c, false)
	}
	if !r.matched {
		r.match = c
	}
	return nil, nil
}

// settle keeps how the names of the first zone with values were understood; other zones must agree in what they are of.
func (r *cgnsReader) settle(c columns, atFaces bool) error {
	if r.matched && atFaces != r.atFaces {
		return r.fail("", "write all zones alike", "some zones have their values at vertices, others at faces")
	}
	r.match, r.atFaces, r.matched = c, atFaces, true
	return nil
}

// cellIndex returns, per face, its place in arrays over the zone's cells.
func (z *cgnsZone) cellIndex() []int {
	index := make([]int, len(z.faces))
	for i := range index {
		index[i] = i
	}
	return index
}

// arrays adds the arrays below a node as columns. index maps faces to elements of the arrays; nil for one to one.
func (r *cgnsReader) arrays(n *cgnsNode, z *cgnsZone, want int, index []int, into *cgnsValues) error {
	list, err := r.labelled(n, "DataArray_t")
	if err != nil {
		return err
	}
	for _, a := range list {
		v, err := r.numbers(a, want, z.place)
		if err != nil {
			return err
		}
		into.names = append(into.names, a.name)
		into.columns = append(into.columns, func(i int) float64 {
			if index != nil {
				i = index[i]
			}
			if i < 0 || i >= v.Count() {
				return math.NaN()
			}
			return v.Float(i)
		})
	}
	return nil
}

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

// cgnsColumns are the columns of a zone that hold tau, p and cp.
type cgnsColumns struct {
	tau   [3]func(i int) float64
	p, cp func(i int) float64
	has   [2]bool // the run has p and cp
}

// pick finds the run's columns among the zone's by name. One that is missing gives NaN.
func (r *cgnsReader) pick(v *cgnsValues) *cgnsColumns {
	none := func(int) float64 { return math.NaN() }
	column := func(col int) func(int) float64 {
		if col < 0 {
			return none
		}
		for k, name := range v.names {
			if name == r.match.name(col) {
				return v.columns[k]
			}
		}
		return none
	}
	c := &cgnsColumns{p: column(r.match.p), cp: column(r.match.cp), has: [2]bool{r.match.p >= 0, r.match.cp >= 0}}
	for k := range 3 {
		c.tau[k] = column(r.match.tau[k])
		if r.match.tau[k] < 0 { // a plane surface may leave the third component out
			c.tau[k] = func(int) float64 { return 0 }
		}
	}
	return c
}

func (c *cgnsColumns) append(i int, tau *[]r3.Vec, p, cp *[]float64) {
	*tau = append(*tau, r3.Vec{X: c.tau[0](i), Y: c.tau[1](i), Z: c.tau[2](i)})
	if c.has[0] {
		*p = append(*p, c.p(i))
	}
	if c.has[1] {
		*cp = append(*cp, c.cp(i))
	}
}

// isADF tells the older form of CGNS files.
func isADF(data []byte) bool {
	return strings.Contains(string(data[:min(len(data), 64)]), "ADF Database Version")
}

// readADF refuses the older form.
func readADF(name string, _ []byte, _ Options) (field.Raw, error) {
	return field.Raw{}, source{name}.fail("", "convert it to the HDF5 form with the CGNS library's own conversion tool",
		"this is CGNS in the older ADF form")
}
