package format

import (
	"shearprint/field"
)

// PLY 1.0: a text header that lists elements with their properties, then the elements' values in that order, as text or
// in either byte order (G. Turk, The PLY polygon file format, 1994; the type names char..double and int8..float64 are
// both in use).

// plyHeader is what the header says.
type plyHeader struct {
	source
	order    plyOrder
	elements []plyElement
	comments []string
	body     int // offset of the first byte after the header
	lines    int // lines of the header
}

type plyOrder int

const (
	plyASCII plyOrder = iota
	plyLittle
	plyBig
)

type plyElement struct {
	name  string
	count int
	props []plyProp
	size  int  // bytes of one element if none of its properties is a list
	list  bool // at least one property is a list
}

type plyProp struct {
	name   string
	typ    plyType
	list   bool
	length plyType // type of a list's length
	offset int     // from the element's start, where no list precedes
}

// plyType is a scalar type; its value is the index into plyTypes.
type plyType int

const (
	plyInt8 plyType = iota
	plyUint8
	plyInt16
	plyUint16
	plyInt32
	plyUint32
	plyFloat32
	plyFloat64
)

var plyTypeNames = map[string]plyType{
	"char": plyInt8, "int8": plyInt8, "uchar": plyUint8, "uint8": plyUint8,
	"short": plyInt16, "int16": plyInt16, "ushort": plyUint16, "uint16": plyUint16,
	"int": plyInt32, "int32": plyInt32, "uint": plyUint32, "uint32": plyUint32,
	"float": plyFloat32, "float32": plyFloat32, "double": plyFloat64, "float64": plyFloat64,
}

var plySizes = [...]int{1, 1, 2, 2, 4, 4, 4, 8}

func readPLY(name string, data []byte, opt Options) (field.Raw, error) {
	h := &plyHeader{source: source{name}}
	if err := h.parse(data); err != nil {
		return field.Raw{}, err
	}
	r := plyReader{plyHeader: h, opt: opt}
	if err := r.plan(); err != nil {
		return field.Raw{}, err
	}
	var err error
	if h.order == plyASCII {
		err = r.readText(data)
	} else {
		err = r.readBinary(data[h.body:])
	}
	if err != nil {
		return field.Raw{}, err
	}
	return r.finish()
}

// plyReader carries values from the body to the run.
type plyReader struct {
	*plyHeader
	opt          Options
	vertex, face *plyElement
	index        int // the face's property with the corners; -1 where there is none
	atPoint      columns
	atFace       columns
	raw          field.Raw
	thin         int // polygons of fewer than three corners
	firstThin    int
}

// plan decides which properties matter, and checks the counts against the bytes of the body.
func (r *plyReader) plan() error {
	for i := range r.elements {
		switch e := &r.elements[i]; {
		case e.name == "vertex" && r.vertex == nil:
			r.vertex = e
		case e.name == "face" && r.face == nil:
			r.face = e
		}
	}
	if r.vertex == nil {
		return r.fail("header", "export points with x y z", "there is no element vertex")
	}
	if r.vertex.list {
		return r.fail("header", "export without it", "the vertices have a list property")
	}
	r.atPoint = matchColumns(r.source, propNames(r.vertex), r.opt)
	r.atFace = matchColumns(r.source, propNames(r.face), r.opt)
	if err := missingNames(r.atFace, r.atPoint); err != nil {
		return err
	}
	if r.atPoint.x[0] < 0 || r.atPoint.x[2] < 0 {
		return r.fail("header", "export points with x y z", "the vertices have no properties x y z")
	}
	r.index = -1
	if r.face != nil {
		for i, p := range r.face.props {
			if p.list && (p.name == "vertex_indices" || p.name == "vertex_index") && r.index < 0 {
				r.index = i
			}
		}
		if r.index >= 0 && r.face.props[r.index].typ >= plyFloat32 {
			return r.fail("header", "export integers", "the faces' corners are not integers")
		}
	}
	return nil
}

func propNames(e *plyElement) []string {
	if e == nil {
		return nil
	}
	names := make([]string, len(e.props))
	for i, p := range e.props {
		if !p.list {
			names[i] = p.name
		}
	}
	return names
}
