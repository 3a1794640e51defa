package format_test

import (
	"bytes"
	"encoding/binary"
	"math"
	"slices"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// node is a node of a CGNS tree that a test writes. Its data are a string or a slice of numbers.
type node struct {
	name, label string
	data        any
	kids        []*node
	link        bool
}

func tree(name, label string, data any, kids ...*node) *node {
	return &node{name: name, label: label, data: data, kids: kids}
}

func dataArray(name string, data any) *node { return tree(name, "DataArray_t", data) }

// at returns the node at a path of names with slashes.
func (n *node) at(path string) *node {
	name, rest, more := strings.Cut(path, "/")
	for _, k := range n.kids {
		if k.name == name {
			if more {
				return k.at(rest)
			}
			return k
		}
	}
	panic("no node " + path)
}

// drop takes the child of that name away.
func (n *node) drop(name string) {
	n.kids = slices.DeleteFunc(n.kids, func(k *node) bool { return k.name == name })
}

func (n *node) add(kids ...*node) { n.kids = append(n.kids, kids...) }

// file writes the tree in the HDF5 form: superblock 2, headers of version 2, compact links, contiguous data.
func (n *node) file() string {
	w := &treeWriter{data: make([]byte, 48)}
	root := w.node(n)
	copy(w.data, join("\x89HDF\r\n\x1a\n", [4]byte{2, 8, 8, 0}, uint64(0), uint64(math.MaxUint64),
		uint64(len(w.data)), root))
	return string(w.data)
}

type treeWriter struct{ data []byte }

func (w *treeWriter) put(b []byte) uint64 {
	at := len(w.data)
	w.data = append(w.data, b...)
	return uint64(at)
}

func (w *treeWriter) header(messages []byte) uint64 {
	return w.put(join("OHDR", [2]byte{2, 2}, uint32(len(messages)), messages, uint32(0)))
}

func (w *treeWriter) node(n *node) uint64 {
	var all []byte
	message := func(kind uint8, body []byte) {
		all = append(all, join(kind, uint16(len(body)), uint8(0), body)...)
	}
	kind := "MT"
	if n.link {
		kind = "LK"
	}
	for _, a := range [][2]string{{"name", n.name}, {"label", n.label}, {"type", kind}} {
		text := append([]byte(a[1]), 0)
		message(0x0C, join([2]byte{3, 0}, uint16(len(a[0])+1), uint16(8), uint16(4), uint8(0), a[0], uint8(0),
			[4]byte{0x13}, uint32(len(text)), [4]byte{2}, text))
	}
	link := func(order int, name string, to uint64) {
		message(0x06, join([2]byte{1, 4}, uint64(order), uint8(len(name)), name, to))
	}
	if n.data != nil {
		link(0, " data", w.dataset(n.data))
	}
	for i, k := range n.kids {
		link(i+1, k.name, w.node(k))
	}
	return w.header(all)
}

func (w *treeWriter) dataset(data any) uint64 {
	integer := func(size int) []byte {
		return join([4]byte{0x10, 8}, uint32(size), uint16(0), uint16(8*size))
	}
	var kind []byte
	switch d := data.(type) {
	case string:
		kind, data = integer(1), []byte(d)
	case []int8:
		kind = integer(1)
	case []int32:
		kind = integer(4)
	case []int64:
		kind = integer(8)
	case []float64:
		kind = join([4]byte{0x11, 0x20, 0x3f}, uint32(8), uint16(0), uint16(64), [4]byte{52, 11, 0, 52}, uint32(1023))
	default:
		panic("no such data")
	}
	b := join(data)
	count := len(b) / int(binary.LittleEndian.Uint32(kind[4:]))
	at := w.put(b)
	var all []byte
	for _, m := range []struct {
		kind uint8
		body []byte
	}{{3, kind}, {1, join([4]byte{2, 1, 0, 1}, uint64(count))}, {8, join([2]byte{3, 1}, at, uint64(len(b)))}} {
		all = append(all, join(m.kind, uint16(len(m.body)), uint8(0), m.body)...)
	}
	return w.header(all)
}

// join writes numbers little-endian, and text and bytes as they are.
func join(parts ...any) []byte {
	var b bytes.Buffer
	for _, p := range parts {
		if s, ok := p.(string); ok {
			p = []byte(s)
		}
		if err := binary.Write(&b, binary.LittleEndian, p); err != nil {
			panic(err)
		}
	}
	return b.Bytes()
}

// squareZone is the unit square of two triangles at x = shift, and tau = (1, 2, 0) and p = 5 at its points.
func squareZone(name string, shift float64) *node {
	four := func(x float64) []float64 { return []float64{x, x, x, x} }
	return tree(name, "Zone_t", []int32{4, 2, 0},
		tree("ZoneType", "ZoneType_t", "Unstructured"),
		tree("GridCoordinates", "GridCoordinates_t", nil,
			dataArray("CoordinateX", []float64{shift, shift + 1, shift + 1, shift}),
			dataArray("CoordinateY", []float64{0, 0, 1, 1}), dataArray("CoordinateZ", four(0))),
		tree("Elements", "Elements_t", []int32{5, 0},
			tree("ElementRange", "IndexRange_t", []int32{1, 2}), dataArray("ElementConnectivity", []int32{1, 2, 3, 1, 3, 4})),
		tree("Solution", "FlowSolution_t", nil,
			dataArray("SkinFrictionX", four(1)), dataArray("SkinFrictionY", four(2)), dataArray("SkinFrictionZ", four(0)),
			dataArray("Pressure", four(5))))
}

func rootOf(dims []int32, zones ...*node) *node {
	return tree("HDF5 MotherNode", "Root Node of HDF5 File", nil, tree("Base", "CGNSBase_t", dims, zones...))
}

func readTree(t *testing.T, root *node) field.Raw {
	t.Helper()
	raw, err := format.Read("x.cgns", []byte(root.file()), format.Options{})
	if err != nil {
		t.Fatal(err)
	}
	checkRaw(t, raw)
	return raw
}

// Zones are joined in the order of the file. What only some of them have is left out and told, whichever comes first.
func TestCGNSZones(t *testing.T) {
	bare := squareZone("bare", 7)
	bare.drop("Solution")
	airless := squareZone("airless", 9)
	airless.at("Solution").drop("Pressure")
	for _, c := range []struct {
		what  string
		zones []*node
		x     []float64 // of the first point of each zone that is kept
		p     bool
		code  string
		count int
	}{
		{"two", []*node{squareZone("b", 0), squareZone("a", 1)}, []float64{0, 1}, true, "", 0},
		{"one without values, last", []*node{squareZone("a", 0), bare}, []float64{0}, true, "zones-without-values", 1},
		{"one without values, first", []*node{bare, squareZone("a", 0)}, []float64{0}, true, "zones-without-values", 1},
		{"one without pressure, last", []*node{squareZone("a", 0), airless}, []float64{0, 9}, false, "partial-pressure", 0},
		{"one without pressure, first", []*node{airless, squareZone("a", 0)}, []float64{9, 0}, false, "partial-pressure", 0},
	} {
		raw := readTree(t, rootOf([]int32{2, 3}, c.zones...))
		if len(raw.Points) != 4*len(c.x) || len(raw.Tris) != 2*len(c.x) || (raw.P != nil) != c.p {
			t.Errorf("%s: %d points, %d triangles, p %v", c.what, len(raw.Points), len(raw.Tris), raw.P)
			continue
		}
		for i, x := range c.x {
			if raw.Points[4*i].X != x || raw.Tau[4*i] != (r3.Vec{X: 1, Y: 2}) {
				t.Errorf("%s: zone %d begins at %v with tau %v", c.what, i, raw.Points[4*i], raw.Tau[4*i])
			}
		}
		if c.code != "" && !hasFinding(raw.Findings, c.code, c.count) {
			t.Errorf("%s: no finding %s in %v", c.what, c.code, raw.Findings)
		}
	}
}

// Of several solutions, such as steps in time, the last counts.
func TestCGNSSteps(t *testing.T) {
	zone := squareZone("a", 0)
	later := squareZone("", 0).at("Solution")
	later.name = "Later"
	later.at("SkinFrictionX").data = []float64{3, 3, 3, 3}
	zone.add(later)
	raw := readTree(t, rootOf([]int32{2, 3}, zone))
	if raw.Tau[2] != (r3.Vec{X: 3, Y: 2}) || !hasFinding(raw.Findings, "several-solutions", 0) {
		t.Errorf("tau %v, findings %v", raw.Tau[2], raw.Findings)
	}
}

// wedge is a volume zone of one tetrahedron and its four sides as two sections of triangles. Three of the sides are in
// conditions with data: one number for each face, and one for all; the list of the first runs backward.
func wedge() *node {
	condition := func(name string, points *node, tau ...float64) *node {
		zero := make([]float64, len(tau))
		return tree(name, "BC_t", "BCWall", tree("GridLocation", "GridLocation_t", "FaceCenter"), points,
			tree("Set", "BCDataSet_t", "BCWall", tree("GridLocation", "GridLocation_t", "FaceCenter"),
				tree("NeumannData", "BCData_t", nil, dataArray("SkinFrictionX", tau), dataArray("SkinFrictionY", zero),
					dataArray("SkinFrictionZ", zero))))
	}
	return tree("air", "Zone_t", []int32{6, 1, 0},
		tree("ZoneType", "ZoneType_t", "Unstructured"),
		tree("GridCoordinates", "GridCoordinates_t", nil, // the first and the fifth point are of no face
			dataArray("CoordinateX", []float64{9, 0, 1, 0, 9, 0}), dataArray("CoordinateY", []float64{9, 0, 0, 1, 9, 0}),
			dataArray("CoordinateZ", []float64{9, 0, 0, 0, 9, 1})),
		tree("Sides", "Elements_t", []int32{5, 0}, tree("ElementRange", "IndexRange_t", []int32{12, 14}),
			dataArray("ElementConnectivity", []int32{2, 3, 6, 3, 4, 6, 4, 2, 6})),
		tree("Cells", "Elements_t", []int32{10, 0}, tree("ElementRange", "IndexRange_t", []int32{1, 1}),
			dataArray("ElementConnectivity", []int32{2, 3, 4, 6})),
		tree("Odd", "Elements_t", []int32{56, 0}, tree("ElementRange", "IndexRange_t", []int32{2, 2}),
			dataArray("ElementConnectivity", make([]int32, 125))),
		tree("Floor", "Elements_t", []int32{20, 0}, tree("ElementRange", "IndexRange_t", []int32{10, 11}),
			dataArray("ElementConnectivity", []int32{3, 2, 3, 5, 2, 4, 3})),
		tree("ZoneBC", "ZoneBC_t", nil,
			condition("listed", tree("PointList", "IndexArray_t", []int64{13, 12}), 130, 120),
			condition("ranged", tree("PointRange", "IndexRange_t", []int32{11, 11}), 110),
			tree("inlet", "BC_t", "BCInflow", tree("GridLocation", "GridLocation_t", "FaceCenter"),
				tree("PointList", "IndexArray_t", []int32{14}),
				tree("Set", "BCDataSet_t", "BCInflow", tree("GridLocation", "GridLocation_t", "FaceCenter"),
					tree("DirichletData", "BCData_t", nil, dataArray("VelocityX", []float64{50, 51, 52}))))))
}

func TestCGNSConditions(t *testing.T) {
	check := func(raw field.Raw, want ...float64) {
		t.Helper()
		var got []float64
		for _, tau := range raw.FaceTau {
			got = append(got, tau.X)
		}
		if !slices.Equal(got, want) || len(raw.Points) != 4 || !hasFinding(raw.Findings, "faces-without-values", 1) {
			t.Errorf("tau %v, want %v; points %v, findings %v", got, want, raw.Points, raw.Findings)
		}
		if p := raw.Points[raw.Tris[0][1]]; p != (r3.Vec{Y: 1}) {
			t.Errorf("the second corner of the floor is %v", p)
		}
	}
	check(readTree(t, rootOf([]int32{3, 3}, wedge())), 110, 120, 130)

	one := wedge()
	data := one.at("ZoneBC/listed/Set/NeumannData")
	for _, k := range data.kids {
		k.data = k.data.([]float64)[:1]
	}
	check(readTree(t, rootOf([]int32{3, 3}, one)), 110, 130, 130)
}

// cgnsOf writes a run with values at its points.
func cgnsOf(raw field.Raw) string {
	var x, tau [3][]float64
	for i, p := range raw.Points {
		for k, v := range [3][2]float64{{p.X, raw.Tau[i].X}, {p.Y, raw.Tau[i].Y}, {p.Z, raw.Tau[i].Z}} {
			x[k], tau[k] = append(x[k], v[0]), append(tau[k], v[1])
		}
	}
	var connect []int32
	for _, t := range raw.Tris {
		connect = append(connect, t[0]+1, t[1]+1, t[2]+1)
	}
	z := squareZone("zone", 0)
	z.data = []int32{int32(len(raw.Points)), int32(len(raw.Tris)), 0}
	for k, name := range []string{"X", "Y", "Z"} {
		z.at("GridCoordinates/Coordinate" + name).data = x[k]
		z.at("Solution/SkinFriction" + name).data = tau[k]
	}
	z.at("Solution").drop("Pressure")
	z.at("Elements/ElementRange").data = []int32{1, int32(len(raw.Tris))}
	z.at("Elements/ElementConnectivity").data = connect
	return rootOf([]int32{2, 3}, z).file()
}

// cgnsBad are trees that no CGNS library writes, each spoilt in one place, and words of the message.
func cgnsBad() []bad {
	var list []bad
	spoil := func(what, want string, change func(root, zone *node)) {
		root := rootOf([]int32{2, 3}, squareZone("patch", 0))
		change(root, root.at("Base/patch"))
		list = append(list, bad{what, root.file(), want})
	}
	volume := func(what, want string, change func(zone *node)) {
		root := rootOf([]int32{3, 3}, wedge())
		change(root.at("Base/air"))
		list = append(list, bad{what, root.file(), want})
	}
	elements := func(what, want string, kind, first, last int64, connect []int64, more ...*node) {
		spoil(what, want, func(_, z *node) {
			e := z.at("Elements")
			e.data = []int64{kind, 0}
			e.at("ElementRange").data, e.at("ElementConnectivity").data = []int64{first, last}, connect
			e.add(more...)
		})
	}
	offsets := func(x ...int64) *node { return dataArray("ElementStartOffset", x) }
	spoil("no base", "no CGNS base", func(r, _ *node) { r.drop("Base") })
	spoil("base without dimensions", "dimensions", func(r, _ *node) { r.at("Base").data = nil })
	spoil("base with a word for dimensions", "dimensions", func(r, _ *node) { r.at("Base").data = "2" })
	spoil("base of numbers with fractions", "integers", func(r, _ *node) { r.at("Base").data = []float64{2, 3} })
	spoil("base of nine dimensions", "dimensions", func(r, _ *node) { r.at("Base").data = []int32{9, 3} })
	spoil("base of lines", "no surface", func(r, _ *node) { r.at("Base").data = []int32{1, 3} })
	spoil("no zone", "no surface", func(r, _ *node) { r.at("Base").kids = nil })
	spoil("link", "not followed", func(_, z *node) { z.at("Elements").link = true })
	spoil("zone without size", "size", func(_, z *node) { z.data = nil })
	spoil("zone of no points", "size of 0", func(_, z *node) { z.data = []int32{0, 2, 0} })
	spoil("zone of negative points", "size of -4", func(_, z *node) { z.data = []int32{-4, 2, 0} })
	spoil("zone of too many points", "makes no sense", func(_, z *node) { z.data = []int64{1 << 40, 2, 0} })
	spoil("zone of more points than there are", "4 numbers where", func(_, z *node) { z.data = []int32{400, 2, 0} })
	spoil("zone of an unknown type", `"Odd"`, func(_, z *node) { z.at("ZoneType").data = "Odd" })
	spoil("zone without a type", "neither", func(_, z *node) { z.drop("ZoneType") })
	spoil("structured zone of one dimension", "size", func(_, z *node) { z.at("ZoneType").data = "Structured" })
	spoil("structured zone of too many cells", "cells between them", func(_, z *node) {
		z.at("ZoneType").data, z.data = "Structured", []int32{2, 2, 9, 9, 0, 0}
	})
	spoil("no coordinates", "no coordinates", func(_, z *node) { z.drop("GridCoordinates") })
	spoil("no y", "no CoordinateY", func(_, z *node) { z.at("GridCoordinates").drop("CoordinateY") })
	spoil("too few x", "3 numbers where", func(_, z *node) {
		z.at("GridCoordinates/CoordinateX").data = []float64{1, 2, 3}
	})
	spoil("x in words", "0 numbers where", func(_, z *node) { z.at("GridCoordinates/CoordinateX").data = nil })
	spoil("no elements", "no surface", func(_, z *node) { z.drop("Elements") })
	spoil("no type of element", "type of element", func(_, z *node) { z.at("Elements").data = nil })
	spoil("no connectivity", "no ElementConnectivity", func(_, z *node) { z.at("Elements").drop("ElementConnectivity") })
	spoil("no range", "no ElementRange", func(_, z *node) { z.at("Elements").drop("ElementRange") })
	spoil("range of three", "two numbers", func(_, z *node) { z.at("Elements/ElementRange").data = []int32{1, 2, 3} })
	spoil("connectivity of fractions", "integers", func(_, z *node) {
		z.at("Elements/ElementConnectivity").data = []float64{1, 2, 3, 1, 3, 4}
	})
	spoil("sections on top of one another", "another section", func(_, z *node) {
		again := squareZone("", 0).at("Elements")
		again.name = "Again"
		z.add(again)
	})
	tris := []int64{1, 2, 3, 1, 3, 4}
	elements("type 57", "type 57", 57, 1, 2, tris)
	elements("type -5", "type -5", -5, 1, 2, tris)
	elements("range from 0", "range of elements", 5, 0, 1, tris)
	elements("range backward", "range of elements", 5, 2, 1, tris)
	elements("range without end", "range of elements", 5, 1, math.MaxInt64, tris)
	elements("range at the end of numbers", "connectivity ends", 5, math.MaxInt64-2, math.MaxInt64, tris)
	elements("more elements than corners", "connectivity ends", 5, 1, 3, tris)
	elements("corner 0", "names point 0", 5, 1, 2, []int64{1, 2, 3, 1, 3, 0})
	elements("corner 5", "names point 5 of 4", 5, 1, 2, []int64{1, 2, 3, 1, 3, 5})
	elements("corner beyond 32 bits", "names point 4294967297", 5, 1, 2, []int64{1<<32 + 1, 2, 3, 1, 3, 4})
	elements("mixed of unknown", "element 2 makes no sense", 20, 1, 2, []int64{5, 1, 2, 3, 99, 1, 3, 4})
	elements("mixed cut off", "element 2 makes no sense", 20, 1, 2, []int64{5, 1, 2, 3, 7, 1, 3, 4})
	elements("polygon of -3", "element 1 makes no sense", 22, 1, 2, []int64{-3, 1, 2, 3, 3, 1, 3, 4})
	elements("polygon of 2^62", "element 1 makes no sense", 22, 1, 2, []int64{1 << 62, 1, 2, 3, 3, 1, 3, 4})
	elements("offsets backward", "element 2 makes no sense", 22, 1, 2, tris, offsets(0, 3, 2))
	elements("offsets too few", "element 2 makes no sense", 22, 1, 2, tris, offsets(0, 3))
	elements("offsets from 1", "element 1 makes no sense", 22, 1, 2, tris, offsets(1, 3, 6))
	elements("offsets beyond", "element 2 makes no sense", 22, 1, 2, tris, offsets(0, 3, 1<<40))
	elements("polyhedra only", "no surface", 23, 1, 2, tris)
	spoil("too few numbers in a solution", "3 numbers where", func(_, z *node) {
		z.at("Solution/SkinFrictionX").data = []float64{1, 2, 3}
	})
	spoil("one number in a solution", "1 numbers where", func(_, z *node) {
		z.at("Solution/Pressure").data = []float64{1}
	})
	spoil("words in a solution", "0 numbers where", func(_, z *node) { z.at("Solution/SkinFrictionX").data = nil })
	spoil("no values", "no wall shear stress", func(_, z *node) { z.drop("Solution") })
	spoil("stress and coefficient", "its coefficient", func(r, z *node) {
		other := squareZone("z", 3)
		for _, k := range other.at("Solution").kids[:3] {
			k.name = "Coef" + k.name
		}
		r.at("Base").add(other)
	})
	spoil("points and faces", "others at faces", func(r, z *node) {
		other := squareZone("z", 3)
		for _, k := range other.at("Solution").kids {
			k.data = []float64{1, 1}
		}
		other.at("Solution").add(tree("GridLocation", "GridLocation_t", "CellCenter"))
		r.at("Base").add(other)
	})
	volume("structured volume", "structured volumes", func(z *node) {
		z.at("ZoneType").data, z.data = "Structured", []int32{2, 3, 1, 1, 2, 0, 0, 0, 0}
	})
	volume("range of a condition backward", "range from 12 to 11", func(z *node) {
		z.at("ZoneBC/ranged/PointRange").data = []int32{12, 11}
	})
	volume("range of a condition without end", "makes no sense", func(z *node) {
		z.at("ZoneBC/ranged/PointRange").data = []int64{1, math.MaxInt64}
	})
	volume("range of a condition longer than the file", "more data than can be held", func(z *node) {
		z.at("ZoneBC/ranged/PointRange").data = []int64{1, 1 << 27}
	})
	volume("too many numbers in a condition", "3 numbers where", func(z *node) {
		z.at("ZoneBC/listed/Set/NeumannData/SkinFrictionX").data = []float64{1, 2, 3}
	})
	return list
}

func TestMalformedCGNS(t *testing.T) { checkBad(t, cgnsBad()) }
