package hdf5

import "math/bits"

// denseLinks reads the links of a group with many: records of a version 2 B-tree point to them in a fractal heap.
func (f *File) denseLinks(m message) ([]link, error) {
	c := f.inside(m)
	c.skip(1)
	flags := c.u8()
	if flags&1 != 0 {
		c.skip(8)
	}
	heap, index := c.address(), c.address()
	if c.err != nil || heap == undefined {
		return nil, c.err
	}
	objects, err := f.heapObjects(heap, index, 4) // a record: hash, heap id
	if err != nil {
		return nil, err
	}
	var links []link
	for _, o := range objects {
		l, err := f.readLink(o)
		if err != nil {
			return nil, err
		}
		links = append(links, l)
	}
	return links, nil
}

// heapObjects returns cursors over the objects that the records of an index name; the heap id begins at skip bytes of
// each record.
func (f *File) heapObjects(heap, index uint64, skip int) ([]*cursor, error) {
	h, err := f.openHeap(heap)
	if err != nil {
		return nil, err
	}
	var out []*cursor
	err = f.records(index, func(record *cursor) error {
		record.skip(skip)
		id := record.take(h.idLength)
		if record.err != nil {
			return record.err
		}
		o, err := h.object(id, record.from)
		out = append(out, o)
		if len(out) > maxChildren {
			return wrong(index, "an index has more than %d records", maxChildren)
		}
		return err
	})
	return out, err
}

// heap is a fractal heap: a space of blocks whose sizes double by rows.
type heap struct {
	f           *File
	idLength    int
	offsetBytes int
	lengthBytes int
	width       uint64
	first       uint64 // size of the blocks of the first rows
	direct      uint64 // largest size of a block that holds objects
	root        uint64
	rows        uint64 // of the root if it is an indirect block; 0 if it holds objects
}

func (f *File) openHeap(address uint64) (*heap, error) {
	c := f.at(address)
	c.expect("FRHP")
	c.skip(1)
	h := &heap{f: f, idLength: int(c.u16())}
	filters := c.u16()
	c.skip(1)
	largest := uint64(c.u32())
	for range 2 {
		c.length()
		c.address()
	}
	for range 8 {
		c.length()
	}
	h.width = uint64(c.u16())
	h.first, h.direct = c.length(), c.length()
	maxBits := int(c.u16())
	c.skip(2)
	h.root, h.rows = c.address(), uint64(c.u16())
	switch {
	case c.err != nil:
		return nil, c.err
	case filters != 0:
		return nil, wrong(address, "a compressed heap is not read; write the file without compressing its structure")
	case h.width == 0 || h.first == 0 || h.direct < h.first || maxBits > 64 || h.idLength < 2 || h.idLength > 64:
		return nil, wrong(address, "the heap's sizes make no sense")
	}
	h.offsetBytes = (maxBits + 7) / 8
	h.lengthBytes = min((bits.Len64(h.direct-1)+7)/8, (bits.Len64(largest)+7)/8)
	return h, nil
}

// object returns a cursor over the object of a heap id.
func (h *heap) object(id []byte, at uint64) (*cursor, error) {
	c := &cursor{f: h.f, data: id, from: at}
	kind := c.u8() >> 4 & 3
	switch kind {
	case 0:
		offset, n := c.number(h.offsetBytes), c.number(h.lengthBytes)
		if c.err != nil {
			return nil, c.err
		}
		return h.managed(offset, n)
	case 2:
		n := int(id[0]&15) + 1
		return &cursor{f: h.f, data: c.take(n), from: at, err: c.err}, c.err
	}
	return nil, wrong(at, "an object too large for its heap is not read")
}

// managed finds the block that holds the offset of the heap's space, from the root downward.
func (h *heap) managed(offset, n uint64) (*cursor, error) {
	address, rows, start, size := h.root, h.rows, uint64(0), h.first
	for depth := 0; rows > 0; depth++ {
		if depth > 64 {
			return nil, wrong(address, "the heap is deeper than 64 levels")
		}
		if err := h.f.spend(address); err != nil {
			return nil, err
		}
		var err error
		address, rows, start, size, err = h.child(address, rows, start, offset)
		if err != nil {
			return nil, err
		}
	}
	if offset < start || offset-start+n > max(size, h.direct) || n > h.direct {
		return nil, wrong(address, "a heap object lies outside its block")
	}
	block := h.f.at(address)
	block.expect("FHDB")
	if block.err != nil {
		return nil, block.err
	}
	c := h.f.block(address+(offset-start), n)
	return c, c.err
}

