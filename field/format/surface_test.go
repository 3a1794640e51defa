package format_test

import (
	"bytes"
	"strings"
	"testing"

	"shearprint/field/format"
	"shearprint/field/r3"
)

// A run with triangles of its own does not need the surface, and its unit is still the user's.
func TestSurfaceBesideARunThatHasOne(t *testing.T) {
	raw := sphereRaw(300)
	raw.Units.Length = ""
	data := plyOf(t, raw)
	f := load(t, "s.ply", data, format.Options{Surface: stlOf(raw), SurfaceName: "s.stl", Unit: "mm"})
	if d := f.Diagonal(); d > 0.004 || f.Units.Length != "m" {
		t.Errorf("diagonal %g in %q", d, f.Units.Length)
	}
	if _, ok := finding(f.Findings, "surface-unused"); !ok {
		t.Errorf("not told: %+v", f.Findings)
	}
}

// A PLY of points without faces is matched as a table is.
func TestPointsWithoutFaces(t *testing.T) {
	raw := sphereRaw(300)
	surface := stlOf(raw)
	tris := raw.Tris
	raw.Tris = nil
	data := plyOf(t, raw)
	if _, err := format.Load("s.ply", data, format.Options{}); err == nil || !strings.Contains(err.Error(), "--surface") {
		t.Errorf("points alone: %v", err)
	}
	f := load(t, "s.ply", data, format.Options{Surface: surface})
	if f.Euler() != 2 || len(f.Tris) != len(tris) {
		t.Errorf("chi %d, %d triangles", f.Euler(), len(f.Tris))
	}
}

// The kind is told from the content, whatever the name says.
func TestNamesDoNotMatter(t *testing.T) {
	raw := sphereRaw(300)
	var glb bytes.Buffer
	if err := format.WriteRawGLB(&glb, raw); err != nil {
		t.Fatal(err)
	}
	for name, data := range map[string][]byte{
		"a.stl": plyOf(t, raw), "b.csv": glb.Bytes(), "c": packed(t, glb.Bytes()), "d.glb": plyOf(t, raw),
	} {
		if f := load(t, name, data, format.Options{}); f.Euler() != 2 || f.Name != "sphere" {
			t.Errorf("%s: chi %d, name %q", name, f.Euler(), f.Name)
		}
	}
	raw.Name = ""
	for file, want := range map[string]string{"a/b/wing.ply.gz": "wing", `C:\runs\wing.v2.ply`: "wing.v2",
		".hidden": ".hidden"} {
		if f := load(t, file, plyOf(t, raw), format.Options{}); f.Name != want {
			t.Errorf("%s is called %q", file, f.Name)
		}
	}
}

// Any two of equally near copies give the same vectors: reading twice gives the same run.
func TestReadingTwiceIsTheSame(t *testing.T) {
	table := scatterTable(sphereRaw(500), true, 1)
	opt := format.Options{Surface: stlOf(sphereRaw(500)), Flip: true}
	a, b := load(t, "t.csv", table, opt), load(t, "t.csv", table, opt)
	for v := range a.Points {
		if a.Tau3[v] != b.Tau3[v] || a.Points[v] != b.Points[v] || a.Tau3[v] == (r3.Vec{}) {
			t.Fatalf("vertex %d differs or is empty", v)
		}
	}
}
