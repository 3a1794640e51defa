package hdf5

import "math/bits"

// The chunk indices of layout version 4, by the numbers that the layout has for them; version 3 has none and uses a
// version 1 B-tree.
const (
	singleIndex     = 1
	implicitIndex   = 2
	fixedIndex      = 3
	extensibleIndex = 4
	treeIndex       = 5
)

// chunks is a chunked dataset while its chunks are found.
type chunks struct {
	f        *File
	l        *layout
	dims     []int
	size     uint64 // bytes of an unpacked chunk
	filtered bool
	most     []uint64 // chunks along each dimension, in the order in which arrays count them
	order    []int    // the dimension that each of most belongs to, the slowest first
	put      func(address, stored uint64, mask uint32, offset []uint64) error
}

// arrange works out how arrays number the chunks: by the largest dimensions, one without limit being the slowest.
func (c *chunks) arrange(limits []uint64) {
	for k, n := range limits {
		if n == undefined {
			c.order = append(c.order, k)
		}
	}
	for k, n := range limits {
		if n != undefined {
			c.order = append(c.order, k)
		}
	}
	for _, k := range c.order {
		n := limits[k]
		if n == undefined {
			n = 1 // the slowest needs no count
		}
		c.most = append(c.most, (n-1)/uint64(c.l.chunk[k])+1) // no dimension is nought here
	}
}

// entry reads the place of the chunk of number i from an array's element; a chunk beyond the dataset is passed over.
func (c *chunks) entry(i uint64, element *cursor) error {
	if err := c.f.spend(element.place()); err != nil {
		return err
	}
	address, stored, mask := element.address(), c.size, uint32(0)
	if c.filtered {
		stored = element.number(element.left() - 4)
		mask = element.u32()
	}
	if element.err != nil || address == undefined {
		return element.err
	}
	offset := make([]uint64, len(c.dims))
	for k := len(c.order) - 1; k >= 0; k-- {
		at := i
		if k > 0 {
			at, i = i%c.most[k], i/c.most[k]
		}
		offset[c.order[k]] = at * uint64(c.l.chunk[c.order[k]])
	}
	for k, at := range offset {
		if at >= uint64(c.dims[k]) {
			return nil
		}
	}
	return c.put(address, stored, mask, offset)
}

// elements reads n elements of an array from number first on.
func (c *chunks) elements(b *cursor, first, n uint64, width int) error {
	for i := range n {
		at := b.place()
		element := &cursor{f: c.f, data: b.take(width), from: at}
		if b.err != nil {
			return b.err
		}
		if err := c.entry(first+i, element); err != nil {
			return err
		}
	}
	return nil
}

// widthFits tells whether an array's elements have a size that can be.
func (c *chunks) widthFits(width int) bool {
	if !c.filtered {
		return width == c.f.offsets
	}
	return width > c.f.offsets+4 && width <= c.f.offsets+4+8
}

const checksumSize = 4

// paged reads a data block of n elements that is cut into pages, each with a checksum; has tells which pages were
// written.
func (c *chunks) paged(b *cursor, first, n, page uint64, width int, has func(page uint64) bool) error {
	for k := uint64(0); k*page < n; k++ {
		m := min(page, n-k*page)
		if !has(k) {
			b.skip(int(min(m, maxElements))*width + checksumSize)
		} else if err := c.elements(b, first+k*page, m, width); err != nil {
			return err
		} else {
			b.skip(checksumSize)
		}
		if b.err != nil {
			return b.err
		}
	}
	return nil
}

// bit tells bit i of a bitmap, the highest of each byte first.
func bit(bitmap []byte, i uint64) bool { return bitmap[i/8]<<(i%8)&0x80 != 0 }

// fixedArray reads the index of datasets that cannot grow.
func (c *chunks) fixedArray() error {
	h := c.f.at(c.l.address)
	h.expect("FAHD")
	h.skip(2)
	width, pageBits := int(h.u8()), h.u8()
	count, block := h.length(), h.address()
	switch {
	case h.err != nil:
		return h.err
	case !c.widthFits(width) || pageBits > 31:
		return wrong(c.l.address, "the sizes of the array of chunks make no sense")
	case block == undefined:
		return nil
	}
	b := c.f.at(block)
	b.expect("FADB")
	b.skip(2)
	b.address()
	page := uint64(1) << pageBits
	if count <= page {
		return c.elements(b, 0, count, width)
	}
	if count > maxElements {
		return wrong(c.l.address, "an array of %d chunks is more than is read", count)
	}
	pages := (count + page - 1) / page
	bitmap := b.take(int(pages+7) / 8)
	b.skip(checksumSize)
	if b.err != nil {
		return b.err
	}
	return c.paged(b, 0, count, page, width, func(k uint64) bool { return bit(bitmap, k) })
}

