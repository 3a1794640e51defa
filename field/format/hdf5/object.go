package hdf5

import (
	"cmp"
	"slices"
)

// Object is a group or a dataset.
type Object struct {
	f        *File
	Name     string // its last name; "" for the root
	address  uint64
	messages []message
}

// message is a part of an object header.
type message struct {
	kind   uint16
	shared bool
	data   []byte
	at     uint64
}

// Kinds of messages that are read.
const (
	dataspaceMessage    = 0x01
	linkInfoMessage     = 0x02
	datatypeMessage     = 0x03
	linkMessage         = 0x06
	layoutMessage       = 0x08
	filterMessage       = 0x0B
	attributeMessage    = 0x0C
	continuationMessage = 0x10
	symbolTableMessage  = 0x11
	attributeInfo       = 0x15
)

// Root returns the root group.
func (f *File) Root() (*Object, error) { return f.object("", f.root) }

func (f *File) object(name string, address uint64) (*Object, error) {
	o := &Object{f: f, Name: name, address: address}
	if err := f.spend(address); err != nil {
		return nil, err
	}
	c := f.at(address)
	if c.err != nil {
		return nil, c.err
	}
	if c.left() >= 4 && string(c.data[:4]) == "OHDR" {
		return o, o.readNew(c)
	}
	return o, o.readOld(c)
}

// maxMessages bounds the messages of one object header; version 1 has no room for more.
const maxMessages = 1<<16 - 1

type piece struct{ address, size uint64 }

// readOld reads a header of version 1.
func (o *Object) readOld(c *cursor) error {
	if version := c.u8(); c.err == nil && version != 1 {
		return wrong(o.address, "no object header is here (version %d)", version)
	}
	c.skip(1)
	count := int(c.u16())
	c.skip(4)
	size := uint64(c.u32())
	c.skip(4)
	if c.err != nil {
		return c.err
	}
	pieces := []piece{{c.place() - o.f.base, size}}
	for i := 0; i < len(pieces); i++ {
		b := o.f.block(pieces[i].address, pieces[i].size)
		for b.err == nil && b.left() >= 8 && len(o.messages) < count {
			m := message{kind: b.u16()}
			n := int(b.u16())
			m.shared = b.u8()&2 != 0
			b.skip(3)
			m.at = b.place()
			m.data = b.take(n)
			if err := o.keep(m, b, &pieces); err != nil {
				return err
			}
		}
		if b.err != nil {
			return b.err
		}
	}
	return nil
}

// readNew reads a header of version 2.
func (o *Object) readNew(c *cursor) error {
	c.skip(4)
	if version := c.u8(); c.err == nil && version != 2 {
		return wrong(o.address, "object header version %d is not known", version)
	}
	flags := c.u8()
	if flags&0x20 != 0 {
		c.skip(16)
	}
	if flags&0x10 != 0 {
		c.skip(4)
	}
	size := c.number(1 << (flags & 3))
	if c.err != nil {
		return c.err
	}
	pieces := []piece{{c.place() - o.f.base, size}}
	for i := 0; i < len(pieces); i++ {
		b := o.f.block(pieces[i].address, pieces[i].size)
		if i > 0 {
			b.expect("OCHK")
			if len(b.data) >= 8 {
				b.data = b.data[:len(b.data)-4] // the checksum
			}
		}
		if err := o.readMessages(b, flags&4 != 0, &pieces); err != nil {
			return err
		}
	}
	return nil
}

func (o *Object) readMessages(b *cursor, ordered bool, pieces *[]piece) error {
	head := 4
	if ordered {
		head = 6
	}
	for b.err == nil && b.left() >= head {
		m := message{kind: uint16(b.u8())}
		n := int(b.u16())
		m.shared = b.u8()&2 != 0
		if ordered {
			b.skip(2)
		}
		m.at = b.place()
		m.data = b.take(n)
		if err := o.keep(m, b, pieces); err != nil {
			return err
		}
	}
	return b.err
}

// keep adds a message that was read from b; pieces that lead back to one another end in too many of them.
func (o *Object) keep(m message, b *cursor, pieces *[]piece) error {
	if b.err != nil {
		return b.err
	}
	if len(o.messages) >= maxMessages {
		return wrong(o.address, "the object header has more than %d messages", maxMessages)
	}
	o.messages = append(o.messages, m)
	if m.kind == continuationMessage {
		*pieces = append(*pieces, o.continuation(m))
	}
	return o.f.spend(m.at)
}

func (o *Object) continuation(m message) piece {
	c := o.f.inside(m)
	return piece{c.address(), c.length()}
}

// inside returns a cursor over a message.
func (f *File) inside(m message) *cursor { return &cursor{f: f, data: m.data, from: m.at} }

func (o *Object) find(kind uint16) (message, bool) {
	for _, m := range o.messages {
		if m.kind == kind {
			return m, true
		}
	}
	return message{}, false
}

// link is an entry of a group.
type link struct {
	name    string
	address uint64
	order   uint64
	ordered bool
	soft    bool // symbolic or external: not followed
}

// maxChildren bounds the entries of one group.
const maxChildren = 1_000_000

// Child is an entry of a group.
type Child struct {
	Name string
	// Soft tells of a symbolic or external link, which is not followed; Open then fails.
	Soft    bool
	address uint64
	f       *File
}

// Open reads the object that the entry names.
func (c Child) Open() (*Object, error) {
	if c.Soft {
		return nil, wrong(undefined, "%q is a link to another place or file, which is not followed", c.Name)
	}
	return c.f.object(c.Name, c.address)
}

// Children lists the entries of a group in the order of their creation where the file tells it, else by name. An object
// that is no group has none.
func (o *Object) Children() ([]Child, error) {
	var links []link
	for _, m := range o.messages {
		var err error
		var more []link
		switch m.kind {
		case linkMessage:
			var l link
			l, err = o.f.readLink(o.f.inside(m))
			more = []link{l}
		case linkInfoMessage:
			more, err = o.f.denseLinks(m)
		case symbolTableMessage:
			more, err = o.f.symbolTable(m)
		}
		if err != nil {
			return nil, err
		}
		if links = append(links, more...); len(links) > maxChildren {
			return nil, wrong(o.address, "a group has more than %d entries", maxChildren)
		}
	}
	ordered := true
	for _, l := range links {
		ordered = ordered && l.ordered
	}
	slices.SortStableFunc(links, func(a, b link) int {
		if ordered {
			return cmp.Compare(a.order, b.order)
		}
		return cmp.Compare(a.name, b.name)
	})
	children := make([]Child, len(links))
	for i, l := range links {
		children[i] = Child{l.name, l.soft, l.address, o.f}
	}
	return children, nil
}

// readLink reads a link message.
func (f *File) readLink(c *cursor) (link, error) {
	var l link
	if version := c.u8(); c.err == nil && version != 1 {
		return l, wrong(c.from, "link version %d is not known", version)
	}
	flags := c.u8()
	kind := uint8(0)
	if flags&8 != 0 {
		kind = c.u8()
	}
	if flags&4 != 0 {
		l.order, l.ordered = c.number(8), true
	}
	if flags&16 != 0 {
		c.skip(1)
	}
	n := c.number(1 << (flags & 3))
	if n > uint64(min(c.left(), maxName)) {
		return l, wrong(c.place(), "a link's name of %d bytes does not fit", n)
	}
	if err := f.spend(c.place()); err != nil {
		return l, err
	}
	l.name = string(c.take(int(n)))
	if kind == 0 {
		l.address = c.address()
	} else {
		l.soft = true
	}
	return l, c.err
}
