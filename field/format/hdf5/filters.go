package hdf5

import (
	"bytes"
	"compress/zlib"
	"errors"
	"io"
)

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
			return nil, wrong(m.at, "%q is packed with filter %d, which is not read; write it with deflate or unpacked",
				o.Name, id)
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
			if len(b) < checksumSize {
				return nil, io.ErrUnexpectedEOF
			}
			b = b[:len(b)-checksumSize]
		case deflateFilter:
			z, err := zlib.NewReader(bytes.NewReader(b))
			if err != nil {
				return nil, err
			}
			out := make([]byte, size+checksumSize*len(p)) // checksums may have been added before
			n, err := io.ReadFull(z, out)
			if err != nil && !errors.Is(err, io.ErrUnexpectedEOF) {
				return nil, err
			}
			b = out[:n]
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