// extensible is the index of datasets that can grow in one dimension: the first elements lie in the index block, the
// others in data blocks whose number and size double by turns from one super block to the next.
type extensible struct {
	*chunks
	width        int
	offsetBytes  int
	least, page  uint64 // elements of the smallest data block, and of a page
	index        *cursor
	next, stored uint64 // number of the next element, and how many there are
}

// extensibleArray reads such an index.
func (c *chunks) extensibleArray() error {
	h := c.f.at(c.l.address)
	h.expect("EAHD")
	h.skip(2)
	x := &extensible{chunks: c, width: int(h.u8())}
	maxBits, inIndex, least, pointers, pageBits := h.u8(), uint64(h.u8()), uint64(h.u8()), uint64(h.u8()), h.u8()
	for range 4 {
		h.length()
	}
	x.stored = h.length()
	h.length()
	index := h.address()
	powers := bits.OnesCount64(least) == 1 && bits.OnesCount64(pointers) == 1
	switch {
	case h.err != nil:
		return h.err
	case !c.widthFits(x.width) || !powers || maxBits > 64 || pageBits > 31:
		return wrong(c.l.address, "the sizes of the array of chunks make no sense")
	case index == undefined:
		return nil
	}
	x.offsetBytes, x.least, x.page = int(maxBits+7)/8, least, uint64(1)<<pageBits
	x.index = c.f.at(index)
	x.index.expect("EAIB")
	x.index.skip(2)
	x.index.address()
	x.next = min(inIndex, x.stored)
	if err := c.elements(x.index, 0, x.next, x.width); err != nil {
		return err
	}
	x.index.skip(int(inIndex-x.next) * x.width)
	direct := 2 * (bits.Len64(pointers) - 1) // super blocks whose data blocks the index block names itself
	for level := 0; x.next < x.stored; level++ {
		if level >= 2*bits.Len64(maxElements) {
			return wrong(index, "an array of %d chunks is more than is read", x.stored)
		}
		from := x.index
		var bitmap []byte
		blocks, size := uint64(1)<<(level/2), least<<((level+1)/2)
		if level >= direct {
			address := x.index.address()
			if x.index.err == nil && address == undefined {
				x.next += blocks * size
				continue
			}
			from, bitmap = x.superBlock(address, blocks, size)
		}
		if err := x.dataBlocks(from, blocks, size, bitmap); err != nil {
			return err
		}
	}
	return nil
}

// superBlock returns a cursor at a super block's addresses of data blocks, and the bitmap of their pages.
func (x *extensible) superBlock(address, blocks, size uint64) (*cursor, []byte) {
	b := x.f.at(address)
	b.expect("EASB")
	b.skip(2)
	b.address()
	b.skip(x.offsetBytes)
	if size <= x.page {
		return b, nil
	}
	return b, b.take(int(blocks * ((size/x.page + 7) / 8)))
}

// dataBlocks reads the data blocks whose addresses come next.
func (x *extensible) dataBlocks(from *cursor, blocks, size uint64, bitmap []byte) error {
	for k := uint64(0); k < blocks && x.next < x.stored; k++ {
		address := from.address()
		if from.err != nil {
			return from.err
		}
		if err := x.f.spend(address); err != nil {
			return err
		}
		first := x.next
		x.next += size
		if address == undefined {
			continue
		}
		b := x.f.at(address)
		b.expect("EADB")
		b.skip(2)
		b.address()
		b.skip(x.offsetBytes)
		if size <= x.page {
			if err := x.elements(b, first, min(size, x.stored-first), x.width); err != nil {
				return err
			}
			continue
		}
		if bitmap == nil {
			return wrong(address, "pages of the array of chunks are where none can be")
		}
		b.skip(checksumSize)
		pages := size / x.page
		err := x.paged(b, first, size, x.page, x.width, func(page uint64) bool { return bit(bitmap, k*pages+page) })
		if err != nil {
			return err
		}
	}
	return nil
}

// newTree reads the index of datasets that can grow in several dimensions: records of a version 2 B-tree.
func (c *chunks) newTree() error {
	return c.f.records(c.l.address, func(record *cursor) error {
		if err := c.f.spend(record.place()); err != nil {
			return err
		}
		address, stored, mask := record.address(), c.size, uint32(0)
		if c.filtered {
			width := record.left() - 4 - 8*len(c.dims)
			if width < 1 || width > 8 {
				return wrong(record.place(), "the size of the chunk's record makes no sense")
			}
			stored, mask = record.number(width), record.u32()
		}
		offset := make([]uint64, len(c.dims))
		for k, n := range c.dims {
			at := record.number(8)
			if at > uint64(n)/uint64(c.l.chunk[k]) {
				return record.err // beyond the dataset
			}
			offset[k] = at * uint64(c.l.chunk[k])
		}
		if record.err != nil || address == undefined {
			return record.err
		}
		return c.put(address, stored, mask, offset)
	})
}
