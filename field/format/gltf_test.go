package format_test

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/fstest"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

type object = map[string]any
type array = []any

// bytesOf packs numbers little-endian, one after the other.
func bytesOf(v ...any) []byte {
	var b bytes.Buffer
	for _, x := range v {
		if err := binary.Write(&b, binary.LittleEndian, x); err != nil {
			panic(err)
		}
	}
	return b.Bytes()
}

// gltfOf makes a document of one buffer with the views' bytes one after the other, each padded to four.
func gltfOf(doc object, views ...[]byte) []byte {
	var buffer []byte
	var list array
	for _, v := range views {
		list = append(list, object{"buffer": 0, "byteOffset": len(buffer), "byteLength": len(v)})
		buffer = append(buffer, v...)
		for len(buffer)%4 != 0 {
			buffer = append(buffer, 0)
		}
	}
	base := object{
		"asset": object{"version": "2.0"}, "bufferViews": list,
		"buffers": array{object{"byteLength": len(buffer),
			"uri": "data:application/octet-stream;base64," + base64.StdEncoding.EncodeToString(buffer)}},
		"nodes":  array{object{"mesh": 0}},
		"meshes": array{object{"primitives": array{object{"attributes": object{"POSITION": 0, "_TAU": 1}, "indices": 2}}}},
		"accessors": array{
			object{"bufferView": 0, "componentType": 5126, "count": 3, "type": "VEC3"},
			object{"bufferView": 1, "componentType": 5126, "count": 3, "type": "VEC3"},
			object{"bufferView": 2, "componentType": 5123, "count": 3, "type": "SCALAR"},
		},
	}
	for k, v := range doc {
		base[k] = v
	}
	text, err := json.Marshal(base)
	if err != nil {
		panic(err)
	}
	return text
}

var (
	cornerBytes = bytesOf([9]float32{0, 0, 0, 1, 0, 0, 0, 1, 0})
	tauBytes    = bytesOf([9]float32{1, 2, 0, 3, 4, 0, 5, 6, 0})
	indexBytes  = bytesOf([3]uint16{0, 1, 2})
)

func readDoc(t *testing.T, what string, data []byte, opt format.Options) field.Raw {
	t.Helper()
	raw, err := format.Read("x.gltf", data, opt)
	if err != nil {
		t.Fatalf("%s: %v", what, err)
	}
	return raw
}

func TestGLTFByDataURI(t *testing.T) {
	raw := readDoc(t, "plain", gltfOf(nil, cornerBytes, tauBytes, indexBytes), format.Options{})
	if len(raw.Points) != 3 || raw.Tau[2] != (r3.Vec{X: 5, Y: 6}) || raw.Tris[0] != [3]int32{0, 1, 2} ||
		raw.Units.Tau != "Pa" {
		t.Errorf("%+v", raw)
	}
}

// Sparse accessors replace elements, with and without a view below; normalised integers are fractions.
func TestGLTFSparseAndNormalised(t *testing.T) {
	sparse := object{"count": 1, "indices": object{"bufferView": 3, "componentType": 5121},
		"values": object{"bufferView": 4}}
	accessors := func(tau object) array {
		return array{
			object{"bufferView": 0, "componentType": 5126, "count": 3, "type": "VEC3"}, tau,
			object{"bufferView": 2, "componentType": 5123, "count": 3, "type": "SCALAR"},
		}
	}
	for _, c := range []struct {
		name   string
		tau    object
		views  [][]byte
		t0, t1 r3.Vec
	}{
		{"sparse over a view", object{"bufferView": 1, "componentType": 5126, "count": 3, "type": "VEC3", "sparse": sparse},
			[][]byte{tauBytes, indexBytes, {1}, bytesOf([3]float32{7, 8, 0})}, r3.Vec{X: 1, Y: 2}, r3.Vec{X: 7, Y: 8}},
		{"sparse over zeros", object{"componentType": 5126, "count": 3, "type": "VEC3", "sparse": sparse},
			[][]byte{tauBytes, indexBytes, {1}, bytesOf([3]float32{7, 8, 0})}, r3.Vec{}, r3.Vec{X: 7, Y: 8}},
		{"bytes", object{"bufferView": 1, "componentType": 5120, "count": 3, "type": "VEC3", "normalized": true},
			[][]byte{{127, 0x80, 0, 0, 0x81, 0, 0, 0, 0}, indexBytes}, r3.Vec{X: 1, Y: -1}, r3.Vec{Y: -1}},
		{"unsigned shorts", object{"bufferView": 1, "componentType": 5123, "count": 3, "type": "VEC3", "normalized": true},
			[][]byte{bytesOf([9]uint16{65535, 0, 0, 13107}), indexBytes}, r3.Vec{X: 1}, r3.Vec{X: 0.2}},
		{"shorts as they are", object{"bufferView": 1, "componentType": 5122, "count": 3, "type": "VEC3"},
			[][]byte{bytesOf([9]int16{-5, 6, 0, 7}), indexBytes}, r3.Vec{X: -5, Y: 6}, r3.Vec{X: 7}},
	} {
		data := gltfOf(object{"accessors": accessors(c.tau)}, append([][]byte{cornerBytes}, c.views...)...)
		raw := readDoc(t, c.name, data, format.Options{})
		if raw.Tau[0] != c.t0 || raw.Tau[1] != c.t1 {
			t.Errorf("%s: tau %v, want %v, %v first", c.name, raw.Tau, c.t0, c.t1)
		}
	}
}

