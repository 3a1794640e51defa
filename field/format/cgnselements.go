package format

import (
	"cmp"
	"slices"

	"shearprint/field/format/hdf5"
)

// cgnsShape says how many nodes an element of a type has, and how many of them are its corners if it is a face.
type cgnsShape struct{ nodes, corners int }

// Element types of the standard by their numbers. Curved faces are taken by their corners.
var cgnsShapes = map[int64]cgnsShape{
	2: {1, 0}, 3: {2, 0}, 4: {3, 0}, 5: {3, 3}, 6: {6, 3}, 7: {4, 4}, 8: {8, 4}, 9: {9, 4}, 10: {4, 0}, 11: {10, 0},
	12: {5, 0}, 13: {14, 0}, 14: {6, 0}, 15: {15, 0}, 16: {18, 0}, 17: {8, 0}, 18: {20, 0}, 19: {27, 0}, 21: {13, 0},
	24: {4, 0}, 25: {9, 3}, 26: {10, 3}, 27: {12, 4}, 28: {16, 4}, 29: {16, 0}, 30: {20, 0}, 31: {21, 0}, 32: {29, 0},
	33: {30, 0}, 34: {24, 0}, 35: {38, 0}, 36: {40, 0}, 37: {32, 0}, 38: {56, 0}, 39: {64, 0}, 40: {5, 0}, 41: {12, 3},
	42: {15, 3}, 43: {16, 4}, 44: {25, 4}, 45: {22, 0}, 46: {34, 0}, 47: {35, 0}, 48: {29, 0}, 49: {50, 0}, 50: {55, 0},
	51: {33, 0}, 52: {66, 0}, 53: {75, 0}, 54: {44, 0}, 55: {98, 0}, 56: {125, 0},
}

const (
	cgnsMixed      = 20
	cgnsPolygon    = 22
	cgnsPolyhedron = 23
)

// cgnsInts are integers that stay as the file has them.
type cgnsInts struct{ v *hdf5.Value }

func (c cgnsInts) len() int {
	if c.v == nil {
		return 0
	}
	return c.v.Count()
}

func (c cgnsInts) at(i int) int64 { return c.v.Int(i) }

// cgnsSection is a section of elements of an unstructured zone.
type cgnsSection struct {
	node        *cgnsNode
	place       string // for messages
	kind        int64
	first, last int64
	connect     cgnsInts
	offsets     cgnsInts // of each element in connect, and the end; empty in older files
	parents     cgnsInts // the two cells beside each polygon of a volume; empty if not told
	pos         int      // of the next element in connect
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
	slices.SortStableFunc(sections, func(a, b *cgnsSection) int { return cmp.Compare(a.first, b.first) })
	for i, s := range sections {
		if i > 0 && s.first <= sections[i-1].last {
			return r.fail(s.place, cgnsRemedy, "its elements have numbers of another section")
		}
		if err := r.sectionFaces(z, s); err != nil {
			return err
		}
	}
	return nil
}

func (r *cgnsReader) section(z *cgnsZone, n *cgnsNode) (*cgnsSection, error) {
	s := &cgnsSection{node: n, place: z.place + ", section " + quote(n.name)}
	kind, err := r.ints(n)
	if err != nil {
		return nil, err
	}
	if kind.len() < 1 {
		return nil, r.fail(s.place, cgnsRemedy, "the section does not tell its type of element")
	}
	s.kind = kind.at(0)
	var ends cgnsInts
	for _, a := range []struct {
		name string
		into *cgnsInts
	}{
		{"ElementConnectivity", &s.connect}, {"ElementStartOffset", &s.offsets}, {"ParentElements", &s.parents},
		{"ElementRange", &ends},
	} {
		c, err := r.child(n, a.name)
		if err != nil {
			return nil, err
		}
		if c == nil {
			continue
		}
		if *a.into, err = r.ints(c); err != nil {
			return nil, err
		}
	}
	if s.connect.len() == 0 {
		return nil, r.fail(s.place, cgnsRemedy, "the section has no ElementConnectivity")
	}
	if ends.len() != 2 {
		return nil, r.fail(s.place, cgnsRemedy, "the section has no ElementRange of two numbers")
	}
	s.first, s.last = ends.at(0), ends.at(1)
	if s.first < 1 || s.last < s.first || s.last-s.first >= int64(s.connect.len()) {
		return nil, r.fail(s.place, cgnsRemedy, "the range of elements from %d to %d makes no sense", s.first, s.last)
	}
	return s, nil
}

// sectionFaces adds a section's faces to the zone; sections of lines and of cells have none.
func (r *cgnsReader) sectionFaces(z *cgnsZone, s *cgnsSection) error {
	shape, fixed := cgnsShapes[s.kind]
	switch {
	case fixed && shape.corners == 0, s.kind == cgnsPolyhedron:
		return nil
	case !fixed && s.kind != cgnsMixed && s.kind != cgnsPolygon:
		return r.fail(s.place, "write triangles, quadrilaterals, mixed elements or polygons",
			"elements of type %d are not read", s.kind)
	}
	count := int(s.last - s.first + 1)
	inner := s.kind == cgnsPolygon && z.volume && s.parents.len() == 2*count
	z.room(min(count, maxTriangles), min(s.connect.len(), 3*maxTriangles))
	points := int64(z.points())
	for i := range count {
		at, corners := s.next(i, shape)
		if corners < 0 {
			return r.fail(s.place, cgnsRemedy, "element %d makes no sense, or the connectivity ends before it",
				s.first+int64(i))
		}
		if corners < 3 || inner && s.parents.at(i) != 0 && s.parents.at(i+count) != 0 {
			continue // a line or a cell among mixed elements, or a polygon between two cells
		}
		for k := range corners {
			p := s.connect.at(at + k)
			if p < 1 || p > points {
				return r.fail(s.place, cgnsRemedy, "element %d names point %d of %d", s.first+int64(i), p, points)
			}
			z.corners = append(z.corners, int32(p-1))
		}
		z.close(s.first + int64(i))
		if z.triangles() > maxTriangles {
			return r.tooLarge(z)
		}
	}
	return nil
}

// next returns where in connect the corners of element i are and how many it has if it is a face, 0 if not; -1 for
// nonsense.
func (s *cgnsSection) next(i int, shape cgnsShape) (at, corners int) {
	at = s.pos
	n := int64(shape.nodes)
	switch s.kind {
	case cgnsMixed:
		if at >= s.connect.len() {
			return 0, -1
		}
		mixed, ok := cgnsShapes[s.connect.at(at)]
		if !ok {
			return 0, -1
		}
		at, n, shape.corners = at+1, int64(mixed.nodes), mixed.corners
	case cgnsPolygon:
		switch {
		case s.offsets.len() > 0:
			if i+1 >= s.offsets.len() || s.offsets.at(i) != int64(at) {
				return 0, -1
			}
			n = s.offsets.at(i+1) - int64(at)
		case at >= s.connect.len(): // before version 4 of the standard every polygon began with its number of corners
			return 0, -1
		default:
			n = s.connect.at(at)
			at++
		}
		if n < 0 || n > int64(s.connect.len()) {
			return 0, -1
		}
		shape.corners = int(n)
	}
	if n > int64(s.connect.len()-at) {
		return 0, -1
	}
	s.pos = at + int(n)
	return at, shape.corners
}
