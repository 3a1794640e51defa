package main

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

// The rulings of the contract on files and options, seen from outside: ascii PLY in, JSON out.

// ascii writes a run as ascii PLY with the header lines given.
func ascii(t *testing.T, raw field.Raw, names string, comments ...string) string {
	t.Helper()
	var b strings.Builder
	fmt.Fprintf(&b, "ply\nformat ascii 1.0\n")
	for _, c := range comments {
		fmt.Fprintf(&b, "comment %s\n", c)
	}
	fmt.Fprintf(&b, "element vertex %d\n", len(raw.Points))
	for _, n := range strings.Fields("x y z " + names) {
		fmt.Fprintf(&b, "property double %s\n", n)
	}
	fmt.Fprintf(&b, "element face %d\nproperty list uchar int vertex_indices\nend_header\n", len(raw.Tris))
	for i, p := range raw.Points {
		fmt.Fprintf(&b, "%.17g %.17g %.17g %.17g %.17g %.17g\n", p.X, p.Y, p.Z, raw.Tau[i].X, raw.Tau[i].Y, raw.Tau[i].Z)
	}
	for _, tri := range raw.Tris {
		fmt.Fprintf(&b, "3 %d %d %d\n", tri[0], tri[1], tri[2])
	}
	return textFile(t, "run.ply", b.String())
}

// uniform gives every point of a surface the part of c tangent to a unit sphere, or c itself on a plane.
func uniform(raw field.Raw, c r3.Vec, sphere bool) field.Raw {
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = c
		if sphere {
			raw.Tau[i] = c.Reject(p.Unit())
		}
	}
	return raw
}

const tauNames = "tau_x tau_y tau_z"

// reading is what the tests here look at in topology's JSON.
type reading struct {
	Run struct {
		LengthUnit, TauUnit *string
	}
	Surface struct {
		Vertices, Triangles int
		Area                float64
		Euler               int `json:"euler_characteristic"`
		Loops               int `json:"boundary_loops"`
		Parts               []struct{ Genus int }
	}
	Points []struct {
		ID, Type, Sense string
		Index           int
		Half            bool
		Position        [3]float64
		Robustness      *float64
	}
	Ledger struct {
		IndexSum     float64 `json:"index_sum"`
		BoundaryTerm float64 `json:"boundary_term"`
		Expected     float64
		Balanced     bool
		HalfNodes    int `json:"half_nodes"`
		HalfSaddles  int `json:"half_saddles"`
	}
}

func read(t *testing.T, args ...string) (reading, string) {
	t.Helper()
	status, out, errOut := shearprint(append([]string{"topology", "--json"}, args...)...)
	if status != done {
		t.Fatalf("%v: exit status %d: %s", args, status, errOut)
	}
	var r reading
	if err := json.Unmarshal([]byte(out), &r); err != nil {
		t.Fatal(err)
	}
	var units struct {
		Run struct {
			LengthUnit *string `json:"length_unit"`
			TauUnit    *string `json:"tau_unit"`
		}
	}
	if err := json.Unmarshal([]byte(out), &units); err != nil {
		t.Fatal(err)
	}
	r.Run.LengthUnit, r.Run.TauUnit = units.Run.LengthUnit, units.Run.TauUnit
	return r, errOut
}

func word(s *string) string {
	if s == nil {
		return "null"
	}
	return *s
}

// Uniform Stokes flow past a sphere: two star nodes, which nothing cancels (CHECKS: Stokes; Poincare and Hopf).
func TestSphereInAStream(t *testing.T) {
	run := ascii(t, uniform(exact.Sphere(1, 2000), r3.Vec{X: 1}, true), tauNames)
	r, _ := read(t, run)
	if len(r.Points) != 2 || r.Ledger.IndexSum != 2 || r.Surface.Euler != 2 || r.Surface.Loops != 0 {
		t.Fatalf("got %+v", r)
	}
	for _, p := range r.Points {
		want := "attachment"
		if p.Position[0] > 0 {
			want = "separation"
		}
		if p.Type != "node" || p.Sense != want || p.Robustness != nil {
			t.Errorf("got %+v, want a node of %s with robustness null", p, want)
		}
	}
}

