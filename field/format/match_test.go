package format_test

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// sphereRaw is a sphere in uniform creeping flow along x (exact: tau along the projected stream, p falling with x),
// in SI.
func sphereRaw(triangles int) field.Raw {
	raw := exact.Sphere(1, triangles)
	raw.Name = "sphere"
	raw.Units = field.Units{Length: "m", Tau: "Pa", P: "Pa"}
	for _, p := range raw.Points {
		raw.Tau = append(raw.Tau, r3.Vec{X: 1.5}.Reject(p.Unit()))
		raw.P = append(raw.P, -1.5*p.X)
	}
	return raw
}

// scatterTable writes the points, or the faces' centres, of a surface in mixed order, positions scaled.
func scatterTable(raw field.Raw, faces bool, scale float64) []byte {
	var b bytes.Buffer
	b.WriteString("x,y,z,tau_x,tau_y,tau_z,p\n")
	row := func(p, v r3.Vec, x float64) {
		fmt.Fprintf(&b, "%.8g,%.8g,%.8g,%.7g,%.7g,%.7g,%.7g\n", scale*p.X, scale*p.Y, scale*p.Z, v.X, v.Y, v.Z, x)
	}
	if faces {
		for _, t := range rand.New(rand.NewPCG(1, 2)).Perm(len(raw.Tris)) {
			c := r3.Tri{raw.Points[raw.Tris[t][0]], raw.Points[raw.Tris[t][1]], raw.Points[raw.Tris[t][2]]}
			m := c.At([3]float64{1. / 3, 1. / 3, 1. / 3})
			row(m, r3.Vec{X: 1.5}.Reject(m.Unit()), -1.5*m.X)
		}
		return b.Bytes()
	}
	for _, i := range rand.New(rand.NewPCG(3, 4)).Perm(len(raw.Points)) {
		row(raw.Points[i], raw.Tau[i], raw.P[i])
	}
	return b.Bytes()
}

// stlOf writes the triangles as binary STL, without shared points and in single precision.
func stlOf(raw field.Raw) []byte {
	b := make([]byte, 80, 84+50*len(raw.Tris))
	b = append(b, bytesOf(uint32(len(raw.Tris)))...)
	for _, t := range raw.Tris {
		b = append(b, bytesOf([3]float32{})...)
		for _, v := range t {
			p := raw.Points[v]
			b = append(b, bytesOf([3]float32{float32(p.X), float32(p.Y), float32(p.Z)})...)
		}
		b = append(b, 0, 0)
	}
	return b
}

func objOf(raw field.Raw) []byte {
	var b bytes.Buffer
	b.WriteString("# made by a test\no body\n")
	for _, p := range raw.Points {
		fmt.Fprintf(&b, "v %.9g %.9g %.9g\n", p.X, p.Y, p.Z)
	}
	for i, t := range raw.Tris {
		switch i % 4 {
		case 0:
			fmt.Fprintf(&b, "f %d %d %d\n", t[0]+1, t[1]+1, t[2]+1)
		case 1:
			fmt.Fprintf(&b, "f %d/1 %d/1 %d/1\n", t[0]+1, t[1]+1, t[2]+1)
		case 2:
			fmt.Fprintf(&b, "f %d//1 %d//1 %d//1\n", t[0]+1, t[1]+1, t[2]+1)
		default:
			n := int32(len(raw.Points))
			fmt.Fprintf(&b, "f %d %d/2/3 %d\n", t[0]-n, t[1]+1, t[2]-n)
		}
	}
	return b.Bytes()
}

func textSTLOf(raw field.Raw) []byte {
	var b bytes.Buffer
	b.WriteString("solid body\n")
	for _, t := range raw.Tris {
		b.WriteString("facet normal 0 0 0\n outer loop\n")
		for _, v := range t {
			p := raw.Points[v]
			fmt.Fprintf(&b, "  vertex %.9g %.9g %.9g\n", p.X, p.Y, p.Z)
		}
		b.WriteString(" endloop\nendfacet\n")
	}
	b.WriteString("endsolid body\n")
	return b.Bytes()
}