// child finds the block under an indirect one that holds the offset.
func (h *heap) child(address, rows, start, offset uint64) (child, childRows, childStart, childSize uint64, err error) {
	c := h.f.at(address)
	c.expect("FHIB")
	c.skip(1 + h.f.offsets + h.offsetBytes)
	at, size := start, h.first
	for row := range rows {
		if row > 1 {
			if size > 1<<62 {
				return 0, 0, 0, 0, wrong(address, "the heap's sizes make no sense")
			}
			size *= 2
		}
		for range h.width {
			a := c.address()
			if c.err != nil {
				return 0, 0, 0, 0, c.err
			}
			if offset < at || offset-at >= size {
				at += size
				continue
			}
			if a == undefined {
				return 0, 0, 0, 0, wrong(address, "a heap object lies in a block that does not exist")
			}
			if size <= h.direct {
				return a, 0, at, size, nil
			}
			// An indirect block of this size has rows until their sum reaches it: 2^(rows-1) first blocks per column.
			if size < h.first*h.width {
				return 0, 0, 0, 0, wrong(address, "the heap's sizes make no sense")
			}
			sub := uint64(bits.Len64(size/(h.first*h.width)-1)) + 1
			return a, sub, at, size, nil
		}
	}
	return 0, 0, 0, 0, wrong(address, "a heap object lies outside the heap")
}

// records visits the records of a version 2 B-tree in order.
func (f *File) records(address uint64, visit func(record *cursor) error) error {
	c := f.at(address)
	c.expect("BTHD")
	c.skip(2)
	t := tree{f: f, node: uint64(c.u32()), record: int(c.u16()), visit: visit}
	depth := int(c.u16())
	c.skip(2)
	root, count := c.address(), uint64(c.u16())
	switch {
	case c.err != nil:
		return c.err
	case root == undefined || count == 0:
		return nil
	case t.record == 0 || t.node < 16 || depth > 32:
		return wrong(address, "the B-tree's sizes make no sense")
	}
	t.plan(depth)
	return t.walk(root, count, depth)
}

// tree is a version 2 B-tree being walked.
type tree struct {
	f      *File
	node   uint64
	record int
	visit  func(record *cursor) error
	// Per depth: bytes of the number of records of a child node, and of all under it.
	countBytes, totalBytes []int
}

// plan works out the widths of the child pointers' numbers, which depend on how many records a node can hold.
func (t *tree) plan(depth int) {
	const overhead = 10 // signature, version, type, checksum
	bytesFor := func(n uint64) int { return max(1, (bits.Len64(n)+7)/8) }
	most := (t.node - overhead) / uint64(t.record)
	total := most
	t.countBytes, t.totalBytes = []int{0}, []int{0}
	leafBytes := bytesFor(most)
	below := 0 // width of the total under a child; leaves have none
	for range depth {
		t.countBytes = append(t.countBytes, leafBytes)
		t.totalBytes = append(t.totalBytes, below)
		pointer := uint64(t.f.offsets + leafBytes + below)
		n := (t.node - overhead - pointer) / (uint64(t.record) + pointer)
		total = (n+1)*total + n
		below = bytesFor(total)
	}
}

func (t *tree) walk(address, count uint64, depth int) error {
	if err := t.f.spend(address); err != nil {
		return err
	}
	c := t.f.block(address, t.node)
	sign := "BTLF"
	if depth > 0 {
		sign = "BTIN"
	}
	c.expect(sign)
	c.skip(2)
	if c.err == nil && count*uint64(t.record) > uint64(c.left()) {
		return wrong(address, "%d records do not fit a node", count)
	}
	records := make([]*cursor, count)
	for i := range records {
		at := c.place()
		records[i] = &cursor{f: t.f, data: c.take(t.record), from: at}
	}
	if c.err != nil {
		return c.err
	}
	for i := uint64(0); i <= count; i++ {
		if depth > 0 {
			child, n := c.address(), c.number(t.countBytes[depth])
			c.skip(t.totalBytes[depth])
			if c.err != nil {
				return c.err
			}
			if err := t.walk(child, n, depth-1); err != nil {
				return err
			}
		}
		if i < count {
			if err := t.visit(records[i]); err != nil {
				return err
			}
		}
	}
	return nil
}