func TestUnits(t *testing.T) {
	raw := uniform(exact.Sphere(1, 500), r3.Vec{X: 1}, true)
	plain := ascii(t, raw, tauNames)
	told := ascii(t, raw, tauNames, "units x y z [mm], tau [Pa]")
	coefficient := ascii(t, raw, "cf_x cf_y cf_z")
	for _, c := range []struct {
		args        []string
		length, tau string
		scale       float64 // metres per unit of the file
	}{
		{[]string{plain}, "null", "Pa", 1},
		{[]string{plain, "--unit", "mm"}, "m", "Pa", 1e-3},
		{[]string{plain, "--unit", "in"}, "m", "Pa", 0.0254},
		{[]string{told}, "m", "Pa", 1e-3},
		{[]string{told, "--unit", "m"}, "m", "Pa", 1}, // wins over the file, with a finding
		{[]string{coefficient}, "null", "1", 1},
	} {
		r, errOut := read(t, c.args...)
		if word(r.Run.LengthUnit) != c.length || word(r.Run.TauUnit) != c.tau {
			t.Errorf("%v: units %s and %s, want %s and %s", c.args[1:], word(r.Run.LengthUnit), word(r.Run.TauUnit), c.length, c.tau)
		}
		want := 4 * math.Pi * c.scale * c.scale
		if math.Abs(r.Surface.Area-want) > 0.05*want {
			t.Errorf("%v: area %g, want %g", c.args[1:], r.Surface.Area, want)
		}
		if slices.Equal(c.args, []string{told, "--unit", "m"}) && !strings.Contains(errOut, "doubtful") {
			t.Errorf("--unit against the file's own unit is not told: %s", errOut)
		}
	}
}

// half keeps the triangles of a surface with y >= 0, and their points.
func half(raw field.Raw) field.Raw {
	const rounding = 1e-9
	var out field.Raw
	number := map[int32]int32{}
	for _, t := range raw.Tris {
		if min(raw.Points[t[0]].Y, raw.Points[t[1]].Y, raw.Points[t[2]].Y) < -rounding {
			continue
		}
		for k, v := range t {
			if _, ok := number[v]; !ok {
				number[v] = int32(len(out.Points))
				out.Points, out.Tau = append(out.Points, raw.Points[v]), append(out.Tau, raw.Tau[v])
			}
			t[k] = number[v]
		}
		out.Tris = append(out.Tris, t)
	}
	return out
}

// A half model has half points on its rim, which runs along tau; mirrored it has whole ones on a closed surface.
func TestHalfModels(t *testing.T) {
	run := ascii(t, half(uniform(octahedral(4), r3.Vec{X: 1}, true)), tauNames)
	r, _ := read(t, run)
	if r.Surface.Loops != 1 || r.Ledger.HalfNodes != 2 || r.Ledger.IndexSum != 1 || r.Ledger.BoundaryTerm != 0 {
		t.Errorf("half: got %+v", r)
	}
	for _, p := range r.Points {
		if !p.Half || p.Index != 1 || math.Abs(p.Position[1]) > 1e-6 {
			t.Errorf("half: got %+v, want a half point of index 1 on y = 0", p)
		}
	}
	whole, _ := read(t, run, "--mirror", "y")
	if whole.Surface.Loops != 0 || whole.Surface.Euler != 2 || len(whole.Points) != 2 || whole.Points[0].Half {
		t.Errorf("mirrored: got %+v", whole)
	}
}

// octahedral returns a sphere made from an octahedron by n subdivisions: symmetric about the coordinate planes.
func octahedral(n int) field.Raw {
	raw := field.Raw{
		Points: []r3.Vec{{X: 1}, {X: -1}, {Y: 1}, {Y: -1}, {Z: 1}, {Z: -1}},
		Tris:   [][3]int32{{0, 2, 4}, {2, 1, 4}, {1, 3, 4}, {3, 0, 4}, {2, 0, 5}, {1, 2, 5}, {3, 1, 5}, {0, 3, 5}},
	}
	for range n {
		middle := map[[2]int32]int32{}
		mid := func(a, b int32) int32 {
			key := [2]int32{min(a, b), max(a, b)}
			if _, ok := middle[key]; !ok {
				middle[key] = int32(len(raw.Points))
				raw.Points = append(raw.Points, raw.Points[a].Add(raw.Points[b]).Unit())
			}
			return middle[key]
		}
		var finer [][3]int32
		for _, t := range raw.Tris {
			a, b, c := mid(t[0], t[1]), mid(t[1], t[2]), mid(t[2], t[0])
			finer = append(finer, [3]int32{t[0], a, c}, [3]int32{a, t[1], b}, [3]int32{c, b, t[2]}, [3]int32{a, b, c})
		}
		raw.Tris = finer
	}
	return raw
}

