package format

import (
	"bytes"
	"fmt"
	"strconv"
	"strings"

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

// maxHeader bounds the header: real ones have a few kilobytes.
const maxHeader = 1 << 20

func (h *plyHeader) parse(data []byte) error {
	seenFormat := false
	for {
		line, next, ok := h.nextLine(data)
		if !ok {
			return h.fail(fmt.Sprintf("line %d", h.lines), "copy the file again", "the header does not end with end_header")
		}
		h.body = next
		h.lines++
		word := strings.Fields(line)
		if len(word) == 0 {
			continue
		}
		var err error
		switch word[0] {
		case "ply", "obj_info":
		case "comment":
			h.comments = append(h.comments, strings.TrimSpace(strings.TrimPrefix(strings.TrimSpace(line), "comment")))
		case "format":
			seenFormat = true
			err = h.parseFormat(word)
		case "element":
			err = h.parseElement(word, len(data))
		case "property":
			err = h.parseProperty(word)
		case "end_header":
			if !seenFormat {
				return h.fail("header", "add the line: format ascii 1.0", "there is no format line")
			}
			return nil
		default:
			err = h.bad("unknown word %s", quote(word[0]))
		}
		if err != nil {
			return err
		}
	}
}

// nextLine returns the line at h.body and where the one after it starts. Lines end with LF, CR LF or CR.
func (h *plyHeader) nextLine(data []byte) (line string, next int, ok bool) {
	rest := data[h.body:min(len(data), maxHeader)]
	end := bytes.IndexAny(rest, "\r\n")
	if end < 0 {
		return "", 0, false
	}
	next = end + 1
	if rest[end] == '\r' && next < len(rest) && rest[next] == '\n' {
		next++
	}
	return string(rest[:end]), h.body + next, true
}

func (h *plyHeader) bad(what string, args ...any) error {
	return h.fail(fmt.Sprintf("line %d of the header", h.lines), "correct the header", what, args...)
}

func (h *plyHeader) parseFormat(word []string) error {
	if len(word) != 3 {
		return h.bad("a format line has three words")
	}
	orders := map[string]plyOrder{"ascii": plyASCII, "binary_little_endian": plyLittle, "binary_big_endian": plyBig}
	order, ok := orders[word[1]]
	if !ok || word[2] != "1.0" {
		return h.bad("format %s %s is not known", quote(word[1]), quote(word[2]))
	}
	h.order = order
	return nil
}

func (h *plyHeader) parseElement(word []string, size int) error {
	if len(word) != 3 {
		return h.bad("an element line has three words")
	}
	n, err := strconv.ParseUint(word[2], 10, 62)
	if err != nil {
		return h.bad("%s is not a count", quote(word[2]))
	}
	// Every element that has a property takes a byte at least; elements without properties take none, and no memory.
	if n > uint64(size) {
		return h.bad("%d elements %s cannot be in a file of %d bytes", n, quote(word[1]), size)
	}
	h.elements = append(h.elements, plyElement{name: word[1], count: int(n)})
	return nil
}

func (h *plyHeader) parseProperty(word []string) error {
	if len(h.elements) == 0 {
		return h.bad("a property comes before any element")
	}
	e := &h.elements[len(h.elements)-1]
	p := plyProp{offset: e.size}
	var ok bool
	switch {
	case len(word) == 5 && word[1] == "list":
		p.list, e.list = true, true
		if p.length, ok = plyTypeNames[word[2]]; !ok || p.length >= plyFloat32 {
			return h.bad("%s cannot be the type of a length", quote(word[2]))
		}
		if p.typ, ok = plyTypeNames[word[3]]; !ok {
			return h.bad("type %s is not known", quote(word[3]))
		}
		p.name = word[4]
	case len(word) == 3 && word[1] != "list":
		if p.typ, ok = plyTypeNames[word[1]]; !ok {
			return h.bad("type %s is not known", quote(word[1]))
		}
		p.name = word[2]
		e.size += plySizes[p.typ]
	default:
		return h.bad("a property line reads: property TYPE NAME, or: property list TYPE TYPE NAME")
	}
	for _, other := range e.props {
		if other.name == p.name {
			return h.bad("property %s comes twice", quote(p.name))
		}
	}
	if len(e.props) >= maxColumns {
		return h.bad("more than %d properties", maxColumns)
	}
	e.props = append(e.props, p)
	return nil
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
