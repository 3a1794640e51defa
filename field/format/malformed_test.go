package format_test

import (
	"bytes"
	"compress/gzip"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"testing"
	"testing/fstest"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// bad is a malformed file and words that its message must hold.
type bad struct{ name, data, want string }

// mostBytes bounds what a small malformed file may make the reader allocate in all.
const mostBytes = 64 << 20

// checkBad reads every file and asks for one line that begins with the file's name.
func checkBad(t *testing.T, list []bad) {
	t.Helper()
	if len(list) < 30 {
		t.Errorf("only %d malformed files", len(list))
	}
	for _, b := range list {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		_, err := format.Load("bad.file", []byte(b.data), format.Options{Files: fstest.MapFS{}})
		runtime.ReadMemStats(&after)
		var se *format.SyntaxError
		switch {
		case err == nil:
			t.Errorf("%s: no error", b.name)
		case !errors.As(err, &se), !strings.HasPrefix(err.Error(), "bad.file: "), strings.ContainsAny(err.Error(),
			"\r\n\x00"):
			t.Errorf("%s: not one line with the name: %q", b.name, err)
		case !strings.Contains(err.Error(), b.want):
			t.Errorf("%s: %q, want %q in it", b.name, err, b.want)
		}
		if used := after.TotalAlloc - before.TotalAlloc; used > mostBytes {
			t.Errorf("%s: %d bytes were allocated for a file of %d", b.name, used, len(b.data))
		}
	}
}

func TestMalformedPLY(t *testing.T) {
	const xyz = "property float x\nproperty float y\nproperty float z\n"
	const tau = "property float tau_x\nproperty float tau_y\nproperty float tau_z\n"
	const face = "element face 1\nproperty list uchar int vertex_indices\n"
	const ascii, bin = "ply\nformat ascii 1.0\n", "ply\nformat binary_little_endian 1.0\n"
	const rows = "0 0 0 1 0 0\n1 0 0 1 0 0\n0 1 0 1 0 0\n"
	head := func(start string, vertices string) string {
		return start + "element vertex " + vertices + "\n" + xyz + tau + face + "end_header\n"
	}
	floats := string(bytesOf([18]float32{0, 0, 0, 1, 0, 0, 1, 0, 0, 1, 0, 0, 0, 1, 0, 1}))
	checkBad(t, []bad{
		{"nothing", "", "empty"},
		{"blanks", " \n \n", "empty"},
		{"only the word", "ply\n", "end_header"},
		{"no end", "ply\nformat ascii 1.0\nelement vertex 3\n", "end_header"},
		{"no format", "ply\nelement vertex 1\n" + xyz + "end_header\n0 0 0\n", "format"},
		{"unknown format", "ply\nformat middle_endian 1.0\nend_header\n", "middle_endian"},
		{"version", "ply\nformat ascii 2.0\nend_header\n", "2.0"},
		{"short format", "ply\nformat ascii\nend_header\n", "three words"},
		{"unknown word", ascii + "elephant vertex 3\nend_header\n", "elephant"},
		{"no count", ascii + "element vertex\nend_header\n", "three words"},
		{"count in words", ascii + "element vertex three\nend_header\n", "three"},
		{"negative count", ascii + "element vertex -3\nend_header\n", "-3"},
		{"count beyond the file", head(ascii, "999999999") + rows, "cannot be"},
		{"count beyond 64 bits", head(ascii, "99999999999999999999") + rows, "not a count"},
		{"count of bytes", head(bin, "200") + floats, "cannot hold"},
		{"property first", ascii + "property float x\nend_header\n", "before any element"},
		{"type", ascii + "element vertex 1\nproperty quad x\nend_header\n", "quad"},
		{"property words", ascii + "element vertex 1\nproperty float\nend_header\n", "property"},
		{"list words", ascii + "element face 1\nproperty list uchar int\nend_header\n", "property"},
		{"length type", ascii + "element face 1\nproperty list float int vertex_indices\nend_header\n", "length"},
		{"index type", ascii + "element vertex 1\n" + xyz + tau +
			"element face 1\nproperty list uchar float vertex_indices\nend_header\n0 0 0 0 0 0\n3 0 0 0\n", "integers"},
		{"twice", ascii + "element vertex 1\nproperty float x\nproperty float x\nend_header\n", "twice"},
		{"no vertices", ascii + face + "end_header\n3 0 1 2\n", "vertex"},
		{"no z", ascii + "element vertex 1\nproperty float x\nproperty float y\nend_header\n0 0\n", "x y z"},
		{"list in vertices", ascii + "element vertex 1\n" + xyz + "property list uchar int near\nend_header\n0 0 0 0\n",
			"list"},
		{"word for a number", head(ascii, "3") + "0 0 0 1 0 0\n1 0 zero 1 0 0\n0 1 0 1 0 0\n3 0 1 2\n", "line 14"},
		{"too few rows", head(ascii, "3") + "0 0 0 1 0 0\n1 0 0 1 0 0\n3 0 1 2\n", "cannot hold"},
		{"a row too few", head(ascii, "3") + "0.000 0.000 0.000 1 0 0\n1.000 0 0 1 0 0\n3 0 1 2\n", "too early"},
		{"corner beyond", head(ascii, "3") + rows + "3 0 1 3\n", "corner 3"},
		{"corner negative", head(ascii, "3") + rows + "3 0 1 -1\n", "corner -1"},
		{"corner fractional", head(ascii, "3") + rows + "3 0 1 0.5\n", "corner 0.5"},
		{"list length negative", head(ascii, "3") + rows + "-3 0 1 2\n", "length"},
		{"list length NaN", head(ascii, "3") + rows + "nan 0 1 2\n", "length"},
		{"list beyond the end", head(ascii, "3") + rows + "900 0 1 2\n", ""},
		{"binary corner beyond", head(bin, "3") + floats + "\x03" + string(bytesOf([3]int32{0, 1, 7})), "point 7"},
		{"binary corner negative", head(bin, "3") + floats + "\x03" + string(bytesOf([3]int32{0, 1, -1})), "point -1"},
		{"binary list beyond", head(bin, "3") + floats + "\xff" + string(bytesOf([3]int32{0, 1, 2})), "255 values"},
		{"binary cut", head(bin, "3") + floats[:50], "cannot hold"},
		{"binary faces missing", head(bin, "3") + floats, "cannot hold"},
		{"no faces", ascii + "element vertex 3\n" + xyz + tau + "end_header\n" + rows, "no triangles"},
		{"no tau", ascii + "element vertex 3\n" + xyz + face + "end_header\n0 0 0\n1 0 0\n0 1 0\n3 0 1 2\n",
			"no wall shear stress"},
		{"all NaN", head(ascii, "3") + strings.ReplaceAll(rows, "1 0 0\n", "nan nan nan\n") + "3 0 1 2\n",
			"no usable triangle"},
		{"one place", head(ascii, "3") + "0 0 0 1 0 0\n0 0 0 1 0 0\n0 0 0 1 0 0\n3 0 1 2\n", "no usable triangle"},
		{"huge coordinate", head(ascii, "3") + "1e300 0 0 1 0 0\n1 0 0 1 0 0\n0 1 0 1 0 0\n3 0 1 2\n", "beyond"},
		{"huge tau", head(ascii, "3") + "0 0 0 1e300 0 0\n1 0 0 1 0 0\n0 1 0 1 0 0\n3 0 1 2\n", "beyond"},
	})
}

func TestMalformedGLTF(t *testing.T) {
	acc := func(k int, change object) object {
		base := []object{
			{"bufferView": 0, "componentType": 5126, "count": 3, "type": "VEC3"},
			{"bufferView": 1, "componentType": 5126, "count": 3, "type": "VEC3"},
			{"bufferView": 2, "componentType": 5123, "count": 3, "type": "SCALAR"},
		}
		for key, v := range change {
			base[k][key] = v
		}
		return object{"accessors": array{base[0], base[1], base[2]}}
	}
	doc := func(change object) string { return string(gltfOf(change, cornerBytes, tauBytes, indexBytes)) }
	node := func(n object) string { return doc(object{"nodes": array{n}}) }
	prim := func(p object) string { return doc(object{"meshes": array{object{"primitives": array{p}}}}) }
	view := func(v object) string { return doc(object{"bufferViews": array{v, v, v}}) }
	sparse := func(s object) string { return doc(acc(1, object{"sparse": s})) }
	attributes := object{"POSITION": 0, "_TAU": 1}
	deep := "{" + strings.Repeat(`"nodes":[`, 50) + "}"
	bomb := strings.Repeat(`{},`, 300_000)
	checkBad(t, []bad{
		{"open brace", "{", "JSON"},
		{"nested", deep, "JSON"},
		{"empty object", "{}", "version"},
		{"version 1", `{"asset":{"version":"1.0"}}`, "version"},
		{"no mesh", `{"asset":{"version":"2.0"}}`, "no mesh"},
		{"many objects", `{"asset":{"version":"2.0"},"nodes":[` + bomb[:len(bomb)-1] + `]}`, "objects"},
		{"number beyond", `{"asset":{"version":"2.0"},"accessors":[{"count":1e99}]}`, "JSON"},
		{"compressed", doc(object{"extensionsRequired": array{"KHR_draco_mesh_compression"}}), "KHR_draco_mesh_compression"},
		{"scene", doc(object{"scene": 3, "scenes": array{object{}}}), "scene 3"},
		{"empty scene", doc(object{"scenes": array{object{}}}), "triangle"},
		{"node beyond", doc(object{"scenes": array{object{"nodes": array{7}}}}), "node 7"},
		{"cycle", doc(object{"nodes": array{object{"children": array{0}}}, "scenes": array{object{"nodes": array{0}}}}),
			"twice"},
		{"mesh beyond", node(object{"mesh": 2}), "mesh 2"},
		{"skin", node(object{"mesh": 0, "skin": 0}), "skin"},
		{"short matrix", node(object{"mesh": 0, "matrix": array{1, 2, 3}}), "16"},
		{"flat matrix", node(object{"mesh": 0, "matrix": array{1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 0, 0, 0, 0, 0, 1}}), "flat"},
		{"flat scale", node(object{"mesh": 0, "scale": array{1, 0, 1}}), "flat"},
		{"huge scale", node(object{"mesh": 0, "scale": array{1e200, 1e200, 1e200}}), "flat"},
		{"no quaternion", node(object{"mesh": 0, "rotation": array{1e200, 1e200, 0, 0}}), "quaternion"},
		{"no position", prim(object{"attributes": object{"_TAU": 1}}), "POSITION"},
		{"accessor beyond", prim(object{"attributes": object{"POSITION": 9, "_TAU": 1}}), "accessor 9"},
		{"accessor negative", prim(object{"attributes": object{"POSITION": -1, "_TAU": 1}}), "POSITION"},
		{"indices beyond", prim(object{"attributes": attributes, "indices": 9}), "accessor 9"},
		{"indices of floats", prim(object{"attributes": attributes, "indices": 0}), "indices"},
		{"points only", prim(object{"attributes": attributes, "mode": 0}), "triangle"},
		{"mode", prim(object{"attributes": attributes, "mode": 17}), "triangle"},
		{"component type", doc(acc(0, object{"componentType": 5130})), "5130"},
		{"element type", doc(acc(0, object{"type": "MAT4"})), "MAT4"},
		{"two components", doc(acc(0, object{"type": "VEC2"})), "2 components"},
		{"count beyond", doc(acc(0, object{"count": 1 << 40})), "cannot be"},
		{"count beyond 63 bits", doc(acc(0, object{"count": math.MaxInt64})), "cannot be"},
		{"negative count", doc(acc(0, object{"count": -1})), "negative"},
		{"offset beyond", doc(acc(0, object{"byteOffset": 1 << 40})), "begins after"},
		{"zeros without end", doc(acc(1, object{"bufferView": nil, "count": 1 << 40})), "without data"},
		{"other counts", doc(acc(1, object{"count": 2})), "2 elements"},
		{"corners left over", doc(acc(2, object{"count": 2})), "whole number"},
		{"index beyond", string(gltfOf(nil, cornerBytes, tauBytes, bytesOf([3]uint16{0, 1, 3}))), "index 2"},
		{"view beyond", doc(acc(0, object{"bufferView": 5})), "no buffer view 5"},
		{"view of no buffer", view(object{"buffer": 4, "byteLength": 36}), "buffer 4"},
		{"view after the end", view(object{"buffer": 0, "byteOffset": 90, "byteLength": 36}), "within its buffer"},
		{"view negative", view(object{"buffer": 0, "byteOffset": -4, "byteLength": 36}), "within its buffer"},
		{"view overflow", view(object{"buffer": 0, "byteOffset": math.MaxInt64, "byteLength": 36}), "within its buffer"},
		{"stride", view(object{"buffer": 0, "byteLength": 36, "byteStride": 300}), "stride"},
		{"stride too small", view(object{"buffer": 0, "byteLength": 36, "byteStride": 4}), "apart"},
		{"sparse index beyond", sparse(object{"count": 3, "indices": object{"bufferView": 1, "componentType": 5121},
			"values": object{"bufferView": 0}}), "element 128 of 3"},
		{"sparse count", sparse(object{"count": 1 << 40, "indices": object{"bufferView": 2, "componentType": 5121},
			"values": object{"bufferView": 0}}), "sparse"},
		{"sparse count above the elements", doc(acc(2, object{"sparse": object{"count": 4,
			"indices": object{"bufferView": 0, "componentType": 5121}, "values": object{"bufferView": 0}}})), "sparse"},
		{"sparse of floats", sparse(object{"count": 1, "indices": object{"bufferView": 2, "componentType": 5126},
			"values": object{"bufferView": 0}}), "sparse"},
		{"sparse view", sparse(object{"count": 1, "indices": object{"bufferView": 7, "componentType": 5121},
			"values": object{"bufferView": 0}}), "no buffer view 7"},
		{"no bytes", doc(object{"buffers": array{object{"byteLength": 84}}}), "neither"},
		{"data not base64", doc(object{"buffers": array{object{"byteLength": 84, "uri": "data:,abc"}}}), "base64"},
		{"data broken", doc(object{"buffers": array{object{"byteLength": 84, "uri": "data:;base64,a*b"}}}), "data address"},
		{"buffer too short", doc(object{"buffers": array{object{"byteLength": 1000, "uri": "data:;base64,AAAA"}}}),
			"1000 bytes"},
		{"file missing", doc(object{"buffers": array{object{"byteLength": 84, "uri": "gone.bin"}}}), "gone.bin"},
		{"GLB too short", "glTF\x02\x00\x00\x00", "at least"},
		{"GLB version", "glTF" + string(bytesOf([4]uint32{1, 24, 4, 0x4e4f534a})) + "{}  ", "version 1"},
		{"GLB length", "glTF" + string(bytesOf([4]uint32{2, 9999, 4, 0x4e4f534a})) + "{}  ", "9999 bytes"},
		{"GLB chunk", "glTF" + string(bytesOf([4]uint32{2, 24, 4000, 0x4e4f534a})) + "{}  ", "chunk of 4000"},
		{"GLB without JSON", "glTF" + string(bytesOf([4]uint32{2, 24, 4, 0x004e4942})) + "{}  ", "not JSON"},
	})
}

func TestMalformedTables(t *testing.T) {
	const head = "x,y,z,tau_x,tau_y,tau_z,p\n"
	row := strings.Repeat("1,2,3,4,5,6,7\n", 5)
	checkBad(t, []bad{
		{"words", "hello world\nthis is no table\n", "not known"},
		{"only a header", head, "not known"},
		{"header and comments", head + "# nothing\n", "not known"},
		{"numbers alone", "1,2,3,4,5,6\n1,2,3,4,5,6\n", "no header"},
		{"no position", "a,b,c,tau_x,tau_y,tau_z\n1,2,3,4,5,6\n", "x y z"},
		{"no vector", "x,y,z,a,b,c\n1,2,3,4,5,6\n", "--tau"},
		{"pressure alone", "x,y,z,p\n0,0,0,1\n1,0,0,1\n0,1,0,1\n1,1,0,1\n", "no wall shear stress"},
		{"too few names", "x,y,z,tau_x,tau_y\n1,2,3,4,5,6\n", "names 5 columns"},
		{"too many names", "x,y,z,tau_x,tau_y,tau_z,p,q\n1,2,3,4,5,6,7\n", "names 8 columns"},
		{"short row", head + row + "1,2,3\n", "line 7"},
		{"long row", head + row + "1,2,3,4,5,6,7,8\n", "more cells"},
		{"word in a row", head + row + "1,2,3,4,five,6,7\n", `line 7, column "tau_y"`},
		{"word after comments", head + "# a\n\n" + row + "1,2,x,4,5,6,7\n", "line 9"},
		{"hexadecimal", head + row + "1,2,3,0x10,5,6,7\n", "0x10"},
		{"underscores", head + row + "1,2,3,1_000,5,6,7\n", "1_000"},
		{"two points", head + row + "1,2,3,1.2.3,5,6,7\n", "1.2.3"},
		{"half an exponent", head + row + "1,2,3,1e,5,6,7\n", "1e"},
		{"a very long number", head + row + "1,2,3," + strings.Repeat("1", 500) + ",5,6,7\n", "not a number"},
		{"footer", head + row + "5 rows\n", "line 7"},
		{"open quote", head + row + `1,2,3,"4,5,6,7` + "\n", "line 7"},
		{"long line", strings.Repeat("x", 2<<20) + "\n", "line of more"},
		{"many columns", strings.Repeat("x,", 5000) + "y\n" + strings.Repeat("1,", 5000) + "1\n", "not known"},
		{"NUL", head + "1,2,3\x00", "no text"},
		{"UTF-16", "\xff\xfex\x00,\x00y\x00", "UTF-16"},
		{"other UTF-16", "\xfe\xff\x00x\x00,", "UTF-16"},
		{"no places", head + strings.Repeat("nan,nan,nan,1,1,1,1\n1,2,3,4,5,6,7\n", 1), "surface"},
		{"one place", head + row, "surface"},
		{"one row", head + "1,2,3,4,5,6,7\n", "surface"},
		{"line", head + "0,0,0,1,0,0,0\n1,1,1,1,0,0,0\n3,3,3,1,0,0,0\n2,2,2,1,0,0,0\n", "surface"},
		{"body", head + "0,0,0,1,0,0,0\n1,0,0,1,0,0,0\n0,3,0,1,0,0,0\n0,0,2,1,0,0,0\n5,1,1,1,0,0,0\n", "planar"},
		{"huge", head + "1e200,0,0,1,0,0,0\n1,0,0,1,0,0,0\n0,3,0,1,0,0,0\n", ""},
		{"zip", "PK\x03\x04rest", "ZIP"},
		{"old office", "\xd0\xcf\x11\xe0rest", "office"},
		{"pdf", "%PDF-1.7", "PDF"},
		{"bytes", "\x01\x02\x03\x04\x05", "not known"},
		{"control characters", "\x1b[31m\n\x07\n1,2,3\n", ""},
	})
}

func TestMalformedSTLAndOBJ(t *testing.T) {
	facet := "facet normal 0 0 1\nouter loop\nvertex 0 0 0\nvertex 1 0 0\nvertex 0 1 0\nendloop\nendfacet\n"
	stl := string(stlOf(sphereRaw(100)))
	const v = "v 0 0 0\nv 1 0 0\nv 0 1 0\n"
	checkBad(t, []bad{
		{"good STL alone", stl, "no wall shear stress"},
		{"good text alone", "solid a\n" + facet + "endsolid a\n", "no wall shear stress"},
		{"good OBJ alone", v + "f 1 2 3\n", "no wall shear stress"},
		{"no facets", strings.Repeat("\x01", 80) + "\x00\x00\x00\x00", "not one triangle"},
		{"STL cut", "solid" + strings.Repeat("\x00", 75) + "\x09\x00\x00\x00rest", "promises 9"},
		{"STL count", "solid" + strings.Repeat("\x00", 75) + "\xff\xff\xff\xff", "promises 4294967295"},
		{"STL unsized", stl[:len(stl)-3], ""},
		{"text without facets", "solid a\nendsolid a\n", "not one triangle"},
		{"text cut", "solid a\n" + facet[:strings.Index(facet, "vertex 0 1")], "within a facet"},
		{"text word", "solid a\n" + facet + "face 3\n", `"face"`},
		{"text number", "solid a\n" + strings.Replace(facet, "1 0 0", "1 O 0", 1), "line 5"},
		{"two corners", "solid a\n" + strings.Replace(facet, "vertex 1 0 0\n", "", 1), "2 corners"},
		{"four corners", "solid a\n" + strings.Replace(facet, "endloop", "vertex 1 1 0\nendloop", 1), "4 corners"},
		{"text ends in vertex", "solid a\nfacet normal 0 0 1\nouter loop\nvertex 0 0", "too early"},
		{"one place", "solid a\n" + strings.ReplaceAll(facet, "1", "0"), "no wall shear stress"},
		{"OBJ without faces", v, "not one face"},
		{"OBJ two corners", v + "f 1 2\n", "2 corners"},
		{"OBJ no corners", v + "f\n", "0 corners"},
		{"OBJ beyond", v + "f 1 2 4\n", "none of the 3 points"},
		{"OBJ zero", v + "f 0 1 2\n", "none of the 3 points"},
		{"OBJ negative", v + "f -1 -2 -4\n", "none of the 3 points"},
		{"OBJ not yet", "v 0 0 0\nf 1 2 3\nv 1 0 0\nv 0 1 0\n", "none of the 1 points"},
		{"OBJ word", v + "f 1 two 3\n", `"two"`},
		{"OBJ slash", v + "f /1 /2 /3\n", "none of"},
		{"OBJ overflow", v + "f 1 2 99999999999999999999\n", "none of"},
		{"OBJ coordinate", "v 0 0 0\nv 1 zero 0\n", `"zero"`},
		{"OBJ two coordinates", "v 0 0 0\nv 1 0\n", "2 coordinates"},
		{"OBJ no coordinate", "v 0 0 0\nv\n", "0 coordinates"},
		{"OBJ huge", "v 1e999 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 3\n", "no wall shear stress"},
		{"OBJ binary", "v 0 0 0\nv \x00 0 0\n", ""},
		{"OBJ of points", "v 0 0 0\np 1\n", "not one face"},
	})
}

// A surface that is no good is named in the message, not the table.
func TestBadSurfaces(t *testing.T) {
	table := scatterTable(sphereRaw(200), true, 1)
	for name, surface := range map[string]string{
		"empty": "", "words": "hello\n", "points": "v 0 0 0\n", "dot": "v 0 0 0\nv 0 0 0\nv 0 0 0\nf 1 2 3\n",
		"gzip": "\x1f\x8bxx", "table": "x y z p\n1 2 3 4\n", "inf": "v 1e999 0 0\nv nan 1 0\nv 1 0 0\nf 1 2 3\n",
	} {
		_, err := format.Load("t.csv", table, format.Options{Surface: []byte(surface), SurfaceName: "s.file"})
		if err == nil || !strings.Contains(err.Error(), "s.file") || strings.Contains(err.Error(), "\n") {
			t.Errorf("%s: %v", name, err)
		}
	}
	_, err := format.Load("t.csv", table, format.Options{Surface: stlOf(mirroredAway(sphereRaw(200))),
		SurfaceName: "s.stl"})
	if err == nil || !strings.Contains(err.Error(), "one frame") {
		t.Errorf("a surface elsewhere: %v", err)
	}
}

func mirroredAway(raw field.Raw) field.Raw {
	for i, p := range raw.Points {
		raw.Points[i] = p.Add(r3.Vec{X: 40})
	}
	return raw
}

// Files of zeros pack a thousandfold: unpacking stops at its bound.
func TestGzipBombs(t *testing.T) {
	pack := func(data []byte) []byte {
		var b bytes.Buffer
		z := gzip.NewWriter(&b)
		if _, err := z.Write(data); err != nil {
			t.Fatal(err)
		}
		z.Close()
		return b.Bytes()
	}
	bomb := pack(make([]byte, 64<<20))
	lie := bytes.Clone(bomb) // the trailer says less than there is
	binary.LittleEndian.PutUint32(lie[len(lie)-4:], 1000)
	good := pack(plyOf(t, sphereRaw(200)))
	for name, c := range map[string]struct {
		data []byte
		want string
	}{
		"bomb": {bomb, "more than"}, "lie": {lie, "more than"}, "twice": {pack(good), "twice"}, "cut": {good[:len(good)/2],
			"unpacking stops"},
		"header": {good[:5], "damaged"}, "checksum": {append(bytes.Clone(good[:len(good)-5]), 0, 0, 0, 0, 0), ""},
		"empty": {pack(nil), "empty"},
	} {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		_, err := format.Load("b.gz", c.data, format.Options{})
		runtime.ReadMemStats(&after)
		if err == nil || !strings.HasPrefix(err.Error(), "b.gz: ") || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v", name, err)
		}
		if used := after.TotalAlloc - before.TotalAlloc; used > mostBytes {
			t.Errorf("%s: %d bytes were allocated", name, used)
		}
	}
	if f := load(t, "good.ply.gz", good, format.Options{}); f.Euler() != 2 || f.Name != "sphere" {
		t.Errorf("the good one: chi %d, %q", f.Euler(), f.Name)
	}
}