// What is broken is mended or cut, and told; the counts are those after repair.
func TestRepairs(t *testing.T) {
	sphere := func() field.Raw { return uniform(octahedral(3), r3.Vec{X: 1}, true) }
	clean, _ := read(t, ascii(t, sphere(), tauNames))
	for _, c := range []struct {
		name  string
		spoil func(raw *field.Raw)
		told  string // level of the finding
		loops int
		tris  int // more than the clean surface's
	}{
		{"inside out", func(raw *field.Raw) {
			for i, t := range raw.Tris {
				raw.Tris[i] = [3]int32{t[0], t[2], t[1]}
			}
		}, "repaired", 0, 0},
		{"one face turned", func(raw *field.Raw) {
			raw.Tris[7][0], raw.Tris[7][1] = raw.Tris[7][1], raw.Tris[7][0]
		}, "repaired", 0, 0},
		{"a face twice", func(raw *field.Raw) { raw.Tris = append(raw.Tris, raw.Tris[3]) }, "repaired", 0, 0},
		{"a face less", func(raw *field.Raw) { raw.Tris = raw.Tris[1:] }, "", 1, -1},
		{"a vertex without a value", func(raw *field.Raw) { raw.Tau[40].Y = math.NaN() }, "", 1, -6},
		{"points not shared", func(raw *field.Raw) {
			points, tau := []r3.Vec{}, []r3.Vec{}
			for i, t := range raw.Tris {
				for k, v := range t {
					raw.Tris[i][k] = int32(len(points))
					points, tau = append(points, raw.Points[v]), append(tau, raw.Tau[v])
				}
			}
			raw.Points, raw.Tau = points, tau
		}, "repaired", 0, 0},
	} {
		raw := sphere()
		c.spoil(&raw)
		r, errOut := read(t, ascii(t, raw, tauNames))
		if r.Surface.Loops != c.loops || r.Surface.Triangles != clean.Surface.Triangles+c.tris || !r.Ledger.Balanced {
			t.Errorf("%s: got %+v, want %d loops and %d triangles", c.name, r.Surface, c.loops, clean.Surface.Triangles+c.tris)
		}
		if !strings.Contains(errOut, c.told) {
			t.Errorf("%s: not told: %s", c.name, errOut)
		}
		if c.loops == 0 && len(r.Points) != 2 {
			t.Errorf("%s: %d points, want 2", c.name, len(r.Points))
		}
	}
}

// All-zero tau is one degenerate patch with the index that the surface demands, and no error.
func TestAllZero(t *testing.T) {
	r, _ := read(t, ascii(t, uniform(octahedral(2), r3.Vec{}, true), tauNames))
	if len(r.Points) != 1 || r.Points[0].Type != "degenerate" || r.Points[0].Index != 2 || r.Points[0].Sense != "neutral" {
		t.Errorf("got %+v", r.Points)
	}
}

// --flip turns attachment into separation and leaves the rest.
func TestFlip(t *testing.T) {
	run := ascii(t, uniform(exact.Sphere(1, 2000), r3.Vec{X: 1}, true), tauNames)
	a, _ := read(t, run)
	b, _ := read(t, run, "--flip")
	turned := map[string]string{"attachment": "separation", "separation": "attachment"}
	for i, p := range a.Points {
		var found bool
		for _, q := range b.Points {
			found = found || q.Position == p.Position && q.Sense == turned[p.Sense]
		}
		if !found {
			t.Errorf("point %d: %+v has no counterpart in %+v", i, p, b.Points)
		}
	}
}

// Names of columns: a base name, its spellings, or three names with commas.
func TestNamesOfTau(t *testing.T) {
	raw := uniform(exact.Sphere(1, 500), r3.Vec{X: 1}, true)
	for _, c := range []struct{ names, option string }{
		{"stress_x stress_y stress_z", "stress"}, {"stressX stressY stressZ", "stress"}, {"w:0 w:1 w:2", "w"},
		{"a b c", "a,b,c"}, {"s[0] s[1] s[2]", "s"},
	} {
		run := ascii(t, raw, c.names)
		if status, _, errOut := shearprint("topology", run, "--json"); status != badInput {
			t.Errorf("%s, not named: exit status %d: %s", c.names, status, errOut)
		}
		r, _ := read(t, run, "--tau", c.option)
		if len(r.Points) != 2 {
			t.Errorf("%s: %d points, want 2", c.names, len(r.Points))
		}
	}
}
