package format_test

import (
	"bytes"
	"compress/gzip"
	"os"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
)

// runs are real computed surfaces; testdata/README.md says where they are from.
var runs = []string{"radome", "pod", "hut"}

func runFile(t testing.TB, name string) []byte {
	t.Helper()
	data, err := os.ReadFile("../../testdata/runs/" + name)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

func load(t testing.TB, name string, data []byte, opt format.Options) *field.Field {
	t.Helper()
	f, err := format.Load(name, data, opt)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// Reading what was written gives the same single-precision numbers to the last bit.
func TestGLBRoundTripIsLossless(t *testing.T) {
	for _, name := range runs {
		f := load(t, name+".ply", runFile(t, name+".ply"), format.Options{})
		var first, second bytes.Buffer
		if err := format.WriteGLB(&first, f); err != nil {
			t.Fatal(err)
		}
		raw, err := format.Read("x.glb", first.Bytes(), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		if raw.Name != name || raw.Units != f.Units || len(raw.Points) != len(f.Points) || len(raw.Tris) != len(f.Tris) {
			t.Errorf("%s: %s %+v, %d points, %d triangles", name, raw.Name, raw.Units, len(raw.Points), len(raw.Tris))
		}
		for i, v := range raw.Tau {
			if w := f.Tau3[i]; float32(w.X) != float32(v.X) || float32(w.Z) != float32(v.Z) ||
				float32(f.P[i]) != float32(raw.P[i]) {
				t.Fatalf("%s: point %d has tau %v and p %g, want %v and %g", name, i, v, raw.P[i], w, f.P[i])
			}
		}
		if err := format.WriteRawGLB(&second, raw); err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(first.Bytes(), second.Bytes()) {
			t.Errorf("%s: writing again gives other bytes", name)
		}
	}
}

func packed(t *testing.T, data []byte) []byte {
	t.Helper()
	var b bytes.Buffer
	z := gzip.NewWriter(&b)
	if _, err := z.Write(data); err != nil {
		t.Fatal(err)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}