// Position, vector and a scalar lie interleaved in one view; a second primitive uses the same points.
func TestGLTFInterleavedAndSharedPoints(t *testing.T) {
	var b []byte
	for i := range 4 {
		x, y := float32(i%2), float32(i/2)
		b = append(b, bytesOf([7]float32{x, y, 0, x + 10, y, 0, float32(i)})...)
	}
	doc := object{
		"bufferViews": array{object{"buffer": 0, "byteLength": len(b), "byteStride": 28},
			object{"buffer": 0, "byteOffset": len(b), "byteLength": 12}},
		"buffers": array{object{"byteLength": len(b) + 12, "uri": "data:;base64," + base64.StdEncoding.EncodeToString(
			append(bytes.Clone(b), bytesOf([6]uint16{0, 1, 2, 1, 3, 2})...))}},
		"accessors": array{
			object{"bufferView": 0, "componentType": 5126, "count": 4, "type": "VEC3"},
			object{"bufferView": 0, "byteOffset": 12, "componentType": 5126, "count": 4, "type": "VEC3"},
			object{"bufferView": 0, "byteOffset": 24, "componentType": 5126, "count": 4, "type": "SCALAR"},
			object{"bufferView": 1, "componentType": 5123, "count": 3, "type": "SCALAR"},
			object{"bufferView": 1, "byteOffset": 6, "componentType": 5123, "count": 3, "type": "SCALAR"},
		},
		"meshes": array{object{"primitives": array{
			object{"attributes": object{"POSITION": 0, "_TAU": 1, "_P": 2}, "indices": 3},
			object{"attributes": object{"POSITION": 0, "_TAU": 1, "_P": 2}, "indices": 4},
		}}},
	}
	raw := readDoc(t, "interleaved", gltfOf(doc), format.Options{})
	if len(raw.Points) != 4 || len(raw.Tris) != 2 || raw.Tau[3] != (r3.Vec{X: 11, Y: 1}) || raw.P[3] != 3 {
		t.Errorf("%+v", raw)
	}
	raw = readDoc(t, "tau by name", gltfOf(doc), format.Options{Tau: "_TAU"})
	if raw.Tau[3] != (r3.Vec{X: 11, Y: 1}) {
		t.Errorf("--tau _TAU gives %v", raw.Tau)
	}
}

