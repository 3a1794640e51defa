package format_test

import (
	"bytes"
	"strings"
	"testing"
	"testing/fstest"

	"shearprint/field"
	"shearprint/field/format"
)

// Whatever the bytes are: one line of error, or a run that is consistent, builds or is refused in one line, and can be
// written and read again with as many points and triangles.
func checkAny(t *testing.T, data []byte, opt format.Options) {
	t.Helper()
	if len(data) > 1<<16 {
		return // larger files reach no other code
	}
	opt.Files = fstest.MapFS{"beside.bin": {Data: bytes.Repeat([]byte{0, 0, 128, 63}, 64)}}
	raw, err := format.Read("f", data, opt)
	if err != nil {
		checkLine(t, err)
		return
	}
	checkRaw(t, raw)
	if _, err := format.Load("f", data, opt); err != nil {
		checkLine(t, err)
	}
	if len(raw.Tris) == 0 {
		return
	}
	raw.Findings = nil
	var b bytes.Buffer
	if err := format.WriteRawPLY(&b, raw); err != nil {
		t.Fatal(err)
	}
	again, err := format.Read("again", b.Bytes(), format.Options{})
	if err != nil || len(again.Points) != len(raw.Points) || len(again.Tris) != len(raw.Tris) {
		t.Fatalf("PLY again: %v, %d points of %d, %d triangles of %d", err, len(again.Points), len(raw.Points),
			len(again.Tris), len(raw.Tris))
	}
	b.Reset()
	if err := format.WriteRawGLB(&b, raw); err != nil {
		t.Fatal(err)
	}
	again, err = format.Read("again", b.Bytes(), format.Options{})
	if err != nil || len(again.Tris) != len(raw.Tris) {
		t.Fatalf("GLB again: %v, %d triangles of %d", err, len(again.Tris), len(raw.Tris))
	}
}

func checkLine(t *testing.T, err error) {
	t.Helper()
	if strings.ContainsAny(err.Error(), "\r\n") || len(err.Error()) > 700 {
		t.Fatalf("not one short line: %q", err)
	}
}

func checkRaw(t *testing.T, raw field.Raw) {
	t.Helper()
	n, m := len(raw.Points), len(raw.Tris)
	for what, c := range map[string][2]int{
		"tau": {len(raw.Tau), n}, "p": {len(raw.P), n}, "cp": {len(raw.Cp), n}, "face tau": {len(raw.FaceTau), m},
		"face p": {len(raw.FaceP), m}, "face cp": {len(raw.FaceCp), m}, "face": {len(raw.Face), m},
	} {
		if c[0] != 0 && c[0] != c[1] {
			t.Fatalf("%s has %d values for %d", what, c[0], c[1])
		}
	}
	for i, tri := range raw.Tris {
		for _, v := range tri {
			if v < 0 || int(v) >= n {
				t.Fatalf("triangle %d names point %d of %d", i, v, n)
			}
		}
		if raw.Face != nil && i > 0 && raw.Face[i] < raw.Face[i-1] {
			t.Fatalf("face numbers fall at triangle %d", i)
		}
	}
}

func FuzzPLY(f *testing.F) {
	const body = "element vertex 4\nproperty float x\nproperty float y\nproperty float z\nproperty float " +
		"tau_x\nproperty float tau_y\n" +
		"property float tau_z\nproperty float p\nelement face 2\nproperty list uchar int vertex_indices\nproperty float " +
		"cp\nend_header\n"
	f.Add([]byte("ply\nformat ascii 1.0\ncomment units x y z [mm], tau [Pa]\n" + body +
		"0 0 0 1 0 0 5\n1 0 0 1 0 0 5\n1 1 0 1 0 0 5\n0 1 0.1 nan 0 0 5\n3 0 1 2 1\n4 0 1 2 3 0.5\n"))
	values := string(bytesOf([28]float32{0, 0, 0, 1, 1, 0, 0, 1, 0, 0, 1, 1, 0, 0, 1, 1, 0, 0, 1, 0, 0, 0, 1, 0, 1}))
	faces := "\x03" + string(bytesOf([3]int32{0, 1, 2}, float32(1))) + "\x04" + string(bytesOf([4]int32{0, 1, 2, 3},
		float32(2)))
	f.Add([]byte("ply\nformat binary_little_endian 1.0\n" + body + values + faces))
	f.Add([]byte("ply\r\nformat binary_big_endian 1.0\r\nelement vertex 1\r\nproperty double x\r\nproperty char " +
		"y\r\nproperty ushort z\r\n" +
		"element odd 1\r\nproperty list uint int8 " +
		"a\r\nend_header\r\n\x3f\xf0\x00\x00\x00\x00\x00\x00\x01\x00\x01\x00\x00\x00\x02\x01\x02"))
	f.Fuzz(func(t *testing.T, data []byte) {
		checkAny(t, append([]byte("ply\n"), bytes.TrimPrefix(data, []byte("ply\n"))...), format.Options{})
	})
}

