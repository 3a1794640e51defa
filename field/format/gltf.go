package format

import (
	"bytes"
	"encoding/json"
	"fmt"

	"shearprint/field"
)

// glTF 2.0 (The Khronos Group, glTF 2.0 Specification): a JSON document that describes nodes, meshes and typed views of
// binary buffers; GLB is the same in one binary file. Only what carries a surface and its values is read.

// document is the part of the JSON that is read. Pointers tell "absent" from zero.
type document struct {
	Asset struct {
		Version string          `json:"version"`
		Extras  json.RawMessage `json:"extras"`
	} `json:"asset"`
	ExtensionsRequired []string       `json:"extensionsRequired"`
	Scene              *int           `json:"scene"`
	Scenes             []gltfScene    `json:"scenes"`
	Nodes              []gltfNode     `json:"nodes"`
	Meshes             []gltfMesh     `json:"meshes"`
	Accessors          []gltfAccessor `json:"accessors"`
	BufferViews        []gltfView     `json:"bufferViews"`
	Buffers            []gltfBuffer   `json:"buffers"`
}

type gltfScene struct {
	Nodes []int `json:"nodes"`
}

type gltfNode struct {
	Name        string    `json:"name"`
	Children    []int     `json:"children"`
	Mesh        *int      `json:"mesh"`
	Skin        *int      `json:"skin"`
	Matrix      []float64 `json:"matrix"`
	Translation []float64 `json:"translation"`
	Rotation    []float64 `json:"rotation"`
	Scale       []float64 `json:"scale"`
}

type gltfMesh struct {
	Name       string          `json:"name"`
	Primitives []gltfPrimitive `json:"primitives"`
}

type gltfPrimitive struct {
	Attributes map[string]int  `json:"attributes"`
	Indices    *int            `json:"indices"`
	Mode       *int            `json:"mode"`
	Extensions json.RawMessage `json:"extensions"`
}

type gltfAccessor struct {
	BufferView    *int        `json:"bufferView"`
	ByteOffset    int         `json:"byteOffset"`
	ComponentType int         `json:"componentType"`
	Normalized    bool        `json:"normalized"`
	Count         int         `json:"count"`
	Type          string      `json:"type"`
	Sparse        *gltfSparse `json:"sparse"`
}

type gltfSparse struct {
	Count   int `json:"count"`
	Indices struct {
		BufferView    int `json:"bufferView"`
		ByteOffset    int `json:"byteOffset"`
		ComponentType int `json:"componentType"`
	} `json:"indices"`
	Values struct {
		BufferView int `json:"bufferView"`
		ByteOffset int `json:"byteOffset"`
	} `json:"values"`
}

type gltfView struct {
	Buffer     int `json:"buffer"`
	ByteOffset int `json:"byteOffset"`
	ByteLength int `json:"byteLength"`
	ByteStride int `json:"byteStride"`
}

type gltfBuffer struct {
	URI        *string `json:"uri"`
	ByteLength int     `json:"byteLength"`
}

// extras is what this project writes into asset.extras and reads back. Nil units were not known.
type extras struct {
	Name   string  `json:"name"`
	Length *string `json:"length_unit"`
	Tau    *string `json:"tau_unit"`
	P      *string `json:"p_unit"`
	// Values is "face" where every triangle has its own three points and the values belong to the triangle.
	Values string `json:"values,omitempty"`
}

const extrasKey = "shearprint"

// gltfReader reads one document.
type gltfReader struct {
	source
	opt     Options
	doc     document
	bin     []byte // the binary chunk of a GLB; nil where there is none
	size    int    // bytes of the file
	buffers [][]byte
	own     *extras

	raw     field.Raw
	places  []placed
	seen    []bool // nodes that were reached
	skipped int    // primitives of points and lines
	bare    int    // primitives without tau, where others have it
	coef    bool
	plain   bool // tau is called _TAU, which means Pa
	pPlain  bool // p is called _P
	mapped  []string
}