// Whatever is done to a real file, reading answers with a run or with one line; and takes no memory beyond bounds.
func TestSpoiledFiles(t *testing.T) {
	raw := sphereRaw(60)
	var glb bytes.Buffer
	if err := format.WriteRawGLB(&glb, raw); err != nil {
		t.Fatal(err)
	}
	r := rand.New(rand.NewPCG(11, 12))
	for name, data := range map[string][]byte{
		"ply": plyOf(t, raw), "glb": glb.Bytes(), "csv": scatterTable(raw, false, 1), "stl": stlOf(raw), "obj": objOf(raw),
		"gltf": gltfOf(nil, cornerBytes, tauBytes, indexBytes), "text.stl": textSTLOf(raw),
	} {
		for k := range 400 {
			d := bytes.Clone(data)
			switch k % 4 {
			case 0:
				d = d[:r.IntN(len(d))]
			case 1:
				for range 1 + r.IntN(8) {
					d[r.IntN(min(len(d), 600))] = byte(r.IntN(256))
				}
			case 2:
				d[r.IntN(len(d))] ^= 1 << r.IntN(8)
			default:
				at := r.IntN(len(d))
				d = append(d[:at:at], append(bytes.Repeat([]byte{byte(r.IntN(256))}, 1+r.IntN(9)), d[at:]...)...)
			}
			_, err := format.Load(name, d, format.Options{})
			if err != nil && (strings.ContainsAny(err.Error(), "\r\n") || !strings.HasPrefix(err.Error(), name+": ")) {
				t.Fatalf("%s: %q", name, err)
			}
		}
	}
}

// ExampleSyntaxError shows the line that the command and the page print.
func ExampleSyntaxError() {
	_, err := format.Load("wing.csv", []byte("x,y,z,tau_x,tau_y,tau_z\n0,0,0,1,0,0\n1,0,0,1,nought,0\n"), format.Options{})
	fmt.Println(err)
	// Output: wing.csv: line 3, column "tau_y": "nought" is not a number; correct the cell or drop the row
}
