package format

import (
	"encoding/base64"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"net/url"
	"path"
	"strings"
)

// openBuffers finds the bytes of every buffer: the binary chunk, a data URI, or a file beside the document.
func (r *gltfReader) openBuffers() error {
	r.buffers = make([][]byte, len(r.doc.Buffers))
	total := 0
	for i, b := range r.doc.Buffers {
		place := fmt.Sprintf("buffer %d", i)
		data, err := r.openBuffer(i, b, place)
		if err != nil {
			return err
		}
		if b.ByteLength < 0 || b.ByteLength > len(data) {
			return r.fail(place, "copy the files again", "it says %d bytes and has %d", b.ByteLength, len(data))
		}
		r.buffers[i] = data[:b.ByteLength]
		total += len(data)
		if total > maxUnpacked {
			return r.fail(place, "export the surface alone", "the buffers have more than %d bytes", maxUnpacked)
		}
	}
	r.size = max(r.size, total)
	return nil
}

func (r *gltfReader) openBuffer(i int, b gltfBuffer, place string) ([]byte, error) {
	switch {
	case b.URI == nil && i == 0 && r.bin != nil:
		return r.bin, nil
	case b.URI == nil:
		return nil, r.fail(place, "export again", "it has neither bytes nor an address")
	case strings.HasPrefix(*b.URI, "data:"):
		head, body, ok := strings.Cut(*b.URI, ",")
		if !ok || !strings.HasSuffix(head, ";base64") {
			return nil, r.fail(place, "export again", "its data address is not base64")
		}
		data, err := base64.StdEncoding.DecodeString(body)
		if err != nil {
			return nil, r.fail(place, "export again", "its data address: %v", err)
		}
		return data, nil
	}
	return r.openFile(*b.URI, b.ByteLength, place)
}

// openFile reads a file beside the document. Only plain relative paths within its folder pass.
func (r *gltfReader) openFile(uri string, length int, place string) ([]byte, error) {
	name, err := url.PathUnescape(uri)
	if err != nil || strings.ContainsAny(name, `\:`) || !fs.ValidPath(path.Clean(name)) || strings.HasPrefix(name, "/") {
		return nil, r.fail(place, "put the file beside the document", "address %s leads out of the document's folder",
			quote(uri))
	}
	if r.opt.Files == nil {
		return nil, r.fail(place, "convert the run to GLB, which is one file",
			"it is in another file, %s, which cannot be read here",
			quote(name))
	}
	f, err := r.opt.Files.Open(path.Clean(name))
	if err != nil {
		var pe *fs.PathError
		if errors.As(err, &pe) {
			err = pe.Err
		}
		return nil, r.fail(place, "put the file beside the document", "%s: %v", quote(name), err)
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil || !info.Mode().IsRegular() {
		return nil, r.fail(place, "put the file beside the document", "%s is not a file", quote(name))
	}
	if length < 0 || int64(length) > info.Size() || length > maxUnpacked {
		return nil, r.fail(place, "copy the files again", "%s has %d bytes, the document says %d", quote(name), info.Size(),
			length)
	}
	data := make([]byte, length)
	if _, err := io.ReadFull(f, data); err != nil {
		return nil, r.fail(place, "copy the files again", "%s: %v", quote(name), err)
	}
	return data, nil
}
