package format_test

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/format"
	"shearprint/field/r3"
)

// halfSphere is the half y >= 0 of a sphere whose mesh has vertices on that plane, moved so that the plane is y = at; dust
// puts the points off it.
func halfSphere(at float64, dust float64) field.Raw {
	var whole, raw field.Raw
	number := map[int32]int32{}
	const n, rows = 48, 24
	for j := range rows + 1 {
		for i := range n {
			a, b := 2*math.Pi*float64(i)/n, math.Pi*float64(j)/rows
			p := r3.Vec{X: math.Cos(b), Y: math.Sin(b) * math.Cos(a), Z: math.Sin(b) * math.Sin(a)}
			if i == n/4 || i == 3*n/4 {
				p.Y = 0
			}
			whole.Points = append(whole.Points, p)
		}
	}
	for j := range int32(rows) {
		for i := range int32(n) {
			a, b, c, d := j*n+i, j*n+(i+1)%n, (j+1)*n+i, (j+1)*n+(i+1)%n
			whole.Tris = append(whole.Tris, [3]int32{a, c, b}, [3]int32{b, c, d})
		}
	}
	raw.Units = field.Units{Tau: "Pa", P: "Pa"}
	for _, tri := range whole.Tris {
		m := whole.Points[tri[0]].Y + whole.Points[tri[1]].Y + whole.Points[tri[2]].Y
		if m < 1e-9 {
			continue
		}
		for k, v := range tri {
			w, ok := number[v]
			if !ok {
				w = int32(len(raw.Points))
				number[v] = w
				p := whole.Points[v]
				raw.Tau = append(raw.Tau, r3.Vec{X: 1.5, Z: 0.3}.Reject(p.Unit()))
				raw.P = append(raw.P, -1.5*p.X)
				raw.Points = append(raw.Points, p.Add(r3.Vec{Y: at + dust*p.Z}))
			}
			tri[k] = w
		}
		raw.Tris = append(raw.Tris, tri)
	}
	return raw
}

func plyOf(t testing.TB, raw field.Raw) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := format.WriteRawPLY(&b, raw); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// A half becomes a closed body with the flow of the whole: vectors reflected, points on the plane one with their
// images.
func TestMirrorCompletesAHalf(t *testing.T) {
	for _, c := range []struct {
		name    string
		at      float64
		dust    float64
		opt     string
		asFaces bool
	}{
		{"y", 0, 0, "y", false}, {"moved", 2.5, 0, "y=2.5", false}, {"dust", 0, 1e-7, "y", false},
		{"moved mesh", 0, 2e-3, "y", false}, {"faces", 0, 0, "Y = 0", true},
	} {
		raw := halfSphere(c.at, c.dust)
		if c.asFaces {
			for _, tri := range raw.Tris {
				raw.FaceTau = append(raw.FaceTau, raw.Tau[tri[0]])
			}
			raw.Tau = nil
		}
		half := load(t, "half.ply", plyOf(t, raw), format.Options{})
		if half.Euler() != 1 || len(half.Rims) != 1 {
			t.Fatalf("%s: the half has chi %d", c.name, half.Euler())
		}
		f := load(t, "half.ply", plyOf(t, raw), format.Options{Mirror: c.opt})
		if f.Euler() != 2 || len(f.Rims) != 0 || len(f.Tris) != 2*len(half.Tris) ||
			len(f.Points) != 2*len(half.Points)-len(half.Rims[0].Edges) {
			t.Errorf("%s: chi %d, %d rims, %d triangles of %d, %d points of %d", c.name, f.Euler(), len(f.Rims), len(f.Tris),
				len(half.Tris),
				len(f.Points), len(half.Points))
		}
		if c.asFaces {
			continue
		}
		for v, p := range f.Points {
			p.Y -= c.at
			if want := (r3.Vec{X: 1.5, Z: 0.3}).Reject(p.Unit()); f.Tau3[v].Sub(want).Norm() > 0.02 {
				t.Fatalf("%s: tau at %v is %v, want %v", c.name, p, f.Tau3[v], want)
			}
		}
	}
}

// A symmetry plane that was exported with the wall does not end up inside the body.
func TestMirrorDropsFacesInThePlane(t *testing.T) {
	raw := halfSphere(0, 0)
	n := len(raw.Tris)
	var seam []int32
	for i, p := range raw.Points {
		if p.Y == 0 {
			seam = append(seam, int32(i))
		}
	}
	raw.Tris = append(raw.Tris, [3]int32{seam[0], seam[5], seam[9]}, [3]int32{seam[0], seam[9], seam[14]})
	f := load(t, "half.ply", plyOf(t, raw), format.Options{Mirror: "y"})
	if f.Euler() != 2 || !hasFinding(f.Findings, "dropped-symmetry-plane", 2) || len(raw.Tris) != n+2 {
		t.Errorf("chi %d, %+v", f.Euler(), f.Findings)
	}
}

