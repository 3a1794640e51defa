package study_test

import (
	"context"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/study"
)

func mustBuild(t testing.TB, raw field.Raw) *field.Field {
	t.Helper()
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// decode returns the JSON of a result as a scripting language sees it.
func decode(t *testing.T, result any) map[string]any {
	t.Helper()
	b, err := study.Encode(result)
	if err != nil {
		t.Fatal(err)
	}
	var m map[string]any
	if err := json.Unmarshal(b, &m); err != nil {
		t.Fatal(err)
	}
	return m
}

func TestInspectCountsASphere(t *testing.T) {
	raw := exact.Sphere(1, 8000)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	raw.P = make([]float64, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: 3}.Reject(p.Unit()) // |tau| = 3 sin(theta)
		raw.P[i] = p.X
	}
	raw.Units = field.Units{Length: "m", Tau: "Pa", P: "Pa"}
	got, err := study.New(mustBuild(t, raw)).Inspect(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	if got.Surface.Vertices != len(raw.Points) || got.Surface.Triangles != len(raw.Tris) || got.Surface.Euler != 2 ||
		got.Surface.Loops != 0 || len(got.Surface.Parts) != 1 || got.Surface.Parts[0].Genus != 0 {
		t.Errorf("surface: got %+v", got.Surface)
	}
	if want := got.Surface.Vertices + got.Surface.Triangles - 2; got.Edges != want { // Euler
		t.Errorf("edges: got %d, want %d", got.Edges, want)
	}
	// An inscribed polyhedron of 8000 triangles has 0.1 per cent less area than the sphere.
	if a := float64(got.Surface.Area); math.Abs(a-4*math.Pi) > 0.005*4*math.Pi {
		t.Errorf("area: got %g, want %g", a, 4*math.Pi)
	}
	if tau := got.Ranges.Tau; math.Abs(float64(tau[1])-3) > 0.01 || float64(tau[0]) > 0.1 {
		t.Errorf("|tau|: got %v, want 0 to 3", *tau)
	}
	if p := got.Ranges.P; float64(p[0]) < -1-1e-12 || float64(p[1]) > 1+1e-12 {
		t.Errorf("p: got %v, want -1 to 1", *p)
	}
	if got.Ranges.Cp != nil {
		t.Errorf("cp: got %v, want none", *got.Ranges.Cp)
	}
}

// The largest jump of a field that changes sign across one line of edges is there, and is the whole change.
func TestInspectFindsTheLargestJump(t *testing.T) {
	raw := exact.Plate(2, 1, 800)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = r3.Vec{X: 1}
		if p.X > 0.5 {
			raw.Tau[i] = r3.Vec{X: -1}
		}
	}
	got, err := study.New(mustBuild(t, raw)).Inspect(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	j := got.LargestJump
	if math.Abs(float64(j.Share)-2) > 1e-9 || math.Abs(float64(j.Degrees)-180) > 1e-6 ||
		math.Abs(float64(j.Position[0])-0.5) > float64(got.MeanEdge) {
		t.Errorf("largest jump: got %+v, want 2 times the largest |tau|, by 180 degrees, near x = 0.5", j)
	}
}

func TestInspectJSONKeepsNulls(t *testing.T) {
	raw := exact.Plate(2, 1, 200)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	m := decode(t, must(study.New(mustBuild(t, raw)).Inspect(context.Background())))
	run := m["run"].(map[string]any)
	for _, key := range []string{"length_unit", "tau_unit", "p_unit"} {
		if v, ok := run[key]; !ok || v != nil {
			t.Errorf("run.%s: got %v, want null", key, v)
		}
	}
	if m["schema"] != "shearprint/inspect/1" {
		t.Errorf("schema: got %v", m["schema"])
	}
	if n := m["zero_vertices"].(float64); int(n) != len(raw.Points) {
		t.Errorf("zero vertices: got %v, want all %d", n, len(raw.Points))
	}
	for _, key := range []string{"findings", "rims"} {
		if _, ok := m[key].([]any); !ok {
			t.Errorf("%s: got %v, want an array", key, m[key])
		}
	}
}

func must[T any](x T, err error) T {
	if err != nil {
		panic(err)
	}
	return x
}

func TestInspectTextNamesFindings(t *testing.T) {
	raw := exact.Plate(2, 1, 200)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	raw.Findings = []field.Finding{{Level: field.Doubtful, Code: "odd", Text: "something odd was seen", Where: "row 7"}}
	var b strings.Builder
	if err := must(study.New(mustBuild(t, raw)).Inspect(context.Background())).WriteText(&b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"Doubtful\n--------", "something odd was seen (first: row 7)", "nobody told the unit of length"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("the report lacks %q:\n%s", want, b.String())
		}
	}
}
