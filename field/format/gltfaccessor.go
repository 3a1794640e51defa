package format

import (
	"fmt"
	"math"
)

// componentSize holds the bytes of a glTF component type; widths the components per element of the types that are read.
var (
	componentSize = map[int]int{5120: 1, 5121: 1, 5122: 2, 5123: 2, 5125: 4, 5126: 4}
	widths        = map[string]int{"SCALAR": 1, "VEC2": 2, "VEC3": 3, "VEC4": 4}
)

// accessor is a checked view of numbers.
type accessor struct {
	data       []byte // from the first element on; nil means zeros
	stride     int
	count      int
	width      int // components per element
	typ        int
	normalized bool
	sparse     *sparsePart
}

// sparsePart replaces elements: value k stands at the element that index k names.
type sparsePart struct{ index, value accessor }

// accessor checks accessor i and returns it. Whatever its numbers say, all its elements lie within the bytes of its
// view.
func (r *gltfReader) accessor(i int, what string) (accessor, error) {
	place := fmt.Sprintf("accessor %d (%s)", i, what)
	bad := func(say string, args ...any) (accessor, error) {
		return accessor{}, r.fail(place, "export again", say, args...)
	}
	if i < 0 || i >= len(r.doc.Accessors) {
		return bad("there are only %d accessors", len(r.doc.Accessors))
	}
	d := r.doc.Accessors[i]
	size, width := componentSize[d.ComponentType], widths[d.Type]
	if size == 0 || width == 0 {
		return bad("numbers of type %d %s are not read", d.ComponentType, quote(d.Type))
	}
	a := accessor{stride: size * width, count: d.Count, width: width, typ: d.ComponentType, normalized: d.Normalized}
	if d.Count < 0 || d.ByteOffset < 0 {
		return bad("its count or offset is negative")
	}
	if d.BufferView == nil {
		// Zeros need no bytes; a count that no file of this size could fill otherwise is refused.
		if d.Count > r.size {
			return bad("%d elements without data in a file of %d bytes", d.Count, r.size)
		}
	} else {
		view, stride, err := r.view(*d.BufferView, place)
		if err != nil {
			return a, err
		}
		if stride != 0 {
			if stride < a.stride {
				return bad("elements of %d bytes are %d apart", a.stride, stride)
			}
			a.stride = stride
		}
		if d.ByteOffset > len(view) {
			return bad("it begins after the end of its view")
		}
		a.data = view[d.ByteOffset:]
		if d.Count > 0 && (len(a.data) < size*width || (d.Count-1) > (len(a.data)-size*width)/a.stride) {
			return bad("%d elements cannot be in %d bytes", d.Count, len(a.data))
		}
	}
	if d.Sparse != nil {
		if err := r.readSparse(&a, d.Sparse, place); err != nil {
			return a, err
		}
	}
	return a, nil
}

// view returns the bytes of a buffer view.
func (r *gltfReader) view(i int, place string) (data []byte, stride int, err error) {
	if i < 0 || i >= len(r.doc.BufferViews) {
		return nil, 0, r.fail(place, "export again", "there is no buffer view %d", i)
	}
	v := r.doc.BufferViews[i]
	if v.Buffer < 0 || v.Buffer >= len(r.buffers) {
		return nil, 0, r.fail(place, "export again", "buffer view %d is in buffer %d of %d", i, v.Buffer, len(r.buffers))
	}
	b := r.buffers[v.Buffer]
	if v.ByteOffset < 0 || v.ByteLength < 0 || v.ByteOffset > len(b) || v.ByteLength > len(b)-v.ByteOffset {
		return nil, 0, r.fail(place, "export again", "buffer view %d is not within its buffer of %d bytes", i, len(b))
	}
	const maxStride = 252 // the specification's bound
	if v.ByteStride < 0 || v.ByteStride > maxStride {
		return nil, 0, r.fail(place, "export again", "buffer view %d has a stride of %d", i, v.ByteStride)
	}
	return b[v.ByteOffset : v.ByteOffset+v.ByteLength], v.ByteStride, nil
}

// readSparse reads the elements that replace those of the view.
func (r *gltfReader) readSparse(a *accessor, s *gltfSparse, place string) error {
	indices, _, err := r.view(s.Indices.BufferView, place)
	if err != nil {
		return err
	}
	values, _, err := r.view(s.Values.BufferView, place)
	if err != nil {
		return err
	}
	isize := componentSize[s.Indices.ComponentType]
	vsize := componentSize[a.typ] * a.width
	unsigned := s.Indices.ComponentType&1 == 1 && s.Indices.ComponentType != 5126
	// The specification has each element replaced once: many accessors over one large list cost no more than they hold.
	if isize == 0 || !unsigned || s.Count < 0 || s.Count > a.count || s.Indices.ByteOffset < 0 || s.Values.ByteOffset < 0 ||
		s.Indices.ByteOffset > len(indices) || s.Count > (len(indices)-s.Indices.ByteOffset)/isize ||
		s.Values.ByteOffset > len(values) || s.Count > (len(values)-s.Values.ByteOffset)/vsize {
		return r.fail(place, "export again", "its sparse part does not fit its views")
	}
	part := &sparsePart{
		index: accessor{data: indices[s.Indices.ByteOffset:], stride: isize, count: s.Count, width: 1,
			typ: s.Indices.ComponentType},
		value: accessor{data: values[s.Values.ByteOffset:], stride: vsize, count: s.Count, width: a.width, typ: a.typ,
			normalized: a.normalized},
	}
	for k := range s.Count {
		if at := int(part.index.at(k, 0)); at >= a.count {
			return r.fail(place, "export again", "its sparse part names element %d of %d", at, a.count)
		}
	}
	a.sparse = part
	return nil
}

// at returns component c of element i of the view, without sparse replacements.
func (a *accessor) at(i, c int) float64 {
	if a.data == nil {
		return 0
	}
	b := a.data[i*a.stride:]
	switch a.typ {
	case 5120:
		return a.scaled(float64(int8(b[c])), math.MaxInt8)
	case 5121:
		return a.scaled(float64(b[c]), math.MaxUint8)
	case 5122:
		return a.scaled(float64(int16(little.Uint16(b[2*c:]))), math.MaxInt16)
	case 5123:
		return a.scaled(float64(little.Uint16(b[2*c:])), math.MaxUint16)
	case 5125:
		return float64(little.Uint32(b[4*c:]))
	}
	return float64(math.Float32frombits(little.Uint32(b[4*c:])))
}

// plainFloats tells the usual case: single-precision numbers without replacements.
func (a *accessor) plainFloats() bool { return a.typ == 5126 && a.data != nil && a.sparse == nil }

// scaled applies the specification's rule for normalised integers.
func (a *accessor) scaled(x, most float64) float64 {
	if !a.normalized {
		return x
	}
	return math.Max(x/most, -1)
}

// column returns component c of all elements.
func (a *accessor) column(c int, set func(i int, x float64)) {
	if a.typ == 5126 && a.data != nil {
		for i := range a.count {
			set(i, float64(math.Float32frombits(little.Uint32(a.data[i*a.stride+4*c:]))))
		}
	} else {
		for i := range a.count {
			set(i, a.at(i, c))
		}
	}
	if s := a.sparse; s != nil {
		for k := range s.index.count {
			set(int(s.index.at(k, 0)), s.value.at(k, c))
		}
	}
}
