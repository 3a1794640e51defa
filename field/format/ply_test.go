package format_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// plyWriter writes PLY in any of its forms, for tests alone: slow, and independent of the package's own writer.
type plyWriter struct {
	bytes.Buffer
	form string // "ascii", "binary_little_endian" or "binary_big_endian"
}

func (w *plyWriter) put(typ string, x float64) {
	if w.form == "ascii" {
		fmt.Fprintf(w, "%v ", x)
		return
	}
	var order binary.ByteOrder = binary.LittleEndian
	if w.form == "binary_big_endian" {
		order = binary.BigEndian
	}
	var v any
	switch typ {
	case "char", "int8":
		v = int8(x)
	case "uchar", "uint8":
		v = uint8(x)
	case "short", "int16":
		v = int16(x)
	case "ushort", "uint16":
		v = uint16(x)
	case "int", "int32":
		v = int32(x)
	case "uint", "uint32":
		v = uint32(x)
	case "float", "float32":
		v = float32(x)
	default:
		v = x
	}
	if err := binary.Write(w, order, v); err != nil {
		panic(err)
	}
}

func (w *plyWriter) list(lengthType, typ string, x ...float64) {
	w.put(lengthType, float64(len(x)))
	for _, v := range x {
		w.put(typ, v)
	}
}

var plyForms = []string{"ascii", "binary_little_endian", "binary_big_endian"}

// A quadrilateral and a triangle, with values of every scalar type, in every form; elements and properties that nobody
// knows stand before, between and after.
func TestPLYFormsAndTypes(t *testing.T) {
	points := [][3]float64{{0, 0, 0}, {2, 0, 0}, {2, 2, 0}, {0, 2, 0}, {4, 1, 0}}
	for _, form := range plyForms {
		for _, names := range [][8]string{
			{"char", "uchar", "short", "ushort", "int", "uint", "float", "double"},
			{"int8", "uint8", "int16", "uint16", "int32", "uint32", "float32", "float64"},
		} {
			for _, typ := range names {
				for _, index := range names[:6] {
					w := plyWriter{form: form}
					fmt.Fprintf(&w, "ply\nformat %s 1.0\nobj_info made by hand\ncomment name two faces ; rest\n", form)
					fmt.Fprintf(&w, "element camera 2\nproperty %s zoom\nproperty list %s %s path\n", names[6], names[1], names[3])
					fmt.Fprintf(&w, "element vertex 5\nproperty %s quality\n", names[2])
					for _, n := range []string{"x", "y", "z", "tau_x", "tau_y", "tau_z", "p", "cp"} {
						fmt.Fprintf(&w, "property %s %s\n", typ, n)
					}
					fmt.Fprintf(&w, "element face 2\nproperty %s flag\nproperty list %s %s vertex_indices\nproperty list uchar "+
						"int extra\n",
						names[5], names[1], index)
					fmt.Fprintf(&w, "element edge 1\nproperty int vertex1\nend_header\n")
					for k := range 2 {
						w.put(names[6], 1)
						w.list(names[1], names[3], []float64{7, 8, 9}[:k+1]...)
					}
					for i, p := range points {
						w.put(names[2], 3)
						for _, x := range []float64{p[0], p[1], p[2], float64(i), 2, 0, float64(10 * i), 1} {
							w.put(typ, x)
						}
					}
					w.put(names[5], 1)
					w.list(names[1], index, 0, 1, 2, 3)
					w.list("uchar", "int", 5)
					w.put(names[5], 1)
					w.list(names[1], index, 1, 4, 2)
					w.list("uchar", "int")
					w.put("int", 4)
					checkTwoFaces(t, fmt.Sprintf("%s %s %s", form, typ, index), w.Bytes())
				}
			}
		}
	}
}

func checkTwoFaces(t *testing.T, what string, data []byte) {
	t.Helper()
	raw, err := format.Read("two.ply", data, format.Options{})
	if err != nil {
		t.Fatalf("%s: %v", what, err)
	}
	if raw.Name != "two faces" || len(raw.Points) != 5 || raw.Points[4] != (r3.Vec{X: 4, Y: 1}) {
		t.Errorf("%s: name %q, points %v", what, raw.Name, raw.Points)
	}
	if fmt.Sprint(raw.Tris) != "[[0 1 2] [0 2 3] [1 4 2]]" || fmt.Sprint(raw.Face) != "[0 0 1]" {
		t.Errorf("%s: triangles %v of faces %v", what, raw.Tris, raw.Face)
	}
	if raw.Tau[3] != (r3.Vec{X: 3, Y: 2}) || raw.P[3] != 30 || raw.Cp[3] != 1 {
		t.Errorf("%s: tau %v, p %v, cp %v", what, raw.Tau, raw.P, raw.Cp)
	}
}

