package hdf5

import "math"

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
	case singleIndex:
		if flags&2 != 0 {
			l.stored, l.mask = c.length(), c.u32()
		}
	case implicitIndex:
	case fixedIndex: // the sizes that follow are told again by the index itself
		c.skip(1)
	case extensibleIndex:
		c.skip(5)
	case treeIndex:
		c.skip(6)
	default:
		return wrong(c.place(), "chunks are indexed in an unknown way (%d)", l.index)
	}
	l.edges = flags&1 != 0
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
	if l.address == undefined || size == 0 {
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
		if l.edges && !v.holds(l.chunk, offset) {
			mask = math.MaxUint32
		}
		raw, err := filters.undo(c.data, mask, chunkSize, v.Size)
		if err != nil {
			return wrong(address, "a chunk of %q: %v", o.Name, err)
		}
		v.place(raw, l.chunk, offset)
		return nil
	}
	c := &chunks{f: o.f, l: l, dims: v.Dims, size: uint64(chunkSize), filtered: len(filters) > 0, put: put}
	switch l.index {
	case singleIndex:
		stored := l.stored
		if stored == 0 {
			stored = uint64(chunkSize)
		}
		return put(l.address, stored, l.mask, make([]uint64, len(l.chunk)))
	case implicitIndex:
		return v.inRow(l, uint64(chunkSize), put)
	case fixedIndex:
		c.arrange(v.limits)
		return c.fixedArray()
	case extensibleIndex:
		c.arrange(v.limits)
		return c.extensibleArray()
	case treeIndex:
		return c.newTree()
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

// holds tells whether a chunk lies wholly within the dataset.
func (v *Value) holds(chunk []int, offset []uint64) bool {
	for k, n := range v.Dims {
		if offset[k]+uint64(chunk[k]) > uint64(n) {
			return false
		}
	}
	return true
}

// maxChunk bounds one chunk's bytes; libraries allow no more than 4 GiB, and write some megabytes.
const maxChunk = 1 << 28

// inRow reads chunks that lie one after the other, the last dimension running fastest.
func (v *Value) inRow(l *layout, chunkSize uint64,
	put func(address, stored uint64, mask uint32, offset []uint64) error) error {
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
