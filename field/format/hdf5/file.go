// Package hdf5 reads the part of the HDF5 file format that CGNS libraries write, and nothing else: groups with compact,
// dense or symbol-table links, attributes, and datasets of integers, floating-point numbers and bytes, stored compact,
// contiguous or in chunks with deflate, shuffle and Fletcher checksums.
//
// It was written from the published HDF5 File Format Specification, version 3.0 (The HDF Group). Every address and count
// is checked against the bytes that exist before memory is taken; chains and trees are bounded, so that no file, however
// broken, makes it hang.
package hdf5

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
)

// Signature is how a file begins.
const Signature = "\x89HDF\r\n\x1a\n"

// File is an open file. Objects refer to its bytes.
type File struct {
	data    []byte
	base    uint64
	offsets int // bytes of an address
	lengths int // bytes of a length
	root    uint64
	steps   int // how many parts may still be visited
	chunks  int // bytes of chunks that may still be unpacked or copied
}

// Bounds of what one file may ask for, whose parts may refer to one another without end.
const (
	// Headers, messages, nodes and entries take at least four bytes, and readers come back to an object a few times; a file
	// whose parts are visited more often leads in circles. The last bound keeps large files within some seconds.
	stepsPerByte = 4
	leastSteps   = 1000
	maxSteps     = 16_000_000
	// maxChunks bounds the bytes of all chunks together: what the datasets of the largest run have, and some seconds.
	maxChunks = 1 << 30
	// maxName bounds the bytes of a name; CGNS has 32 at most.
	maxName = 1024
)

// Error says where in the file something is wrong.
type Error struct {
	Byte int64 // offset from the beginning; -1 if it is no matter of one place
	What string
}

// Error returns the place and what is wrong there.
func (e *Error) Error() string {
	if e.Byte < 0 {
		return e.What
	}
	return fmt.Sprintf("byte %d: %s", e.Byte, e.What)
}

func wrong(at uint64, format string, args ...any) error {
	b := int64(-1)
	if at < math.MaxInt64 {
		b = int64(at)
	}
	return &Error{b, fmt.Sprintf(format, args...)}
}

// ErrNotHDF5 tells that the bytes do not begin as an HDF5 file.
var ErrNotHDF5 = errors.New("this is no HDF5 file")

// Open reads the superblock.
func Open(data []byte) (*File, error) {
	if !bytes.HasPrefix(data, []byte(Signature)) {
		return nil, ErrNotHDF5
	}
	f := &File{data: data, offsets: 8, lengths: 8, chunks: maxChunks,
		steps: min(maxSteps, stepsPerByte*len(data)+leastSteps)}
	c := f.at(uint64(len(Signature)))
	version := c.u8()
	if c.err != nil {
		return nil, c.err
	}
	switch version {
	case 0, 1:
		c.skip(4)
		f.offsets, f.lengths = int(c.u8()), int(c.u8())
		if err := f.checkSizes(); err != nil {
			return nil, err
		}
		c.skip(1 + 2 + 2 + 4)
		if version == 1 {
			c.skip(4)
		}
		f.base = c.address()
		c.address()
		c.address()
		c.address()
		c.address() // name of the root
		f.root = c.address()
	case 2, 3:
		f.offsets, f.lengths = int(c.u8()), int(c.u8())
		if err := f.checkSizes(); err != nil {
			return nil, err
		}
		c.skip(1)
		f.base = c.address()
		c.address()
		c.address()
		f.root = c.address()
	default:
		return nil, wrong(8, "superblock version %d is not known", version)
	}
	if c.err != nil {
		return nil, c.err
	}
	return f, nil
}

func (f *File) checkSizes() error {
	if (f.offsets != 4 && f.offsets != 8) || (f.lengths != 4 && f.lengths != 8) {
		return wrong(8, "addresses of %d and lengths of %d bytes are not known", f.offsets, f.lengths)
	}
	return nil
}

// cursor reads little-endian numbers; after the first failure it returns zeros.
type cursor struct {
	f    *File
	data []byte // what may be read
	pos  int    // in data
	from uint64 // place of data in the file
	err  error
}

// at returns a cursor at an address that runs to the end of the file.
func (f *File) at(address uint64) *cursor {
	a := address + f.base
	c := &cursor{f: f, from: a}
	if a < address || a >= uint64(len(f.data)) {
		c.err = wrong(address, "the address is outside the file, which has %d bytes", len(f.data))
		return c
	}
	c.data = f.data[a:]
	return c
}

// block returns a cursor at an address, bounded to n bytes.
func (f *File) block(address, n uint64) *cursor {
	c := f.at(address)
	if c.err == nil && n > uint64(len(c.data)) {
		c.err = wrong(address, "%d bytes are announced, but only %d are left in the file", n, len(c.data))
		return c
	}
	if c.err == nil {
		c.data = c.data[:n]
	}
	return c
}

// spend counts one visited part.
func (f *File) spend(at uint64) error {
	if f.steps--; f.steps < 0 {
		return wrong(at, "the file leads in circles")
	}
	return nil
}

func (c *cursor) take(n int) []byte {
	if c.err != nil {
		return nil
	}
	if n < 0 || n > len(c.data)-c.pos {
		c.err = wrong(c.from+uint64(c.pos), "%d bytes are wanted, but only %d are left", n, len(c.data)-c.pos)
		return nil
	}
	b := c.data[c.pos : c.pos+n]
	c.pos += n
	return b
}

func (c *cursor) left() int     { return len(c.data) - c.pos }
func (c *cursor) skip(n int)    { c.take(n) }
func (c *cursor) place() uint64 { return c.from + uint64(c.pos) }

// number reads an integer of n bytes, at most 8.
func (c *cursor) number(n int) uint64 {
	var full [8]byte
	copy(full[:], c.take(n))
	return binary.LittleEndian.Uint64(full[:])
}

func (c *cursor) u8() uint8   { return uint8(c.number(1)) }
func (c *cursor) u16() uint16 { return uint16(c.number(2)) }
func (c *cursor) u32() uint32 { return uint32(c.number(4)) }

// undefined is the address of what does not exist.
const undefined = math.MaxUint64

func (c *cursor) address() uint64 {
	a := c.number(c.f.offsets)
	if c.f.offsets == 4 && a == math.MaxUint32 {
		return undefined
	}
	return a
}

func (c *cursor) length() uint64 { return c.number(c.f.lengths) }

// limit reads a length, of which all ones say that there is no limit.
func (c *cursor) limit() uint64 {
	n := c.length()
	if c.f.lengths == 4 && n == math.MaxUint32 {
		return undefined
	}
	return n
}

// expect reads a block's signature.
func (c *cursor) expect(sign string) {
	at := c.place()
	if got := c.take(len(sign)); c.err == nil && string(got) != sign {
		c.err = wrong(at, "a block %q should be here", sign)
	}
}