// A table of points or of face centres finds its place on the surface from any file of geometry.
func TestTablesOnSurfaces(t *testing.T) {
	raw := sphereRaw(2000)
	var ply, glb bytes.Buffer
	if err := format.WriteRawPLY(&ply, raw); err != nil {
		t.Fatal(err)
	}
	if err := format.WriteRawGLB(&glb, raw); err != nil {
		t.Fatal(err)
	}
	for name, surface := range map[string][]byte{
		"a.ply": ply.Bytes(), "a.glb": glb.Bytes(), "a.stl": stlOf(raw), "text.stl": textSTLOf(raw), "a.obj": objOf(raw),
	} {
		for _, faces := range []bool{false, true} {
			f := load(t, "t.csv", scatterTable(raw, faces, 1), format.Options{Surface: surface, SurfaceName: name})
			what := fmt.Sprintf("%s, faces %v", name, faces)
			if f.Euler() != 2 || len(f.Parts) != 1 || len(f.Tris) != len(raw.Tris) {
				t.Errorf("%s: chi %d, %d parts, %d triangles", what, f.Euler(), len(f.Parts), len(f.Tris))
			}
			worst := 0.0
			for v, p := range f.Points {
				worst = math.Max(worst, f.Tau3[v].Sub(r3.Vec{X: 1.5}.Reject(p.Unit())).Norm())
			}
			if worst > 0.05 { // an edge is 0.08 long: means of faces cannot be nearer
				t.Errorf("%s: tau is off by %g", what, worst)
			}
			want := map[bool]string{false: "vertices", true: "faces"}[faces]
			if m, ok := finding(f.Findings, "matched-surface"); !ok || !strings.Contains(m.Text, want) {
				t.Errorf("%s: %+v", what, f.Findings)
			}
		}
	}
}

func TestTableUnitsAgainstTheSurface(t *testing.T) {
	raw := sphereRaw(1000)
	var ply bytes.Buffer
	if err := format.WriteRawPLY(&ply, raw); err != nil {
		t.Fatal(err)
	}
	table := scatterTable(raw, true, 1000)
	_, err := format.Load("t.csv", table, format.Options{Surface: ply.Bytes(), SurfaceName: "s.ply"})
	if err == nil || !strings.Contains(err.Error(), "1000 times larger") {
		t.Errorf("millimetres on metres: %v", err)
	}
	told := bytes.Replace(table, []byte("x,y,z"), []byte("x [mm],y [mm],z [mm]"), 1)
	for name, c := range map[string]struct {
		data []byte
		opt  format.Options
	}{"--unit": {table, format.Options{Unit: "mm"}}, "brackets": {told, format.Options{}}} {
		c.opt.Surface = ply.Bytes()
		f := load(t, "t.csv", c.data, c.opt)
		if f.Units.Length != "m" || math.Abs(f.Diagonal()-2*math.Sqrt(3)) > 0.05 {
			t.Errorf("%s: diagonal %g in %q", name, f.Diagonal(), f.Units.Length)
		}
	}
}

// Faces without a row are holes and counted; with fewer than half matched the table is refused.
func TestTableOnPartOfASurface(t *testing.T) {
	raw := sphereRaw(2000)
	lines := strings.SplitAfter(string(scatterTable(raw, true, 1)), "\n")
	keep := func(share float64) []byte {
		var b strings.Builder
		b.WriteString(lines[0])
		for _, line := range lines[1:] {
			var x float64
			if n, _ := fmt.Sscanf(line, "%g,", &x); n == 1 && x < -1+2*share {
				b.WriteString(line)
			}
		}
		return []byte(b.String())
	}
	f := load(t, "t.csv", keep(0.8), format.Options{Surface: stlOf(raw)})
	hole, ok := finding(f.Findings, "unmatched-surface")
	if !ok || len(f.Rims) != 1 || len(f.Tris)+hole.Count != len(raw.Tris) {
		t.Errorf("%d rims, %d triangles, %+v", len(f.Rims), len(f.Tris), f.Findings)
	}
	_, err := format.Load("t.csv", keep(0.4), format.Options{Surface: stlOf(raw), SurfaceName: "s.stl"})
	if err == nil || !strings.Contains(err.Error(), "have a row of the table near them") {
		t.Errorf("40 %%: %v", err)
	}
}