func TestPLYFaceValues(t *testing.T) {
	for _, form := range plyForms {
		w := plyWriter{form: form}
		fmt.Fprintf(&w, "ply\r\nformat %s 1.0\r\ncomment units x y z [mm], cf [-]\r\nelement vertex 4\r\n", form)
		fmt.Fprintf(&w, "property float x\r\nproperty float y\r\nproperty float z\r\nelement face 1\r\n")
		fmt.Fprintf(&w, "property list uint8 uint32 vertex_index\r\nproperty float cf_x\r\nproperty float "+
			"cf_y\r\nproperty float cf_z\r\n")
		fmt.Fprintf(&w, "property float cp\r\nend_header\r\n")
		for _, p := range [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}} {
			for _, x := range p {
				w.put("float", x)
			}
		}
		w.list("uint8", "uint32", 0, 1, 2, 3)
		for _, x := range []float64{0.5, 0.25, 0, -1} {
			w.put("float", x)
		}
		raw, err := format.Read("q.ply", w.Bytes(), format.Options{})
		if err != nil {
			t.Fatal(form, err)
		}
		want := r3.Vec{X: 0.5, Y: 0.25}
		if len(raw.FaceTau) != 2 || raw.FaceTau[0] != want || raw.FaceTau[1] != want || raw.FaceCp[1] != -1 ||
			raw.Tau != nil {
			t.Errorf("%s: face values %v %v", form, raw.FaceTau, raw.FaceCp)
		}
		if raw.Units != (field.Units{Length: "mm", Tau: "1"}) {
			t.Errorf("%s: units %+v", form, raw.Units)
		}
	}
}

// The user's names win over the usual ones, for points and faces.
func TestPLYNamesByTheUser(t *testing.T) {
	head := "ply\nformat ascii 1.0\nelement vertex 3\nproperty float x\nproperty float y\nproperty float z\n" +
		"property float tau_x\nproperty float tau_y\nproperty float tau_z\nproperty float u\nproperty float v\nproperty " +
		"float w\n" +
		"property float pt\nelement face 1\nproperty list uchar int vertex_indices\nproperty float q0\nproperty float q1\n" +
		"property float q2\nend_header\n"
	data := []byte(head + "0 0 0 1 1 1 2 3 4 5\n1 0 0 1 1 1 2 3 4 5\n0 1 0 1 1 1 2 3 4 5\n3 0 1 2 7 8 9\n")
	for _, c := range []struct {
		opt        format.Options
		tau, ftau  string
		p          float64
		wantsError string
	}{
		{opt: format.Options{}, tau: "{1 1 1}"},
		{opt: format.Options{Tau: "u,v,w", P: "pt"}, tau: "{2 3 4}", p: 5},
		{opt: format.Options{Tau: "q"}, ftau: "{7 8 9}"},
		{opt: format.Options{Tau: "nothing"}, wantsError: `nothing is called "nothing" (--tau)`},
		{opt: format.Options{P: "nothing"}, wantsError: `nothing is called "nothing" (--p)`},
	} {
		raw, err := format.Read("u.ply", data, c.opt)
		if c.wantsError != "" {
			if err == nil || !strings.Contains(err.Error(), c.wantsError) {
				t.Errorf("%+v: error %v, want %s", c.opt, err, c.wantsError)
			}
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		if c.tau != "" && fmt.Sprint(raw.Tau[0]) != c.tau || c.ftau != "" && fmt.Sprint(raw.FaceTau[0]) != c.ftau {
			t.Errorf("%+v: tau %v, face tau %v", c.opt, raw.Tau, raw.FaceTau)
		}
		if c.p != 0 && raw.P[0] != c.p {
			t.Errorf("%+v: p %v", c.opt, raw.P)
		}
	}
}

func TestPLYPolygonsOfAnySize(t *testing.T) {
	var b strings.Builder
	const n = 300 // more than a byte counts
	fmt.Fprintf(&b, "ply\nformat ascii 1.0\nelement vertex %d\nproperty float x\nproperty float y\nproperty float z\n", n)
	fmt.Fprintf(&b, "property float tau_x\nproperty float tau_y\nproperty float tau_z\n")
	fmt.Fprintf(&b, "element face 2\nproperty list ushort int vertex_indices\nend_header\n")
	for i := range n {
		a := 2 * math.Pi * float64(i) / n
		fmt.Fprintf(&b, "%g %g 0 1 0 0\n", math.Cos(a), math.Sin(a))
	}
	fmt.Fprintf(&b, "2 0 1\n%d", n)
	for i := range n {
		fmt.Fprintf(&b, " %d", i)
	}
	f := load(t, "disc.ply", []byte(b.String()+"\n"), format.Options{})
	if len(f.Tris) != n-2 || f.Euler() != 1 || !hasFinding(f.Findings, "thin-polygons", 1) {
		t.Errorf("%d triangles, chi %d, %+v", len(f.Tris), f.Euler(), f.Findings)
	}
}

func hasFinding(list []field.Finding, code string, count int) bool {
	for _, f := range list {
		if f.Code == code && f.Count == count {
			return true
		}
	}
	return false
}

// What WriteRawPLY writes is read back the same: polygons, point and face values, units.
func TestPLYRoundTripKeepsPolygons(t *testing.T) {
	for _, name := range runs {
		raw, err := format.Read(name+".ply", runFile(t, name+".ply"), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		raw.FaceTau = make([]r3.Vec, len(raw.Tris))
		for i := range raw.FaceTau {
			raw.FaceTau[i].X = float64(raw.Face[i])
		}
		var b bytes.Buffer
		if err := format.WriteRawPLY(&b, raw); err != nil {
			t.Fatal(err)
		}
		again, err := format.Read("again", b.Bytes(), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		again.Findings, raw.Findings = nil, nil
		if !sameRaw(raw, again) {
			t.Errorf("%s differs after a round trip", name)
		}
	}
}

func sameRaw(a, b field.Raw) bool {
	return fmt.Sprintf("%v", a) == fmt.Sprintf("%v", b)
}