// A quarter turn about z above a scaled and moved node: positions take all of it, tau only the turn. A mirrored node
// mirrors its flow and keeps its outside outside.
func TestGLTFNodes(t *testing.T) {
	half := math.Sqrt(0.5)
	nodes := array{
		object{"children": []int{1}, "rotation": []float64{0, 0, half, half}},
		object{"mesh": 0, "scale": []float64{3, 3, 3}, "translation": []float64{1, 0, 0}},
		object{"mesh": 0, "matrix": []float64{-2, 0, 0, 0, 0, 2, 0, 0, 0, 0, 2, 0, 0, 0, 5, 1}},
		object{"mesh": 0}, // not in the scene
	}
	doc := object{"nodes": nodes, "scene": 0, "scenes": array{object{"nodes": []int{0, 2}}}}
	raw := readDoc(t, "nodes", gltfOf(doc, cornerBytes, tauBytes, indexBytes), format.Options{})
	want := []struct{ point, tau r3.Vec }{
		{r3.Vec{Y: 1}, r3.Vec{X: -2, Y: 1}}, {r3.Vec{Y: 4}, r3.Vec{X: -4, Y: 3}}, {r3.Vec{X: -3, Y: 1}, r3.Vec{X: -6, Y: 5}},
		{r3.Vec{Z: 5}, r3.Vec{X: -1, Y: 2}}, {r3.Vec{X: -2, Z: 5}, r3.Vec{X: -3, Y: 4}}, {r3.Vec{Y: 2, Z: 5}, r3.Vec{X: -5,
			Y: 6}},
	}
	if len(raw.Points) != len(want) {
		t.Fatalf("%d points", len(raw.Points))
	}
	for i, w := range want {
		if raw.Points[i].Sub(w.point).Norm() > 1e-12 || raw.Tau[i].Sub(w.tau).Norm() > 1e-12 {
			t.Errorf("point %d is %v with tau %v, want %v", i, raw.Points[i], raw.Tau[i], w)
		}
	}
	for _, tri := range raw.Tris {
		c := r3.Tri{raw.Points[tri[0]], raw.Points[tri[1]], raw.Points[tri[2]]}
		if c.Normal().Z <= 0 {
			t.Errorf("triangle %v points down: %v", tri, c)
		}
	}
}

func TestGLTFStripsAndFans(t *testing.T) {
	for mode, want := range map[int]string{4: "[[0 1 2]]", 5: "[[0 1 2]]", 6: "[[1 2 0]]"} {
		doc := object{"meshes": array{object{"primitives": array{
			object{"attributes": object{"POSITION": 0, "_TAU": 1}, "mode": mode},
			object{"attributes": object{"POSITION": 0, "_TAU": 1}, "mode": 1}}}}}
		raw := readDoc(t, fmt.Sprint(mode), gltfOf(doc, cornerBytes, tauBytes, indexBytes), format.Options{})
		if fmt.Sprint(raw.Tris) != want || !hasFinding(raw.Findings, "skipped-primitives", 1) {
			t.Errorf("mode %d: %v, %+v", mode, raw.Tris, raw.Findings)
		}
	}
}

// Buffers in files are read beside the document, and nowhere else.
func TestGLTFExternalBuffers(t *testing.T) {
	all := bytes.Join([][]byte{cornerBytes, tauBytes, append(bytes.Clone(indexBytes), 0, 0)}, nil)
	files := fstest.MapFS{"data/a b.bin": {Data: all}, "short.bin": {Data: all[:5]}, "secret": {Data: all}}
	doc := func(uri string) []byte {
		return gltfOf(object{"buffers": array{object{"byteLength": len(all), "uri": uri}}}, cornerBytes, tauBytes, indexBytes)
	}
	raw := readDoc(t, "beside", doc("data/a%20b.bin"), format.Options{Files: files})
	if raw.Tau[2] != (r3.Vec{X: 5, Y: 6}) {
		t.Errorf("tau %v", raw.Tau)
	}
	for _, uri := range []string{"../secret", "/secret", "data/../../secret", "%2e%2e/secret", "..%2fsecret",
		`..\secret`, "C:/secret",
		"file:///secret", "http://host/secret", ".", "", "data", "missing.bin", "short.bin"} {
		_, err := format.Read("x.gltf", doc(uri), format.Options{Files: files})
		if err == nil || !strings.Contains(err.Error(), "buffer 0") {
			t.Errorf("address %q: error %v", uri, err)
		}
	}
	if _, err := format.Read("x.gltf", doc("secret"), format.Options{}); err == nil || !strings.Contains(err.Error(),
		"convert the run") {
		t.Errorf("without a folder: %v", err)
	}
}