// The solver's own tables of the real runs: kinematic, of opposite sign, at face centres. Sign, mapping and units are
// found with the PLY as the surface, and after --flip the field is that of the PLY up to the density.
// Source: ../shared runs, meta.json of each (density, conventions).
func TestSolverTablesOfTheRuns(t *testing.T) {
	for name, density := range map[string]float64{"radome": 1.225, "pod": 1025, "hut": 0.98} {
		ply := runFile(t, name+".ply")
		table := runFile(t, name+"_faces.csv.gz")
		opt := format.Options{Surface: ply, SurfaceName: name + ".ply"}
		plain := load(t, name+"_faces.csv", table, opt)
		for _, code := range []string{"opposite-surface", "kinematic-tau", "matched-surface"} {
			if _, ok := finding(plain.Findings, code); !ok {
				t.Errorf("%s: %s was not told: %+v", name, code, plain.Findings)
			}
		}
		if s, _ := finding(plain.Findings, "sign"); s.Level != field.Doubtful {
			t.Errorf("%s: the sign was not doubted: %+v", name, s)
		}
		opt.Flip = true
		f, want := load(t, name+"_faces.csv", table, opt), load(t, name+".ply", ply, format.Options{})
		if f.Units != (field.Units{Length: "m", Tau: "m2/s2", P: "m2/s2"}) {
			t.Errorf("%s: units %+v", name, f.Units)
		}
		if s, _ := finding(f.Findings, "sign"); s.Level != field.Note {
			t.Errorf("%s: the turned sign is doubted: %+v", name, s)
		}
		if len(f.Points) != len(want.Points) || f.Euler() != want.Euler() {
			t.Fatalf("%s: %d points, chi %d", name, len(f.Points), f.Euler())
		}
		var agree, all float64
		for v := range f.Points {
			d := f.Tau[v].Scale(density).Sub(want.Tau[v]).Norm()
			all++
			if d < 0.05*want.MaxTau {
				agree++
			}
		}
		if agree/all < 0.98 {
			t.Errorf("%s: only %.1f %% of the vertices agree within 5 %% of the largest tau", name, 100*agree/all)
		}
	}
}

// A solver's quadrilaterals are halves in an STL file: each half takes the value at the centre of its whole.
func TestQuadrilateralCentresOnHalves(t *testing.T) {
	for _, name := range runs {
		table := runFile(t, name+"_faces.csv.gz")
		raw, err := format.Read(name+".ply", runFile(t, name+".ply"), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		whole := load(t, "whole", table, format.Options{Surface: runFile(t, name+".ply")})
		halves := load(t, "halves", table, format.Options{Surface: stlOf(raw), SurfaceName: "h.stl"})
		if s, _ := finding(halves.Findings, "sign"); s.Level != field.Doubtful { // by the pressure alone
			t.Errorf("%s: the sign was not doubted: %+v", name, halves.Findings)
		}
		m, ok := finding(halves.Findings, "matched-loosely")
		if !ok || m.Level != field.Doubtful || m.Count < len(raw.Tris)*99/100 {
			t.Errorf("%s: %d of %d: %+v", name, m.Count, len(raw.Tris), halves.Findings)
		}
		if len(halves.Points) != len(whole.Points) {
			t.Fatalf("%s: %d points, want %d", name, len(halves.Points), len(whole.Points))
		}
		near := 0
		for v := range whole.Points {
			if halves.Tau3[v].Sub(whole.Tau3[v]).Norm() < 0.05*whole.MaxTau {
				near++
			}
		}
		if near < len(whole.Points)*97/100 {
			t.Errorf("%s: only %d of %d vertices have nearly the same tau", name, near, len(whole.Points))
		}
	}
}

// Without values in the surface file, pressure tells the sign.
func TestSignByPressure(t *testing.T) {
	for _, flip := range []bool{false, true} {
		raw := sphereRaw(2000)
		var b bytes.Buffer
		if err := format.WriteRawPLY(&b, raw); err != nil {
			t.Fatal(err)
		}
		f := load(t, "s.ply", b.Bytes(), format.Options{Flip: flip})
		s, ok := finding(f.Findings, "sign")
		if !ok || (s.Level == field.Doubtful) != flip {
			t.Errorf("flip %v: %+v", flip, s)
		}
		at := f.Tau3[0].Dot(r3.Vec{X: 1})
		if (at < 0) != flip {
			t.Errorf("flip %v: tau_x %g", flip, at)
		}
	}
}

func TestNormalVectorsAreRefused(t *testing.T) {
	raw := sphereRaw(500)
	for i, p := range raw.Points {
		raw.Tau[i] = p.AddScaled(0.2, raw.Tau[i])
	}
	var b bytes.Buffer
	if err := format.WriteRawPLY(&b, raw); err != nil {
		t.Fatal(err)
	}
	_, err := format.Load("s.ply", b.Bytes(), format.Options{})
	if err == nil || !strings.Contains(err.Error(), "points out of the surface") {
		t.Errorf("error %v", err)
	}
}
