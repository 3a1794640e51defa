package hdf5

import (
	"bytes"
	"compress/zlib"
	"io"
)

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
	index   uint8  // how chunks are found: 0 by a version 1 B-tree, 1 a single chunk, 2 in a row
	stored  uint64 // bytes of a filtered single chunk
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

// chunkDims reads the chunk's dimensions, of which the last is the element's size.
func (l *layout) chunkDims(c *cursor, rank, width int) {
	for i := range rank {
		n := c.number(width)
		if i == rank-1 {
			break
		}
		if n == 0 || n > 1<<31 {
			c.err = wrong(c.place(), "a chunk of %d elements makes no sense", n)
			return
		}
		l.chunk = append(l.chunk, int(n))
	}
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

// newChunks reads the chunk indices of version 4.
func (f *File) newChunks(c *cursor, l *layout) error {
	flags := c.u8()
	rank, width := int(c.u8()), int(c.u8())
	if width < 1 || width > 8 {
		return wrong(c.place(), "chunk dimensions of %d bytes make no sense", width)
	}
	l.chunkDims(c, rank, width)
	l.index = c.u8()
	switch l.index {
	case 1:
		if flags&2 != 0 {
			l.stored = c.length()
			c.skip(4)
		}
	case 2:
	default:
		return wrong(c.place(), "this kind of chunk index is not read; write the file for HDF5 1.8, or without chunks")
	}
	l.address = c.address()
	return c.err
}

// gather puts the chunks together.
func (o *Object) gather(v *Value, l *layout, size int) error {
	if len(l.chunk) != len(v.Dims) || len(v.Dims) == 0 {
		return wrong(o.address, "%q has %d dimensions but chunks of %d", o.Name, len(v.Dims), len(l.chunk))
	}
	chunkSize := v.Size
	for i, n := range l.chunk {
		// A chunk may be larger than the dataset, but not beyond reason.
		if chunkSize > maxChunk/n {
			return wrong(o.address, "a chunk of %q is larger than %d bytes", o.Name, maxChunk)
		}
		chunkSize *= l.chunk[i]
	}
	filters, err := o.filters()
	if err != nil {
		return err
	}
	v.data = make([]byte, size)
	if l.address == undefined {
		return nil
	}
	left := v.chunkCount(l.chunk)
	put := func(address, stored uint64, mask uint32, offset []uint64) error {
		if left--; left < 0 {
			return wrong(address, "%q has more chunks than its size has room for", o.Name)
		}
		if o.f.chunks -= chunkSize; o.f.chunks < 0 {
			return wrong(address, "the file's chunks have more than %d bytes", maxChunks)
		}
		c := o.f.block(address, stored)
		if c.err != nil {
			return c.err
		}
		raw, err := filters.undo(c.data, mask, chunkSize, v.Size)
		if err != nil {
			return wrong(address, "a chunk of %q: %v", o.Name, err)
		}
		v.place(raw, l.chunk, offset)
		return nil
	}
	switch l.index {
	case 1:
		stored := l.stored
		if stored == 0 {
			stored = uint64(chunkSize)
		}
		return put(l.address, stored, 0, make([]uint64, len(l.chunk)))
	case 2:
		return v.inRow(l, uint64(chunkSize), put)
	}
	return o.f.oldTree(l.address, len(l.chunk)+1, func(key *cursor, child uint64) error {
		stored, mask := uint64(key.u32()), key.u32()
		offset := make([]uint64, len(l.chunk))
		for i := range offset {
			offset[i] = key.number(8)
		}
		if key.err != nil {
			return key.err
		}
		return put(child, stored, mask, offset)
	})
}

// chunkCount returns how many chunks a dataset may have.
func (v *Value) chunkCount(chunk []int) int {
	n := 1
	for k, d := range v.Dims {
		n *= (d + chunk[k] - 1) / chunk[k] // at most the number of elements
	}
	return n
}

// maxChunk bounds one chunk's bytes; libraries allow no more than 4 GiB, and write some megabytes.
const maxChunk = 1 << 28

// inRow reads chunks that lie one after the other, the last dimension running fastest.
func (v *Value) inRow(l *layout, chunkSize uint64, put func(address, stored uint64, mask uint32, offset []uint64) error) error {
	offset := make([]uint64, len(l.chunk))
	for address := l.address; ; address += chunkSize {
		if err := put(address, chunkSize, 0, offset); err != nil {
			return err
		}
		k := len(offset) - 1
		for ; k >= 0; k-- {
			offset[k] += uint64(l.chunk[k])
			if offset[k] < uint64(v.Dims[k]) {
				break
			}
			offset[k] = 0
		}
		if k < 0 {
			return nil
		}
	}
}

// place copies a chunk to where it belongs, leaving out what lies beyond the dataset.
func (v *Value) place(raw []byte, chunk []int, offset []uint64) {
	last := len(chunk) - 1
	for k, n := range v.Dims {
		if offset[k] >= uint64(n) {
			return
		}
	}
	run := min(chunk[last], v.Dims[last]-int(offset[last])) * v.Size
	at := make([]int, len(chunk)) // within the chunk
	for from := 0; from+run <= len(raw); from += chunk[last] * v.Size {
		inside, to := true, 0
		for k := range chunk {
			x := int(offset[k]) + at[k]
			inside = inside && x < v.Dims[k]
			to = to*v.Dims[k] + x
		}
		if inside {
			copy(v.data[to*v.Size:], raw[from:from+run])
		}
		k := last - 1
		for ; k >= 0; k-- {
			at[k]++
			if at[k] < chunk[k] {
				break
			}
			at[k] = 0
		}
		if k < 0 {
			return
		}
	}
}

// pipeline lists a dataset's filters in the order in which they were applied.
type pipeline []uint16

// Filters that are known.
const (
	deflateFilter  = 1
	shuffleFilter  = 2
	fletcherFilter = 3
)

func (o *Object) filters() (pipeline, error) {
	m, ok := o.find(filterMessage)
	if !ok {
		return nil, nil
	}
	c := o.f.inside(m)
	version, count := c.u8(), int(c.u8())
	if version == 1 {
		c.skip(6)
	}
	var p pipeline
	for range count {
		id := c.u16()
		nameSize := 0
		if version == 1 || id >= 256 {
			nameSize = int(c.u16())
		}
		c.skip(2)
		values := int(c.u16())
		if version == 1 {
			nameSize = (nameSize + 7) / 8 * 8
			values += values % 2
		}
		c.skip(nameSize + 4*values)
		if c.err == nil && (id < deflateFilter || id > fletcherFilter) {
			return nil, wrong(m.at, "%q is packed with filter %d, which is not read; write it with deflate or unpacked", o.Name, id)
		}
		p = append(p, id)
	}
	return p, c.err
}

// undo unpacks a chunk. A bit set in the mask says that the filter of that number was left out.
func (p pipeline) undo(b []byte, mask uint32, size, element int) ([]byte, error) {
	for k := len(p) - 1; k >= 0; k-- {
		if k < 32 && mask>>k&1 != 0 {
			continue
		}
		switch p[k] {
		case fletcherFilter:
			if len(b) < 4 {
				return nil, io.ErrUnexpectedEOF
			}
			b = b[:len(b)-4]
		case deflateFilter:
			z, err := zlib.NewReader(bytes.NewReader(b))
			if err != nil {
				return nil, err
			}
			out := make([]byte, size)
			if _, err := io.ReadFull(z, out); err != nil {
				return nil, err
			}
			b = out
		case shuffleFilter:
			b = unshuffle(b, element)
		}
	}
	if len(b) < size {
		return nil, io.ErrUnexpectedEOF
	}
	return b[:size], nil
}

// unshuffle puts the bytes of each element together again.
func unshuffle(b []byte, element int) []byte {
	n := len(b) / element
	out := make([]byte, len(b))
	for k := range element {
		for i := range n {
			out[i*element+k] = b[k*n+i]
		}
	}
	copy(out[n*element:], b[n*element:])
	return out
}
