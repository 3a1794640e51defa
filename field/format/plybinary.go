package format

import (
	"encoding/binary"
	"fmt"
	"math"

	"shearprint/field/r3"
)

// readBinary reads the body of a binary file.
func (r *plyReader) readBinary(body []byte) error {
	var order binary.ByteOrder = binary.LittleEndian
	if r.order == plyBig {
		order = binary.BigEndian
	}
	for i := range r.elements {
		e := &r.elements[i]
		least := e.size
		for _, p := range e.props {
			if p.list {
				least += plySizes[p.length]
			}
		}
		if least == 0 {
			continue
		}
		if e.count > len(body)/least {
			return r.tooShort(e, len(body))
		}
		var err error
		switch {
		case e == r.vertex:
			r.binaryVertices(body, order)
			body = body[e.count*e.size:]
		case !e.list && e != r.face:
			body = body[e.count*e.size:]
		default:
			body, err = r.binaryFaces(e, body, order)
		}
		if err != nil {
			return err
		}
	}
	return nil
}

// binaryVertices reads column after column: the type is decided once for each.
func (r *plyReader) binaryVertices(body []byte, order binary.ByteOrder) {
	e := r.vertex
	r.allocatePoints(e.count)
	column := func(col int, set func(i int, x float64)) {
		if col < 0 || e.count == 0 {
			return
		}
		p := e.props[col]
		eachValue(body[p.offset:], e.size, e.count, p.typ, order, set)
	}
	vector := func(cols [3]int, v []r3.Vec) {
		column(cols[0], func(i int, x float64) { v[i].X = x })
		column(cols[1], func(i int, x float64) { v[i].Y = x })
		column(cols[2], func(i int, x float64) { v[i].Z = x })
	}
	vector(r.atPoint.x, r.raw.Points)
	if r.raw.Tau != nil {
		vector(r.atPoint.tau, r.raw.Tau)
	}
	if r.raw.P != nil {
		column(r.atPoint.p, func(i int, x float64) { r.raw.P[i] = x })
	}
	if r.raw.Cp != nil {
		column(r.atPoint.cp, func(i int, x float64) { r.raw.Cp[i] = x })
	}
}

// eachValue calls set with the values of one property; data begins at the first of them.
func eachValue(data []byte, stride, n int, typ plyType, order binary.ByteOrder, set func(i int, x float64)) {
	switch {
	case typ == plyFloat32 && order == binary.LittleEndian:
		for i := range n {
			set(i, float64(math.Float32frombits(little.Uint32(data[i*stride:]))))
		}
	case typ == plyFloat64 && order == binary.LittleEndian:
		for i := range n {
			set(i, math.Float64frombits(little.Uint64(data[i*stride:])))
		}
	default:
		for i := range n {
			set(i, scalar(data[i*stride:], typ, order))
		}
	}
}

// scalar reads one value of any type.
func scalar(b []byte, typ plyType, order binary.ByteOrder) float64 {
	switch typ {
	case plyInt8:
		return float64(int8(b[0]))
	case plyUint8:
		return float64(b[0])
	case plyInt16:
		return float64(int16(order.Uint16(b)))
	case plyUint16:
		return float64(order.Uint16(b))
	case plyInt32:
		return float64(int32(order.Uint32(b)))
	case plyUint32:
		return float64(order.Uint32(b))
	case plyFloat32:
		return float64(math.Float32frombits(order.Uint32(b)))
	}
	return math.Float64frombits(order.Uint64(b))
}

// binaryFaces reads an element with lists, or the faces; faces are added to the run, other elements are skipped.
func (r *plyReader) binaryFaces(e *plyElement, body []byte, order binary.ByteOrder) (rest []byte, err error) {
	isFace := e == r.face
	first := 0
	if isFace {
		first, body = r.plainFaces(body)
	}
	row := make([]float64, len(e.props))
	var corners []int32
	short := func(i int) error {
		return r.fail(fmt.Sprintf("%s %d", quote(e.name), i), "copy the file again", "the file ends too early")
	}
	for i := first; i < e.count; i++ {
		corners = corners[:0]
		for k, p := range e.props {
			if !p.list {
				size := plySizes[p.typ]
				if len(body) < size {
					return nil, short(i)
				}
				row[k] = scalar(body, p.typ, order)
				body = body[size:]
				continue
			}
			if len(body) < plySizes[p.length] {
				return nil, short(i)
			}
			n := int(scalar(body, p.length, order))
			body = body[plySizes[p.length]:]
			size := plySizes[p.typ]
			if n < 0 || n > len(body)/size {
				return nil, r.fail(fmt.Sprintf("%s %d", quote(e.name), i), "copy the file again",
					"a list of %d values cannot be in the %d bytes that are left", n, len(body))
			}
			if isFace && k == r.index {
				for c := range n {
					x := scalar(body[c*size:], p.typ, order)
					if !(x >= 0 && x < float64(r.vertex.count)) {
						return nil, r.badCorner(i, x)
					}
					corners = append(corners, int32(x))
				}
			}
			body = body[n*size:]
		}
		if isFace {
			r.addFace(i, corners, row)
		}
	}
	return body, nil
}

func (r *plyReader) badCorner(face int, corner float64) error {
	return r.fail(fmt.Sprintf("face %d", face), "export again", "a corner is point %.0f of %d", corner, r.vertex.count)
}

// plainFaces reads the usual faces, a byte with the number of corners and little-endian 32-bit numbers, up to the first
// that is not in order; binaryFaces goes on from there. It returns how many it took and what is left.
func (r *plyReader) plainFaces(body []byte) (n int, rest []byte) {
	e := r.face
	if r.order != plyLittle || len(e.props) != 1 || r.index != 0 || e.props[0].length > plyUint8 ||
		e.props[0].typ != plyInt32 && e.props[0].typ != plyUint32 {
		return 0, body
	}
	points := uint32(r.vertex.count)
	const triangle = 1 + 3*4
	r.raw.Tris = make([][3]int32, 0, min(e.count, len(body)/triangle))
	var corners [4]int32
	for ; n < e.count && len(body) >= triangle; n++ {
		k := int(body[0])
		if k != 3 && k != 4 || len(body) < 1+4*k {
			break
		}
		for c := range k {
			v := little.Uint32(body[1+4*c:])
			if v >= points {
				return n, body
			}
			corners[c] = int32(v)
		}
		if k == 3 && r.raw.Face == nil {
			r.raw.Tris = append(r.raw.Tris, [3]int32{corners[0], corners[1], corners[2]})
		} else {
			fan(&r.raw, n, corners[:k])
		}
		body = body[1+4*k:]
	}
	return n, body
}
