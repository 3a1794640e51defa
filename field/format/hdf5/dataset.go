package hdf5

// Ways in which a dataset is stored.
const (
	compact    = 0
	contiguous = 1
	chunked    = 2
)

// layout tells where a dataset's bytes are.
type layout struct {
	class   uint8
	address uint64
	size    uint64
	data    []byte // of a compact one
	chunk   []int  // of a chunked one: elements along each dimension
	index   uint8  // how chunks are found
	stored  uint64 // bytes of a filtered single chunk
	mask    uint32 // filters that a single chunk went without
	edges   bool   // chunks that reach beyond the dataset went without filters
}

// Dataset reads the whole contents; an object that is no dataset is an error. No more than limit bytes are made.
func (o *Object) Dataset(limit int) (*Value, error) {
	var at [3]message
	for i, kind := range [3]uint16{datatypeMessage, dataspaceMessage, layoutMessage} {
		m, ok := o.find(kind)
		switch {
		case !ok:
			return nil, wrong(o.address, "%q is no dataset", o.Name)
		case m.shared:
			return nil, wrong(m.at, "the type of %q is stored elsewhere, which is not read", o.Name)
		}
		at[i] = m
	}
	v := &Value{}
	if err := v.readType(o.f.inside(at[0])); err != nil {
		return nil, err
	}
	count, err := v.readSpace(o.f.inside(at[1]))
	if err != nil {
		return nil, err
	}
	if count > limit/v.Size {
		return nil, wrong(o.address, "%q holds %d elements of %d bytes, more than the %d bytes that are left to read it",
			o.Name, count, v.Size, limit)
	}
	l, err := o.f.readLayout(o.f.inside(at[2]))
	if err != nil {
		return nil, err
	}
	return v, o.fill(v, l, count*v.Size)
}

// fill gets the bytes.
func (o *Object) fill(v *Value, l *layout, size int) error {
	switch l.class {
	case compact:
		v.data = l.data
	case contiguous:
		if l.address == undefined || size == 0 { // nothing was ever written: the fill value, nought
			v.data = make([]byte, size)
			return nil
		}
		c := o.f.block(l.address, uint64(size))
		v.data = c.data
		if c.err != nil {
			return c.err
		}
	default:
		return o.gather(v, l, size)
	}
	if len(v.data) < size {
		return wrong(o.address, "%q announces %d bytes but stores %d", o.Name, size, len(v.data))
	}
	v.data = v.data[:size]
	return nil
}

func (f *File) readLayout(c *cursor) (*layout, error) {
	at := c.place()
	l := &layout{}
	version := c.u8()
	switch version {
	case 1, 2:
		return l, f.oldLayout(c, l)
	case 3, 4:
	default:
		return nil, wrong(at, "layout version %d is not known", version)
	}
	l.class = c.u8()
	switch l.class {
	case compact:
		l.data = c.take(int(c.u16()))
	case contiguous:
		l.address, l.size = c.address(), c.length()
	case chunked:
		if version == 3 {
			rank := int(c.u8())
			l.address = c.address()
			l.chunkDims(c, rank, 4)
			break
		}
		return l, f.newChunks(c, l)
	default:
		return nil, wrong(at, "a dataset of storage class %d is not read", l.class)
	}
	return l, c.err
}

// oldLayout reads versions 1 and 2.
func (f *File) oldLayout(c *cursor, l *layout) error {
	rank := int(c.u8())
	l.class = c.u8()
	c.skip(5)
	if l.class != compact {
		l.address = c.address()
	}
	if l.class == chunked {
		l.chunkDims(c, rank, 4)
		return c.err
	}
	c.skip(4 * rank)
	if l.class == compact {
		n := c.u32()
		if uint64(n) > uint64(c.left()) {
			return wrong(c.place(), "%d bytes do not fit the header", n)
		}
		l.data = c.take(int(n))
	}
	return c.err
}