func FuzzGLTF(f *testing.F) {
	f.Add(gltfOf(nil, cornerBytes, tauBytes, indexBytes))
	f.Add(gltfOf(object{"buffers": array{object{"byteLength": 84, "uri": "beside.bin"}}}, cornerBytes, tauBytes,
		indexBytes))
	f.Add(gltfOf(object{"nodes": array{object{"children": []int{1}, "rotation": []float64{0, 0, 1, 1}},
		object{"mesh": 0, "scale": []float64{1, -2, 1}}}, "scenes": array{object{"nodes": []int{0}}}}, cornerBytes,
		tauBytes, indexBytes))
	f.Fuzz(func(t *testing.T, data []byte) {
		checkAny(t, append([]byte("{"), bytes.TrimPrefix(data, []byte("{"))...), format.Options{})
	})
}

func FuzzGLB(f *testing.F) {
	for _, raw := range []field.Raw{sphereRaw(20), {Points: sphereRaw(20).Points, Tris: sphereRaw(20).Tris}} {
		var b bytes.Buffer
		if err := format.WriteRawGLB(&b, raw); err != nil {
			f.Fatal(err)
		}
		f.Add(b.Bytes())
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		checkAny(t, append([]byte("glTF"), bytes.TrimPrefix(data, []byte("glTF"))...), format.Options{})
	})
}

func FuzzTable(f *testing.F) {
	surface := stlOf(sphereRaw(20))
	f.Add(scatterTable(sphereRaw(20), true, 1))
	f.Add([]byte(gridTable("x,y,z,tau_x,tau_y,tau_z,p", ",", ".", "\n")))
	f.Add([]byte(gridTable("# x y z tau_x tau_y tau_z p", " ", ".", "\n")))
	f.Add([]byte(gridTable(`"X [mm]";"Y [mm]";"Z [mm]";cf[i];cf[j];cf[k];p (kPa)`, ";", ",", "\r\n")))
	f.Add([]byte("i,j,x,y,z,taux,tauy,tauz\n0,0,0,0,0,1,0,0\n1,0,1,0,0,1,0,0\n0,1,0,1,0,1,0,0\n1,1,1,1,0,1,0,nan\n"))
	f.Add(tableOf(nil))
	f.Fuzz(func(t *testing.T, data []byte) {
		checkAny(t, data, format.Options{})
		checkAny(t, data, format.Options{Surface: surface, Flip: true, Mirror: "y", Unit: "mm"})
	})
}

func FuzzGeometry(f *testing.F) {
	f.Add(stlOf(sphereRaw(20)))
	f.Add(textSTLOf(sphereRaw(20)))
	f.Add(objOf(sphereRaw(20)))
	table := scatterTable(sphereRaw(20), false, 1)
	f.Fuzz(func(t *testing.T, data []byte) {
		checkAny(t, data, format.Options{})
		if len(data) < 1<<16 {
			if _, err := format.Load("t.csv", table, format.Options{Surface: data}); err != nil {
				checkLine(t, err)
			}
		}
	})
}

func FuzzGzip(f *testing.F) {
	f.Add([]byte("\x1f\x8b\x08\x00\x00\x00\x00\x00\x00\xff\x01\x05\x00\xfa\xffply\n\x00\x00\x00\x00\x00\x05\x00\x00\x00"))
	f.Fuzz(func(t *testing.T, data []byte) {
		checkAny(t, append([]byte{0x1f, 0x8b}, bytes.TrimPrefix(data, []byte{0x1f, 0x8b})...), format.Options{})
	})
}
