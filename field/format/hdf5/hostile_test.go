package hdf5_test

import (
	"bytes"
	"compress/zlib"
	"encoding/binary"
	"math"
	"runtime"
	"strings"
	"testing"

	"shearprint/field/format/hdf5"
)

// image is a file under construction: superblock 2, whose root is set last.
type image struct{ data []byte }

func newImage() *image { return &image{make([]byte, 48)} }

// put adds a block of bytes and numbers and returns its address.
func (im *image) put(parts ...any) uint64 {
	at := uint64(len(im.data))
	im.data = append(im.data, join(parts...)...)
	return at
}

func (im *image) done(root uint64) []byte {
	copy(im.data, join(hdf5.Signature, uint8(2), uint8(8), uint8(8), uint8(0), uint64(0), uint64(math.MaxUint64),
		uint64(len(im.data)), root))
	return im.data
}

// join writes numbers little-endian, strings and bytes as they are.
func join(parts ...any) []byte {
	var b bytes.Buffer
	for _, p := range parts {
		switch p := p.(type) {
		case string:
			b.WriteString(p)
		default:
			if err := binary.Write(&b, binary.LittleEndian, p); err != nil {
				panic(err)
			}
		}
	}
	return b.Bytes()
}

// header makes an object header of version 2.
func header(messages ...[]byte) []byte {
	all := bytes.Join(messages, nil)
	return join("OHDR", uint8(2), uint8(2), uint32(len(all)), all, uint32(0))
}

func message(kind uint8, parts ...any) []byte {
	body := join(parts...)
	return join(kind, uint16(len(body)), uint8(0), body)
}

func linkTo(name string, to uint64) []byte {
	return message(0x06, uint8(1), uint8(0), uint8(len(name)), name, to)
}

// dataset makes the messages of a chunked set of doubles.
func dataset(dims []uint64, chunk []uint32, index uint64, filters ...uint16) [][]byte {
	double := message(0x03, uint8(0x11), [3]byte{0x20, 0x3f, 0}, uint32(8), uint16(0), uint16(64), [4]byte{52, 11, 0, 52},
		uint32(1023))
	space := message(0x01, uint8(2), uint8(len(dims)), uint8(0), uint8(1), dims)
	layout := message(0x08, uint8(3), uint8(2), uint8(len(chunk)+1), index, chunk, uint32(8))
	list := [][]byte{double, space, layout}
	if len(filters) > 0 {
		pipe := join(uint8(2), uint8(len(filters)))
		for _, f := range filters {
			pipe = append(pipe, join(f, uint16(0), uint16(0))...)
		}
		list = append(list, message(0x0B, pipe))
	}
	return list
}

// oldNode makes a node of a version 1 B-tree.
func oldNode(kind, level uint8, entries [][]byte) []byte {
	const none = uint64(math.MaxUint64)
	return join("TREE", kind, level, uint16(len(entries)), none, none, bytes.Join(entries, nil), make([]byte, 64))
}

func repeat(n int, entry []byte) [][]byte {
	list := make([][]byte, n)
	for i := range list {
		list[i] = entry
	}
	return list
}

const many = 65_535

// hostileFiles are small files whose every part is well formed, and which ask for far more time or memory than they
// have bytes, or whose sizes overflow.
func hostileFiles() map[string][]byte {
	files := map[string][]byte{}

	im := newImage()
	entry := func(at uint64, stored int) []byte { return join(uint32(stored), uint32(0), [3]uint64{}, at) }
	chunk := im.put(make([]byte, 64))
	index := im.put(oldNode(1, 0, [][]byte{join(uint32(8), uint32(0), [4]uint64{1, 1, 1}, chunk)}))
	root := im.put(header(dataset([]uint64{1 << 30, 64, 1 << 28}, []uint32{1, 1, 1}, index)...))
	files["dimensions whose product overflows"] = im.done(root)

	var packed bytes.Buffer
	z := zlib.NewWriter(&packed)
	for range 1 << 7 {
		z.Write(make([]byte, 1<<20))
	}
	z.Close()
	im = newImage()
	chunk = im.put(packed.Bytes())
	index = im.put(oldNode(1, 0, repeat(many, entry(chunk, packed.Len()))))
	root = im.put(header(dataset([]uint64{64, 1}, []uint32{1 << 24, 1}, index, 1)...))
	files["one large chunk many times"] = im.done(root)

	im = newImage()
	chunk = im.put(make([]byte, 8))
	leaf := im.put(oldNode(1, 0, repeat(many, entry(chunk, 8))))
	index = im.put(oldNode(1, 1, repeat(many, entry(leaf, 8))))
	root = im.put(header(dataset([]uint64{64, 1}, []uint32{1, 1}, index)...))
	files["one small chunk without end"] = im.done(root)

	symbols := func(im *image, names []byte, nodes uint64) []byte {
		at := im.put(names)
		heap := im.put("HEAP", [4]byte{}, uint64(len(names)), uint64(0), at)
		return im.done(im.put(header(message(0x11, nodes, heap))))
	}
	im = newImage()
	empty := im.put("SNOD", uint8(1), uint8(0), uint16(0))
	leaf = im.put(oldNode(0, 0, repeat(many, join(uint64(0), empty))))
	files["empty symbol nodes without end"] = symbols(im, make([]byte, 8),
		im.put(oldNode(0, 1, repeat(many, join(uint64(0), leaf)))))

	im = newImage()
	full := im.put("SNOD", uint8(1), uint8(0), uint16(many), bytes.Repeat(join([5]uint64{}), many))
	files["names without an end"] = symbols(im, bytes.Repeat([]byte{'n'}, 1<<20),
		im.put(oldNode(0, 0, repeat(10, join(uint64(0), full)))))

	im = newImage()
	piece := im.put("OCHK", make([]byte, 1<<20))
	more := message(0x10, piece, uint64(4+1<<20))
	root = im.put(header(bytes.Join(repeat(9000, more), nil)))
	files["one continuation many times"] = im.done(root)

	im = newImage()
	busy := im.put(header(bytes.Join(repeat(60_000, linkTo("child", 48)), nil)))
	root = im.put(header(bytes.Join(repeat(60_000, linkTo("busy", busy)), nil)))
	files["one large group many times"] = im.done(root)

	im = newImage()
	own := uint64(len(im.data))
	im.put(header(linkTo("self", own)))
	files["a group within itself"] = im.done(own)
	return files
}

// Every hostile file is refused, or read in part, with little memory; that the test ends shows that no time is lost.
func TestHostileFiles(t *testing.T) {
	const most = 3 << 28 // the largest chunk and what the collector leaves for later, which is more in WebAssembly
	for name, data := range hostileFiles() {
		var before, after runtime.MemStats
		runtime.GC()
		runtime.ReadMemStats(&before)
		walk(data)
		runtime.ReadMemStats(&after)
		if used := int64(after.HeapSys) - int64(before.HeapSys); used > most {
			t.Errorf("%s: the heap grows by %d MiB for a file of %d bytes", name, used>>20, len(data))
		}
	}
}

func TestHostileDatasets(t *testing.T) {
	files := hostileFiles()
	for name, want := range map[string]string{
		"dimensions whose product overflows": "more than is read",
		"one large chunk many times":         "more chunks than",
		"one small chunk without end":        "more chunks than",
	} {
		f, err := hdf5.Open(files[name])
		if err != nil {
			t.Fatal(err)
		}
		root, err := f.Root()
		if err != nil {
			t.Fatal(err)
		}
		if _, err := root.Dataset(limit); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, want an error with %q", name, err, want)
		}
	}
}
