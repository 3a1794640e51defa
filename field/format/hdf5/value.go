package hdf5

import (
	"encoding/binary"
	"math"
)

// Kind is what a value's elements are.
type Kind uint8

// The kinds of elements that are read.
const (
	Integer Kind = iota // signed or not
	Float
	Text // bytes of a fixed-length string
)

// Value is the contents of a dataset or an attribute.
type Value struct {
	Kind Kind
	Dims []int // empty for a single element
	Size int   // bytes of an element; the length of a Text

	order  binary.ByteOrder
	signed bool
	limits []uint64 // to which each of Dims may grow; undefined for any
	data   []byte
}

// Count returns the number of elements.
func (v *Value) Count() int { return len(v.data) / max(1, v.Size) }

// Bytes returns the raw bytes: the text of a Text, or of one-byte integers, which is how CGNS stores text.
func (v *Value) Bytes() []byte { return v.data }

// Float returns element i of numbers.
func (v *Value) Float(i int) float64 {
	b := v.data[i*v.Size:]
	switch {
	case v.Kind == Float && v.Size == 4:
		return float64(math.Float32frombits(v.order.Uint32(b)))
	case v.Kind == Float:
		return math.Float64frombits(v.order.Uint64(b))
	}
	return float64(v.Int(i))
}

// Int returns element i of integers; numbers above the largest int64 come out negative.
func (v *Value) Int(i int) int64 {
	b := v.data[i*v.Size:]
	switch v.Size {
	case 1:
		if v.signed {
			return int64(int8(b[0]))
		}
		return int64(b[0])
	case 2:
		if v.signed {
			return int64(int16(v.order.Uint16(b)))
		}
		return int64(v.order.Uint16(b))
	case 4:
		if v.signed {
			return int64(int32(v.order.Uint32(b)))
		}
		return int64(v.order.Uint32(b))
	}
	return int64(v.order.Uint64(b))
}

// readType fills the kind, size and byte order from a datatype message.
func (v *Value) readType(c *cursor) error {
	at := c.place()
	class := c.u8()
	flags := c.number(3)
	size := c.u32()
	if c.err != nil {
		return c.err
	}
	v.order = binary.LittleEndian
	if flags&1 != 0 {
		v.order = binary.BigEndian
	}
	v.Size = int(size)
	switch class & 15 {
	case 0:
		v.Kind, v.signed = Integer, flags&8 != 0
		offset, precision := c.u16(), c.u16()
		if (size != 1 && size != 2 && size != 4 && size != 8) || offset != 0 || uint32(precision) != 8*size {
			return wrong(at, "integers of %d bytes, %d bits of them used, are not read", size, precision)
		}
	case 1:
		v.Kind = Float
		if size != 4 && size != 8 || flags&0x40 != 0 {
			return wrong(at, "floating-point numbers of %d bytes are not read", size)
		}
		c.skip(2 + 2)
		exponentAt, exponent := c.u8(), c.u8()
		c.u8()
		mantissa := c.u8()
		ieee := exponentAt == 23 && exponent == 8 && mantissa == 23 && size == 4 ||
			exponentAt == 52 && exponent == 11 && mantissa == 52 && size == 8
		if c.err == nil && !ieee {
			return wrong(at, "floating-point numbers other than IEEE 754's are not read")
		}
	case 3:
		v.Kind = Text
		if size == 0 {
			return wrong(at, "strings of no length are not read")
		}
	default:
		return wrong(at, "elements of class %d are not read; there are integers, floating-point numbers and fixed strings",
			class&15)
	}
	return c.err
}

// maxElements bounds the product of the dimensions: what no file that can be held has.
const maxElements = 1 << 36

// readSpace fills the dimensions from a dataspace message and returns the number of elements.
func (v *Value) readSpace(c *cursor) (int, error) {
	at := c.place()
	version, rank := c.u8(), int(c.u8())
	limited := c.u8()&1 != 0
	null := false
	switch version {
	case 1:
		c.skip(5)
	case 2:
		null = c.u8() == 2
	default:
		return 0, wrong(at, "dataspace version %d is not known", version)
	}
	count := uint64(1)
	for range rank {
		n := c.length()
		if n > math.MaxInt32 || n > 0 && count > maxElements/n {
			return 0, wrong(at, "a dimension of %d is more than is read", n)
		}
		count *= n
		v.Dims = append(v.Dims, int(n))
		v.limits = append(v.limits, n)
	}
	for k := 0; limited && k < rank; k++ {
		v.limits[k] = max(v.limits[k], c.limit())
	}
	if null {
		count = 0
	}
	return int(count), c.err
}

// Attribute returns the attribute of that name; nil if there is none. Others may be of kinds that are not read.
func (o *Object) Attribute(name string) (*Value, error) {
	for _, m := range o.messages {
		switch m.kind {
		case attributeMessage:
			if m.shared {
				continue
			}
			got, v, err := o.f.readAttribute(o.f.inside(m))
			if got == name {
				return v, err
			}
		case attributeInfo:
			v, err := o.denseAttribute(m, name)
			if v != nil || err != nil {
				return v, err
			}
		}
	}
	return nil, nil
}

func (o *Object) denseAttribute(m message, name string) (*Value, error) {
	c := o.f.inside(m)
	c.skip(1)
	if c.u8()&1 != 0 {
		c.skip(2)
	}
	heap, index := c.address(), c.address()
	if c.err != nil || heap == undefined {
		return nil, c.err
	}
	objects, err := o.f.heapObjects(heap, index, 0) // a record: heap id, flags, order, hash
	if err != nil {
		return nil, err
	}
	for _, a := range objects {
		got, v, err := o.f.readAttribute(a)
		if got == name {
			return v, err
		}
	}
	return nil, nil
}

// readAttribute reads an attribute message.
func (f *File) readAttribute(c *cursor) (string, *Value, error) {
	at := c.place()
	version := c.u8()
	flags := c.u8()
	nameSize, typeSize, spaceSize := int(c.u16()), int(c.u16()), int(c.u16())
	pad := 1
	switch version {
	case 1:
		pad, flags = 8, 0
	case 2:
	case 3:
		c.skip(1)
	default:
		return "", nil, wrong(at, "attribute version %d is not known", version)
	}
	if flags != 0 {
		return "", nil, wrong(at, "an attribute with a shared type is not read")
	}
	padded := func(n int) []byte {
		b := c.take((n + pad - 1) / pad * pad)
		return b[:min(n, len(b))]
	}
	name := padded(nameSize)
	typeAt := c.place()
	kind, space := padded(typeSize), padded(spaceSize)
	if c.err != nil {
		return "", nil, c.err
	}
	v := &Value{}
	count := 0
	err := v.readType(&cursor{f: f, data: kind, from: typeAt})
	if err == nil {
		count, err = v.readSpace(&cursor{f: f, data: space, from: typeAt})
	}
	text := string(name)
	for len(text) > 0 && text[len(text)-1] == 0 {
		text = text[:len(text)-1]
	}
	if err != nil {
		return text, nil, err
	}
	v.data = c.take(count * v.Size)
	return text, v, c.err
}