func readGLTF(name string, data []byte, opt Options) (field.Raw, error) {
	r := &gltfReader{source: source{name}, opt: opt, size: len(data)}
	return r.read(bytes.TrimPrefix(data, []byte("\xef\xbb\xbf")))
}

// readGLB takes the chunks of a GLB apart.
func readGLB(name string, data []byte, opt Options) (field.Raw, error) {
	r := &gltfReader{source: source{name}, opt: opt, size: len(data)}
	const magic, header, chunk = 4, 12, 8
	if len(data) < header+chunk {
		return field.Raw{}, r.fail("header", "copy the file again", "a GLB file has at least %d bytes", header+chunk)
	}
	if v := little.Uint32(data[magic:]); v != 2 {
		return field.Raw{}, r.fail("byte 4", "export as glTF 2.0", "version %d of the format", v)
	}
	total := int64(little.Uint32(data[8:]))
	if total > int64(len(data)) || total < header+chunk {
		return field.Raw{}, r.fail("byte 8", "copy the file again", "the file says %d bytes and has %d", total, len(data))
	}
	var text []byte
	at := int64(header)
	for n := 0; at+chunk <= total; n++ {
		length, typ := int64(little.Uint32(data[at:])), little.Uint32(data[at+4:])
		from := at + chunk
		if length > total-from {
			return field.Raw{}, r.fail(fmt.Sprintf("byte %d", at), "copy the file again",
				"a chunk of %d bytes cannot be in the %d bytes that are left", length, total-from)
		}
		switch {
		case n == 0 && typ != 0x4e4f534a: // "JSON"
			return field.Raw{}, r.fail(fmt.Sprintf("byte %d", at), "export again", "the first chunk is not JSON")
		case n == 0:
			text = data[from : from+length]
		case n == 1 && typ == 0x004e4942: // "BIN"
			r.bin = data[from : from+length]
		}
		at = from + length + (4-length%4)%4
	}
	return r.read(bytes.TrimRight(text, " \x00")) // some writers pad with NUL
}

// Bounds of the JSON before it is decoded: decoded objects take some hundred times the bytes of "{}", entries of maps
// ten times and numbers of lists four times theirs. Real documents of one run have some hundred of each.
const (
	maxObjects = 200_000
	maxKeys    = 500_000
	maxCommas  = 4_000_000
)

func (r *gltfReader) read(text []byte) (field.Raw, error) {
	if n := bytes.Count(text, []byte{'{'}) + bytes.Count(text, []byte{'['}); n > maxObjects {
		return field.Raw{}, r.fail("JSON", "export the surface alone", "it has more than %d objects", maxObjects)
	}
	if bytes.Count(text, []byte{':'}) > maxKeys || bytes.Count(text, []byte{','}) > maxCommas {
		return field.Raw{}, r.fail("JSON", "export the surface alone", "it has more than %d keys or %d commas", maxKeys,
			maxCommas)
	}
	if err := json.Unmarshal(text, &r.doc); err != nil {
		return field.Raw{}, r.fail("JSON", "export again", "%v", err)
	}
	r.readExtras()
	for _, step := range []func() error{r.check, r.openBuffers, r.walk} {
		if err := step(); err != nil {
			return field.Raw{}, err
		}
	}
	return r.finish()
}

func (r *gltfReader) readExtras() {
	var all map[string]json.RawMessage
	var own extras
	if json.Unmarshal(r.doc.Asset.Extras, &all) == nil && json.Unmarshal(all[extrasKey], &own) == nil {
		r.own = &own
	}
}

func (r *gltfReader) check() error {
	if v := r.doc.Asset.Version; len(v) < 1 || v[0] != '2' {
		return r.fail("asset", "export as glTF 2.0", "version %s of the format", quote(v))
	}
	for _, e := range r.doc.ExtensionsRequired {
		if e != "KHR_mesh_quantization" { // which only allows more number types, and those are read
			return r.fail("extensionsRequired", "export without it, compression above all", "extension %s is not read", quote(e))
		}
	}
	if len(r.doc.Meshes) == 0 {
		return r.fail("meshes", "export the surface with its mesh", "there is no mesh")
	}
	return nil
}