func TestMirrorRefusals(t *testing.T) {
	data := plyOf(t, halfSphere(0, 0))
	for opt, want := range map[string]string{
		"x": "both sides", "y=-0.5": "does not reach the plane", "y=0.5": "both sides", "w": "no plane", "y=": "no plane",
		"=1":    "no plane",
		"y=NaN": "no plane", "yz": "no plane", "y=1e999": "no plane",
	} {
		if _, err := format.Load("half.ply", data, format.Options{Mirror: opt}); err == nil ||
			!strings.Contains(err.Error(), want) {
			t.Errorf("--mirror %s: %v, want %q", opt, err, want)
		}
	}
}

// Points without a neighbour are left alone; copies are welded, also across a distance of rounding, and told.
func TestWelding(t *testing.T) {
	raw := sphereRaw(500)
	n := len(raw.Points)
	var soup field.Raw
	soup.Units = raw.Units
	for k, tri := range raw.Tris {
		for i, v := range tri {
			p := raw.Points[v]
			p.X += 1e-13 * float64(i)
			soup.Points = append(soup.Points, p)
			tau := raw.Tau[v]
			if k == 7 && i == 1 {
				tau.X += 0.25
			}
			soup.Tau = append(soup.Tau, tau)
		}
		soup.Tris = append(soup.Tris, [3]int32{int32(3 * k), int32(3*k + 1), int32(3*k + 2)})
	}
	f := load(t, "soup.ply", plyOf(t, soup), format.Options{})
	if len(f.Points) != n || f.Euler() != 2 || !hasFinding(f.Findings, "welded", 3*len(raw.Tris)-n) ||
		!hasFinding(f.Findings, "welded-values-differ", 1) {
		t.Errorf("%d points of %d, chi %d, %+v", len(f.Points), n, f.Euler(), f.Findings)
	}
	// coarse weld distance: the far points make the box large
	for _, p := range []r3.Vec{{X: 1e8}, {X: 1e8, Y: 1}, {X: 1e8, Z: 1}} {
		raw.Points = append(raw.Points, p)
		raw.Tau = append(raw.Tau, r3.Vec{})
	}
	raw.P = nil
	raw.Tris = append(raw.Tris, [3]int32{int32(n), int32(n + 1), int32(n + 2)})
	if g := load(t, "far.ply", plyOf(t, raw), format.Options{}); len(g.Parts) != 2 {
		t.Errorf("%d parts: %+v", len(g.Parts), g.Findings)
	}
}

// Lengths come to metres where their unit is told; --unit wins and says so; nothing is converted in silence.
func TestUnits(t *testing.T) {
	raw := sphereRaw(300)
	for _, c := range []struct {
		told, opt, want string
		diagonal        float64
		code            string
	}{
		{"", "", "", 1, "unit-of-length"}, {"mm", "", "m", 1e-3, "converted-units"}, {"", "in", "m", 0.0254,
			"converted-units"},
		{"mm", "cm", "m", 1e-2, "unit-overruled"}, {"m", "m", "m", 1, ""},
	} {
		raw.Units.Length = c.told
		f := load(t, "s.ply", plyOf(t, raw), format.Options{Unit: c.opt})
		one := load(t, "s.ply", plyOf(t, sphereRaw(300)), format.Options{}).Diagonal()
		if f.Units.Length != c.want || math.Abs(f.Diagonal()/one-c.diagonal) > 1e-9 {
			t.Errorf("%+v: unit %q, diagonal %g", c, f.Units.Length, f.Diagonal()/one)
		}
		if _, ok := finding(f.Findings, c.code); c.code != "" && !ok {
			t.Errorf("%+v: not told: %+v", c, f.Findings)
		}
	}
	if _, err := format.Load("s.ply", plyOf(t, raw), format.Options{Unit: "parsec"}); err == nil ||
		!strings.Contains(err.Error(), "--unit") {
		t.Errorf("parsec: %v", err)
	}
	raw.Units.Length = ""
	for i := range raw.Points {
		raw.Points[i] = raw.Points[i].Scale(600)
	}
	f := load(t, "s.ply", plyOf(t, raw), format.Options{})
	if d, _ := finding(f.Findings, "unit-of-length"); d.Level != field.Doubtful || !strings.Contains(d.Text,
		"--unit mm") || f.Units.Length != "" {
		t.Errorf("a body of 600: %+v", d)
	}
}
