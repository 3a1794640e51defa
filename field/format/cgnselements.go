package format

import (
	"slices"
)

// cgnsShape says how many nodes an element of a type has, and how many of them are its corners if it is a face.
type cgnsShape struct{ nodes, corners int }

// Element types of the standard by their numbers. Curved faces are taken by their corners.
var cgnsShapes = map[int64]cgnsShape{
	2: {1, 0}, 3: {2, 0}, 4: {3, 0}, 5: {3, 3}, 6: {6, 3}, 7: {4, 4}, 8: {8, 4}, 9: {9, 4}, 10: {4, 0}, 11: {10, 0},
	12: {5, 0}, 13: {14, 0}, 14: {6, 0}, 15: {15, 0}, 16: {18, 0}, 17: {8, 0}, 18: {20, 0}, 19: {27, 0}, 21: {13, 0},
	24: {4, 0}, 25: {9, 3}, 26: {10, 3}, 27: {12, 4}, 28: {16, 4},
}

const (
	cgnsMixed   = 20
	cgnsPolygon = 22
)

// cgnsSection is a section of elements of an unstructured zone.
type cgnsSection struct {
	node        *cgnsNode
	kind        int64
	first, last int64
	connect     []int64
	offsets     []int64 // of each element in connect, and the end; nil in older files
	parents     []int64 // the two cells beside each polygon of a volume; nil if not told
}

// elements reads the faces of an unstructured zone, in the order of their numbers.
func (r *cgnsReader) elements(z *cgnsZone) error {
	nodes, err := r.labelled(z.node, "Elements_t")
	if err != nil {
		return err
	}
	var sections []*cgnsSection
	for _, n := range nodes {
		s, err := r.section(z, n)
		if err != nil {
			return err
		}
		sections = append(sections, s)
	}
	slices.SortStableFunc(sections, func(a, b *cgnsSection) int { return int(a.first - b.first) })
	for _, s := range sections {
		if err := r.sectionFaces(z, s); err != nil {
			return err
		}
		if len(z.faces) > maxTriangles {
			return r.tooLarge(z)
		}
	}
	return nil
}

func (r *cgnsReader) section(z *cgnsZone, n *cgnsNode) (*cgnsSection, error) {
	s := &cgnsSection{node: n}
	kind, err := r.ints(n)
	if err != nil {
		return nil, err
	}
	if len(kind) < 1 {
		return nil, r.fail(z.place+", "+quote(n.name), cgnsRemedy, "the section does not tell its type of element")
	}
	s.kind = kind[0]
	for _, a := range []struct {
		name string
		into *[]int64
		must bool
	}{
		{"ElementConnectivity", &s.connect, true}, {"ElementStartOffset", &s.offsets, false},
		{"ParentElements", &s.parents, false},
	} {
		c, err := r.child(n, a.name)
		if err != nil {
			return nil, err
		}
		if c == nil {
			if a.must {
				return nil, r.fail(z.place+", "+quote(n.name), cgnsRemedy, "the section has no %s", a.name)
			}
			continue
		}
		if *a.into, err = r.ints(c); err != nil {
			return nil, err
		}
	}
	c, err := r.child(n, "ElementRange")
	if err != nil {
		return nil, err
	}
	var ends []int64
	if c != nil {
		if ends, err = r.ints(c); err != nil {
			return nil, err
		}
	}
	if len(ends) != 2 || ends[0] < 1 || ends[1] < ends[0] || ends[1]-ends[0] >= int64(max(1, len(s.connect))) {
		return nil, r.fail(z.place+", "+quote(n.name), cgnsRemedy, "the range of elements makes no sense")
	}
	s.first, s.last = ends[0], ends[1]
	return s, nil
}

// sectionFaces adds a section's faces to the zone; sections of lines and of cells have none.
func (r *cgnsReader) sectionFaces(z *cgnsZone, s *cgnsSection) error {
	place := z.place + ", section " + quote(s.node.name)
	rest := s.connect
	next := func(n int64) ([]int64, error) {
		if n < 0 || n > int64(len(rest)) {
			return nil, r.fail(place, cgnsRemedy, "its connectivity ends too early")
		}
		out := rest[:n]
		rest = rest[n:]
		return out, nil
	}
	shape, fixed := cgnsShapes[s.kind]
	switch {
	case fixed && shape.corners == 0, s.kind == cgnsPolygon+1: // lines, cells, polyhedra
		return nil
	case !fixed && s.kind != cgnsMixed && s.kind != cgnsPolygon:
		return r.fail(place, "write triangles, quadrilaterals, mixed elements or polygons",
			"elements of type %d are not read", s.kind)
	}
	inner := s.kind == cgnsPolygon && z.volume && int64(len(s.parents)) == 2*(s.last-s.first+1)
	for e := s.first; e <= s.last; e++ {
		i := e - s.first
		nodes, corners, err := s.element(i, shape, next)
		if err != nil {
			return err
		}
		if corners < 0 {
			return r.fail(place, cgnsRemedy, "element %d makes no sense", e)
		}
		if corners == 0 || inner && s.parents[i] != 0 && s.parents[i+s.last-s.first+1] != 0 {
			continue // a line or a cell among mixed elements, or a polygon between two cells
		}
		face := make([]int32, corners)
		for k := range face {
			if nodes[k] < 1 || nodes[k] > int64(z.points()) {
				return r.fail(place, cgnsRemedy, "element %d names point %d of %d", e, nodes[k], z.points())
			}
			face[k] = int32(nodes[k] - 1)
		}
		z.faces = append(z.faces, face)
		z.number = append(z.number, e)
	}
	return nil
}

// element returns the nodes of element i of the section and how many of them are corners of a face; -1 for nonsense.
func (s *cgnsSection) element(i int64, shape cgnsShape, next func(n int64) ([]int64, error)) ([]int64, int, error) {
	switch s.kind {
	case cgnsMixed:
		kind, err := next(1)
		if err != nil {
			return nil, 0, err
		}
		mixed, ok := cgnsShapes[kind[0]]
		if !ok {
			return nil, -1, nil
		}
		nodes, err := next(int64(mixed.nodes))
		return nodes, mixed.corners, err
	case cgnsPolygon:
		if s.offsets == nil { // before version 4 of the standard every polygon began with its number of corners
			n, err := next(1)
			if err != nil {
				return nil, 0, err
			}
			nodes, err := next(n[0])
			return nodes, len(nodes), err
		}
		if i+1 >= int64(len(s.offsets)) || s.offsets[i+1] < s.offsets[i] {
			return nil, -1, nil
		}
		nodes, err := next(s.offsets[i+1] - s.offsets[i])
		return nodes, len(nodes), err
	}
	nodes, err := next(int64(shape.nodes))
	return nodes, shape.corners, err
}
