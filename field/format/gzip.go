package format

import (
	"bytes"
	"compress/gzip"
	"io"
)

// Bounds of unpacking. Meshes and tables shrink to between a half and a thirtieth; a file that grows two hundredfold
// holds no measured numbers. The absolute bound keeps an unpacked file with all that is made from it below 1 GiB.
const (
	maxGrowth   = 200
	maxUnpacked = 256 << 20
)

// unpack returns the data, unpacked if it is gzipped.
func unpack(name string, data []byte) ([]byte, error) {
	if !bytes.HasPrefix(data, []byte{0x1f, 0x8b}) {
		return data, nil
	}
	src := source{name}
	const remedy = "unpack it by hand to see what it holds"
	z, err := gzip.NewReader(bytes.NewReader(data))
	if err != nil {
		return nil, src.fail("gzip header", "the file is damaged; copy it again", "%v", err)
	}
	limit := min(maxUnpacked, maxGrowth*len(data)+1<<16)
	// The size that the trailer tells (modulo 4 GiB) saves growing; in a damaged file it is anything.
	told := min(int(little.Uint32(data[len(data)-min(4, len(data)):])), limit)
	out := bytes.NewBuffer(make([]byte, 0, told+bytes.MinRead))
	n, err := io.Copy(out, io.LimitReader(z, int64(limit)+1))
	switch {
	case err != nil:
		return nil, src.fail("gzip", "the file is damaged; copy it again", "unpacking stops after %d bytes: %v", n, err)
	case n > int64(limit):
		return nil, src.fail("gzip", remedy, "it unpacks to more than %d bytes", limit)
	case bytes.HasPrefix(out.Bytes(), []byte{0x1f, 0x8b}):
		return nil, src.fail("gzip", "unpack it once", "it is packed twice")
	}
	return out.Bytes(), nil
}
