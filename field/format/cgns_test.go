package format_test

import (
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// writtenCGNS returns a file of the given kind that the standard's reference library wrote (testdata/cgns/write.c), with
// cells x cells cells.
func writtenCGNS(t testing.TB, kind string, cells int) []byte {
	t.Helper()
	if runtime.GOOS == "js" {
		t.Skip("the reference library's writer is a program of its own, which cannot be started from WebAssembly")
	}
	fail := t.Skipf
	if os.Getenv("CI") != "" {
		fail = t.Fatalf
	}
	dir := t.TempDir()
	program, file := filepath.Join(dir, "write"), filepath.Join(dir, kind+".cgns")
	source := filepath.Join("testdata", "cgns", "write.c")
	if out, err := exec.Command("cc", fmt.Sprintf("-DCELLS=%d", cells), "-o", program, source, "-lcgns").CombinedOutput(); err != nil {
		fail("no C compiler with the CGNS library (Debian: gcc libcgns-dev): %v %s", err, out)
	}
	if out, err := exec.Command(program, kind, file).CombinedOutput(); err != nil {
		t.Fatalf("%v %s", err, out)
	}
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// The surface and the values that the C program wrote come back: tau = (1 + x, 2 - y, 0) and p = 10 x + y, at points or at
// the middles of the unit square's 16 cells.
func TestCGNSOfTheReferenceLibrary(t *testing.T) {
	for _, c := range []struct {
		kind     string
		faces    bool
		p, cp    bool
		length   string
		tau      string
		triangle bool
	}{
		{"structured", true, true, false, "m", "Pa", false},
		{"triangles", false, true, false, "m", "Pa", true},
		{"quads", true, true, false, "m", "Pa", false},
		{"mixed", true, true, false, "m", "Pa", false},
		{"polygons", false, false, true, "m", "1", false},
		{"volume", true, false, false, "m", "Pa", false},
		{"feet", true, true, false, "ft", "", false},
		{"many", true, true, false, "m", "Pa", false},
	} {
		raw, err := format.Read(c.kind+".cgns", writtenCGNS(t, c.kind, 4), format.Options{})
		if err != nil {
			t.Errorf("%s: %v", c.kind, err)
			continue
		}
		if raw.Name != c.kind || raw.Units.Length != c.length || raw.Units.Tau != c.tau {
			t.Errorf("%s: name %q, units %+v", c.kind, raw.Name, raw.Units)
		}
		if len(raw.Tris) != 32 || (raw.FaceTau != nil) != c.faces || (raw.Face == nil) != c.triangle {
			t.Errorf("%s: %d triangles, face values %v, polygons %v", c.kind, len(raw.Tris), raw.FaceTau != nil, raw.Face != nil)
			continue
		}
		if c.faces {
			checkFaces(t, c.kind, raw, c.p)
		} else {
			checkPoints(t, c.kind, raw, c.p, c.cp)
		}
	}
}

func squareTau(x, y float64) r3.Vec { return r3.Vec{X: 1 + x, Y: 2 - y} }

func checkPoints(t *testing.T, kind string, raw field.Raw, p, cp bool) {
	t.Helper()
	for i, at := range raw.Points {
		if raw.Tau[i] != squareTau(at.X, at.Y) {
			t.Fatalf("%s: tau at %v is %v", kind, at, raw.Tau[i])
		}
		for _, x := range [2][]float64{raw.P, raw.Cp} {
			if x != nil && math.Abs(x[i]-10*at.X-at.Y) > 1e-12 {
				t.Fatalf("%s: pressure at %v is %g", kind, at, x[i])
			}
		}
	}
	if (raw.P != nil) != p || (raw.Cp != nil) != cp {
		t.Errorf("%s: p %v, cp %v", kind, raw.P != nil, raw.Cp != nil)
	}
}

func checkFaces(t *testing.T, kind string, raw field.Raw, p bool) {
	t.Helper()
	if (raw.FaceP != nil) != p {
		t.Fatalf("%s: face pressure %v", kind, raw.FaceP != nil)
	}
	for i, tri := range raw.Tris {
		// The middle of the square cell of which the triangle is a half: the middle of its longest edge.
		var middle r3.Vec
		longest := 0.0
		for k := range 3 {
			a, b := raw.Points[tri[k]], raw.Points[tri[(k+1)%3]]
			if d := b.Sub(a).Norm(); d > longest {
				longest, middle = d, a.Lerp(b, 0.5)
			}
		}
		if got := raw.FaceTau[i]; got.Sub(squareTau(middle.X, middle.Y)).Norm() > 1e-12 {
			t.Fatalf("%s: tau of the cell at %v is %v", kind, middle, got)
		}
		if p && math.Abs(raw.FaceP[i]-10*middle.X-middle.Y) > 1e-12 {
			t.Fatalf("%s: pressure of the cell at %v is %g", kind, middle, raw.FaceP[i])
		}
	}
}

// The pod in three forms of CGNS is the pod of the PLY: the same surface and, at the points, the same values.
func TestPodAsCGNS(t *testing.T) {
	ply, err := format.Read("pod.ply", readRunFile(t, "pod.ply"), format.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"pod", "pod_mixed", "pod_ngon"} {
		raw, err := format.Read(name+".cgns.gz", readRunFile(t, name+".cgns.gz"), format.Options{})
		if err != nil {
			t.Fatal(err)
		}
		if raw.Name != name || raw.Units != (field.Units{Length: "m", Tau: "Pa", P: "Pa"}) {
			t.Errorf("%s: name %q, units %+v", name, raw.Name, raw.Units)
		}
		if len(raw.Points) != len(ply.Points) || len(raw.Tris) != len(ply.Tris) {
			t.Fatalf("%s: %d points and %d triangles, the PLY has %d and %d",
				name, len(raw.Points), len(raw.Tris), len(ply.Points), len(ply.Tris))
		}
		for i, p := range raw.Points {
			if p.Sub(ply.Points[i]).Norm() > 1e-6 {
				t.Fatalf("%s: point %d is %v, in the PLY %v", name, i, p, ply.Points[i])
			}
			if raw.Tau != nil && raw.Tau[i].Sub(ply.Tau[i]).Norm() > 1e-4 {
				t.Fatalf("%s: tau of point %d is %v, in the PLY %v", name, i, raw.Tau[i], ply.Tau[i])
			}
		}
		f, err := format.Load(name+".cgns.gz", readRunFile(t, name+".cgns.gz"), format.Options{})
		if err != nil || f.Euler() != 2 || len(f.Parts) != 1 {
			t.Errorf("%s: %v, %+v", name, err, f)
		}
	}
}

func readRunFile(t testing.TB, name string) []byte {
	t.Helper()
	data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "runs", name))
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// One line for every way in which a CGNS file can be spoilt, and never a fall.
func TestSpoiltCGNS(t *testing.T) {
	check := func(what string, data []byte) {
		t.Helper()
		_, err := format.Load("spoilt.cgns", data, format.Options{})
		var se *format.SyntaxError
		if err != nil && (!errors.As(err, &se) || strings.ContainsAny(err.Error(), "\n\r")) {
			t.Errorf("%s: %v", what, err)
		}
	}
	for _, kind := range []string{"quads", "volume", "many"} {
		data := writtenCGNS(t, kind, 4)
		for n := 8; n < len(data); n += len(data)/60 + 1 {
			check(fmt.Sprintf("%s cut at %d", kind, n), data[:n])
		}
		for i := 8; i < len(data); i += len(data)/900 + 1 {
			for _, b := range []byte{0, 0xff, data[i] ^ 1, data[i] ^ 0x80} {
				spoilt := append([]byte(nil), data...)
				spoilt[i] = b
				check(fmt.Sprintf("%s with byte %d as %d", kind, i, b), spoilt)
			}
		}
	}
}

func TestTimeStepsAreTold(t *testing.T) {
	raw, err := format.Read("steps.cgns", writtenCGNS(t, "steps", 4), format.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range raw.Findings {
		if f.Code == "time-steps" && f.Count == 3 {
			return
		}
	}
	t.Errorf("the three time steps are not told: %+v", raw.Findings)
}

func TestRefusedCGNS(t *testing.T) {
	for _, c := range []struct{ what, data, want string }{
		{"the older form", "@(#)ADF Database Version A02011>", "older ADF form"},
		{"only a signature", "\x89HDF\r\n\x1a\n", "outside the file"},
		{"unknown superblock", "\x89HDF\r\n\x1a\n\x09\x08\x08\x00\x00\x00\x00", "superblock version 9"},
	} {
		_, err := format.Read("x.cgns", []byte(c.data), format.Options{})
		if err == nil || !strings.Contains(err.Error(), c.want) || !strings.HasPrefix(err.Error(), "x.cgns: ") {
			t.Errorf("%s: %v, want an error with %q", c.what, err, c.want)
		}
	}
	data := readRunFile(t, "pod.cgns.gz")
	if _, err := format.Read("pod.cgns", data, format.Options{Tau: "Velocity"}); err == nil ||
		!strings.Contains(err.Error(), `nothing is called "Velocity"`) {
		t.Errorf("a name that is not there: %v", err)
	}
}

func FuzzCGNS(f *testing.F) {
	data, err := os.ReadFile(filepath.Join("testdata", "cgns", "square.cgns"))
	if err != nil {
		f.Fatal(err)
	}
	f.Add(data)
	f.Add([]byte("\x89HDF\r\n\x1a\n"))
	f.Fuzz(func(t *testing.T, data []byte) { checkAny(t, data, format.Options{}) })
}

// BenchmarkLoadCGNS reads a million triangles that the reference library wrote, and beside it the same bytes without
// looking at them.
func BenchmarkLoadCGNS(b *testing.B) {
	data := writtenCGNS(b, "triangles", 708)
	b.Run("read", func(b *testing.B) {
		b.SetBytes(int64(len(data)))
		for b.Loop() {
			if _, err := format.Read("x.cgns", data, format.Options{}); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("plain", func(b *testing.B) {
		b.SetBytes(int64(len(data)))
		to := make([]byte, len(data))
		for b.Loop() {
			copy(to, data)
		}
	})
}
