package hdf5

import "bytes"

// symbolTable reads the links of an old group: a version 1 B-tree of symbol nodes, with the names in a local heap.
func (f *File) symbolTable(m message) ([]link, error) {
	c := f.inside(m)
	tree, heap := c.address(), c.address()
	if c.err != nil {
		return nil, c.err
	}
	h := f.at(heap)
	h.expect("HEAP")
	h.skip(4)
	size := h.length()
	h.length()
	names := f.block(h.address(), size)
	if h.err != nil {
		return nil, h.err
	}
	if names.err != nil {
		return nil, names.err
	}
	var links []link
	err := f.oldTree(tree, 0, func(_ *cursor, child uint64) error {
		s := f.at(child)
		s.expect("SNOD")
		s.skip(2)
		for range s.u16() {
			at, address := s.number(f.offsets), s.address()
			kind := s.u32()
			s.skip(20)
			if s.err != nil {
				return s.err
			}
			if at >= uint64(len(names.data)) {
				return wrong(child, "a name lies outside its heap")
			}
			name, _, ended := bytes.Cut(names.data[at:min(at+maxName, uint64(len(names.data)))], []byte{0})
			if !ended {
				return wrong(child, "a name has no end")
			}
			if err := f.spend(child); err != nil {
				return err
			}
			links = append(links, link{name: string(name), address: address, soft: kind == 2})
			if len(links) > maxChildren {
				return wrong(child, "a group has more than %d entries", maxChildren)
			}
		}
		return s.err
	})
	return links, err
}

// oldTree visits the children of a version 1 B-tree's lowest level, each with its key. keyRank is 0 for groups, the
// number of chunk offsets for chunks.
func (f *File) oldTree(address uint64, keyRank int, visit func(key *cursor, child uint64) error) error {
	return f.oldNode(address, keyRank, 64, visit)
}

func (f *File) oldNode(address uint64, keyRank, depth int, visit func(key *cursor, child uint64) error) error {
	if err := f.spend(address); err != nil {
		return err
	}
	if depth == 0 {
		return wrong(address, "the B-tree is deeper than 64 levels")
	}
	c := f.at(address)
	c.expect("TREE")
	c.skip(1)
	level := c.u8()
	count := int(c.u16())
	c.address()
	c.address()
	keySize := f.lengths
	if keyRank > 0 {
		keySize = 8 + 8*keyRank
	}
	for range count {
		at := c.place()
		key := &cursor{f: f, data: c.take(keySize), from: at}
		child := c.address()
		if c.err != nil {
			return c.err
		}
		var err error
		if level > 0 {
			err = f.oldNode(child, keyRank, depth-1, visit)
		} else if err = f.spend(child); err == nil {
			err = visit(key, child)
		}
		if err != nil {
			return err
		}
	}
	return c.err
}