// A link beside the document that leads out of its folder is not followed by a folder opened as a root.
func TestGLTFLinksDoNotLeadOut(t *testing.T) {
	all := bytes.Join([][]byte{cornerBytes, tauBytes, append(bytes.Clone(indexBytes), 0, 0)}, nil)
	outside, inside := t.TempDir(), t.TempDir()
	if err := os.WriteFile(filepath.Join(outside, "secret.bin"), all, 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(inside, "own.bin"), all, 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(filepath.Join(outside, "secret.bin"), filepath.Join(inside, "link.bin")); err != nil {
		t.Skipf("no links here: %v", err)
	}
	root, err := os.OpenRoot(inside)
	if err != nil {
		t.Fatal(err)
	}
	defer root.Close()
	for name, good := range map[string]bool{"own.bin": true, "link.bin": false} {
		doc := gltfOf(object{"buffers": array{object{"byteLength": len(all), "uri": name}}},
			cornerBytes, tauBytes, indexBytes)
		if _, err := format.Read("x.gltf", doc, format.Options{Files: root.FS()}); (err == nil) != good {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// The file of the specification's own layout: magic, chunks, padding, bounds; found by hand, not by our reader.
func TestGLBLayout(t *testing.T) {
	raw := field.Raw{Name: "one", Points: []r3.Vec{{}, {X: 1}, {Y: 1}}, Tris: [][3]int32{{0, 1, 2}},
		Tau: []r3.Vec{{X: 1}, {X: 1}, {X: 1}}}
	var b bytes.Buffer
	if err := format.WriteRawGLB(&b, raw); err != nil {
		t.Fatal(err)
	}
	d := b.Bytes()
	u32 := func(at int) int { return int(binary.LittleEndian.Uint32(d[at:])) }
	text := u32(12)
	if string(d[:4]) != "glTF" || u32(4) != 2 || u32(8) != len(d) || text%4 != 0 || string(d[16:20]) != "JSON" ||
		u32(20+text) != 36+36+12 || string(d[24+text:28+text]) != "BIN\x00" || len(d) != 28+text+84 {
		t.Errorf("layout is wrong: %d bytes, JSON %d, %q", len(d), text, d[:20])
	}
	var doc object
	if err := json.Unmarshal(d[20:20+text], &doc); err != nil {
		t.Fatal(err)
	}
	for i, want := range []string{"map[bufferView:0 componentType:5126 count:3 max:[1 1 0] min:[0 0 0] type:VEC3]",
		"map[bufferView:1 componentType:5126 count:3 type:VEC3]",
		"map[bufferView:2 componentType:5125 count:3 type:SCALAR]"} {
		if got := fmt.Sprint(doc["accessors"].(array)[i]); got != want {
			t.Errorf("accessor %d is %s, want %s", i, got, want)
		}
	}
}

// Far from the origin single precision would be coarse: half a metre in a thousand kilometres.
func TestGLBKeepsPositionsFarFromTheOrigin(t *testing.T) {
	far := r3.Vec{X: 4.2e6, Y: 5.1e5, Z: 120}
	raw := field.Raw{Points: []r3.Vec{far, far.Add(r3.Vec{X: 0.01}), far.Add(r3.Vec{Y: 0.01})}, Tris: [][3]int32{{0, 1,
		2}},
		Tau: make([]r3.Vec, 3), Units: field.Units{Length: "m", Tau: "1"}}
	var b bytes.Buffer
	if err := format.WriteRawGLB(&b, raw); err != nil {
		t.Fatal(err)
	}
	again := readDoc(t, "far", b.Bytes(), format.Options{})
	for i, p := range again.Points {
		if d := p.Sub(raw.Points[i]).Norm(); d > 2e-9 {
			t.Errorf("point %d is off by %g", i, d)
		}
	}
	if again.Units != raw.Units {
		t.Errorf("units %+v", again.Units)
	}
}

// Face values survive: each triangle has its own points in the file, and is one face with its value again.
func TestGLBKeepsFaceValues(t *testing.T) {
	raw, err := format.Prepare("pod", runFile(t, "pod_faces.csv.gz"), format.Options{Surface: runFile(t, "pod.ply")})
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := format.WriteRawGLB(&b, raw); err != nil {
		t.Fatal(err)
	}
	again, err := format.Prepare("pod.glb", b.Bytes(), format.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(again.Points) != len(raw.Points) || len(again.FaceTau) != len(raw.FaceTau) {
		t.Fatalf("%d points, %d face values, want %d, %d", len(again.Points), len(again.FaceTau), len(raw.Points),
			len(raw.FaceTau))
	}
	for i, v := range again.FaceTau {
		if w := raw.FaceTau[i]; float32(w.X) != float32(v.X) || float32(w.Y) != float32(v.Y) ||
			float32(raw.FaceP[i]) != float32(again.FaceP[i]) {
			t.Fatalf("face %d: %v, want %v", i, v, w)
		}
	}
}
