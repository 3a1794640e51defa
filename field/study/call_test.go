package study_test

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/study"
	"shearprint/field/topology"
)

// plane builds a field on a disk of the given radius around the origin.
func plane(t testing.TB, radius float64, tau func(x, y float64) (float64, float64)) *study.Study {
	t.Helper()
	raw := exact.Disk(radius, 4000)
	raw.Units = field.Units{Length: "m", Tau: "Pa", P: "Pa"}
	raw.Tau = make([]r3.Vec, len(raw.Points))
	raw.P = make([]float64, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i].X, raw.Tau[i].Y = tau(p.X, p.Y)
		raw.P[i] = 2*p.X - p.Y
	}
	return study.New(mustBuild(t, raw))
}

func saddle(x, y float64) (float64, float64) { return 2 * x, -3 * y }

// Call answers with the very bytes that the command of that name prints.
func TestCallGivesTheSameBytes(t *testing.T) {
	ctx := context.Background()
	s := plane(t, 1, saddle)
	at := r3.Vec{X: 0.3, Y: 0.2}
	loop := []r3.Vec{{X: 0.5, Y: -0.5}, {X: 0.5, Y: 0.5}, {X: -0.5, Y: 0.5}, {X: -0.5, Y: -0.5}}
	for _, c := range []struct {
		name, args string
		want       any
	}{
		{"inspect", "", must(s.Inspect(ctx))},
		{"inspect", "{}", must(s.Inspect(ctx))},
		{"inspect", "null", must(s.Inspect(ctx))},
		{"topology", "", must(s.Topology(ctx, topology.Options{Lines: true}))},
		{"topology", `{"min_robustness": "2%"}`,
			must(s.Topology(ctx, topology.Options{Lines: true, MinRobustness: 0.02, Relative: true}))},
		{"topology", `{"min_robustness": 0.02, "lines": false}`, must(s.Topology(ctx, topology.Options{MinRobustness: 0.02}))},
		{"probe", `{"at": [0.3, 0.2, 0]}`, must(s.Probe(ctx, at))},
		{"probe", `{"at": "0.3, 0.2, 0"}`, must(s.Probe(ctx, at))},
		{"trace", `{"at": [0.3, 0.2, 0]}`, must(s.Trace(ctx, at))},
		{"loop", `{"through": [[0.5,-0.5,0], [0.5,0.5,0], [-0.5,0.5,0], [-0.5,-0.5,0]]}`, must(s.Loop(ctx, loop))},
		{"loop", `{"through": "0.5,-0.5,0; 0.5,0.5,0; -0.5,0.5,0; -0.5,-0.5,0"}`, must(s.Loop(ctx, loop))},
		{"loop", `{"parts": [0]}`, must(s.Parts(ctx, []int32{0}))},
		{"loop", `{"parts": "0, 0"}`, must(s.Parts(ctx, []int32{0}))},
		{"loop", `{"box": [[0.5,0.5,1], [-0.5,-0.5,-1]]}`, must(s.Box(ctx, r3.Vec{X: -0.5, Y: -0.5, Z: -1}, r3.Vec{X: 0.5, Y: 0.5, Z: 1}))},
		{"loop", `{"box": "-0.5,-0.5,-1:0.5,0.5,1"}`, must(s.Box(ctx, r3.Vec{X: -0.5, Y: -0.5, Z: -1}, r3.Vec{X: 0.5, Y: 0.5, Z: 1}))},
		{"ledger", `{"body": "on-wall", "nodes": 3, "saddles": 2}`,
			study.ByHand(topology.Hand{Body: topology.OnWall, Nodes: 3, Saddles: 2})},
		{"ledger", `{"body": "patch", "saddles": 1, "exterior": 4}`,
			study.ByHand(topology.Hand{Body: topology.Patch, Saddles: 1, Rim: topology.Counted, Exterior: 4})},
	} {
		got, err := s.Call(ctx, c.name, json.RawMessage(c.args))
		if err != nil {
			t.Errorf("%s %s: %v", c.name, c.args, err)
			continue
		}
		if want := must(study.Encode(c.want)); !bytes.Equal(got, want) {
			t.Errorf("%s %s: got %s, want %s", c.name, c.args, got, want)
		}
	}
}

func TestCallRefuses(t *testing.T) {
	s := plane(t, 1, saddle)
	for _, c := range []struct{ name, args, want string }{
		{"nonsense", "", "there is no call"},
		{"probe", "", "the point is missing"},
		{"trace", "{}", "the point is missing"},
		{"probe", `{"at": [1, 2]}`, "three numbers"},
		{"probe", `{"at": 7}`, "a point is"},
		{"probe", `{"at": [0, 0, 0], "lines": true}`, `there is no "lines"`},
		{"inspect", `{"deep": true}`, "it takes nothing"},
		{"topology", `{"min_robustness": -1}`, "give a stress"},
		{"topology", `[`, "arguments of topology"},
		{"loop", `{"through": [[0,0,0]]}`, "three points"},
		{"loop", `{"parts": [1]}`, "the last is part 0"},
		{"loop", `{"parts": []}`, "no number of a part"},
		{"loop", `{"parts": [0.5]}`, "no number of a part"},
		{"loop", `{"parts": [0], "through": [[0,0,0]]}`, "one of the three"},
		{"loop", `{"box": [[0,0,0]]}`, "two opposite corners"},
		{"loop", `{"box": "0,0,0"}`, "two corners with a colon"},
		{"loop", `{"box": [[5,5,5],[6,6,6]]}`, "no triangle is in"},
		{"probe", `{"at": [90, 0, 0]}`, "off the surface"},
		{"loop", `{"through": [[0.1,0,0],[0.3,0,0],[0,90,0]]}`, "off the surface"},
		{"ledger", `{}`, "the body is missing"},
		{"ledger", `{"body": "cube"}`, "unknown body"},
		{"ledger", `{"body": "patch", "nodes": -1}`, "no number of points"},
		{"ledger", `{"body": "patch", "rim": "round"}`, "across or one-way"},
	} {
		got, err := s.Call(context.Background(), c.name, json.RawMessage(c.args))
		if err == nil || !strings.Contains(err.Error(), c.want) || strings.Contains(err.Error(), "\n") {
			t.Errorf("%s %s: got %s and error %v, want one line with %q", c.name, c.args, got, err, c.want)
		}
	}
}

// A cancelled question answers with the context's error, and the next one works.
func TestCancelledCalls(t *testing.T) {
	s := plane(t, 1, saddle)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	for _, c := range []struct{ name, args string }{
		{"inspect", ""}, {"topology", ""}, {"probe", `{"at": [0.1, 0.1, 0]}`}, {"trace", `{"at": [0.1, 0.1, 0]}`},
		{"loop", `{"through": [[0.5,-0.5,0],[0.5,0.5,0],[-0.5,0,0]]}`},
	} {
		if _, err := s.Call(ctx, c.name, json.RawMessage(c.args)); !errors.Is(err, context.Canceled) {
			t.Errorf("%s: got %v, want that it was cancelled", c.name, err)
		}
		if _, err := s.Call(context.Background(), c.name, json.RawMessage(c.args)); err != nil {
			t.Errorf("%s, asked again: %v", c.name, err)
		}
	}
}

// The probe of a linear field has its values and derivatives to rounding; so has linear pressure.
func TestProbeOfALinearField(t *testing.T) {
	s := plane(t, 1, saddle)
	got, err := s.Probe(context.Background(), r3.Vec{X: 0.3, Y: -0.2, Z: 0.01})
	if err != nil {
		t.Fatal(err)
	}
	near := func(what string, got study.Number, want float64) {
		if math.Abs(float64(got)-want) > 1e-9 {
			t.Errorf("%s: got %g, want %g", what, got, want)
		}
	}
	near("distance", got.Distance, 0.01)
	near("x", got.Position[0], 0.3)
	near("tau_x", got.Tau[0], 0.6)
	near("tau_y", got.Tau[1], 0.6)
	near("|tau|", got.TauSize, 0.6*math.Sqrt2)
	near("p", got.P, 0.8)
	near("J11", got.Jacobian[0][0], 2)
	near("J22", got.Jacobian[1][1], -3)
	near("lambda1", got.Eigenvalues[0][0], 2)
	near("lambda2", got.Eigenvalues[1][0], -3)
	near("trace", got.Trace, -1)
	near("determinant", got.Determinant, -6)
	if !math.IsNaN(float64(got.Cp)) {
		t.Errorf("cp: got %g, want none", got.Cp)
	}
	if got.Nearest == nil || got.Nearest.ID != "S1" || !got.Fitted {
		t.Fatalf("nearest point: got %+v, fitted %v", got.Nearest, got.Fitted)
	}
	near("distance to S1", got.Nearest.Distance, math.Hypot(0.3, 0.2))
}

// Curves of (2x, -3y) keep x^3 y^2; they come from one rim and leave through another.
func TestTraceOfASaddle(t *testing.T) {
	s := plane(t, 1, saddle)
	got, err := s.Trace(context.Background(), r3.Vec{X: 0.3, Y: 0.4})
	if err != nil {
		t.Fatal(err)
	}
	start := got.Points[got.Start]
	if got.S[got.Start] != 0 || math.Abs(float64(start[0])-0.3) > 1e-12 || math.Abs(float64(start[1])-0.4) > 1e-12 {
		t.Errorf("at the given point s is %g, place %v", got.S[got.Start], got.Points[got.Start])
	}
	want := math.Pow(0.3, 3) * math.Pow(0.4, 2)
	for i, p := range got.Points {
		x, y := float64(p[0]), float64(p[1])
		if c := x * x * x * y * y; math.Abs(c-want) > 1e-3*want {
			t.Errorf("point %d: x^3 y^2 = %g, want %g", i, c, want)
		}
		if math.Abs(float64(got.Tau[i][0])-2*x) > 1e-9 || math.Abs(float64(got.P[i])-2*x+y) > 1e-9 {
			t.Errorf("point %d: tau %v, p %g at %v", i, got.Tau[i], got.P[i], p)
		}
		if i > 0 && got.S[i] <= got.S[i-1] {
			t.Errorf("point %d: s does not grow", i)
		}
	}
	for _, e := range []study.End{got.Upstream, got.Downstream} {
		if e.Point != "" || !strings.Contains(e.Reason, "rim") {
			t.Errorf("end: got %v, want the rim", e)
		}
	}
	var b strings.Builder
	if err := got.WriteCSV(&b); err != nil {
		t.Fatal(err)
	}
	if n, want := strings.Count(b.String(), "\n"), 5+len(got.Points); n != want {
		t.Errorf("the table has %d lines, want %d", n, want)
	}
	if !strings.Contains(b.String(), "\nx [m],y [m],z [m],s [m],tau_x [Pa],tau_y [Pa],tau_z [Pa],|tau| [Pa],p [Pa],cp [-]\n") {
		t.Errorf("no heading in %.400s", b.String())
	}
}

// The balance of a saddle's plane: as a whole, in a box with the saddle, and in one beside it.
func TestRegionsBalance(t *testing.T) {
	s := plane(t, 1, saddle)
	ctx := context.Background()
	for _, c := range []struct {
		name   string
		got    *study.Region
		sum    float64
		inside []string
	}{
		{"the part", must(s.Parts(ctx, []int32{0})), -1, []string{"S1"}},
		{"a box around the saddle", must(s.Box(ctx, r3.Vec{X: -0.5, Y: -0.5, Z: -1}, r3.Vec{X: 0.5, Y: 0.5, Z: 1})), -1, []string{"S1"}},
		{"a box beside it", must(s.Box(ctx, r3.Vec{X: 0.3, Y: -0.5, Z: -1}, r3.Vec{X: 0.9, Y: 0.5, Z: 1})), 0, []string{}},
	} {
		if float64(c.got.IndexSum) != c.sum || float64(c.got.Expected) != c.sum || !c.got.Balanced || c.got.Euler != 1 ||
			!slices.Equal(c.got.Inside, c.inside) || len(c.got.Across) > 0 {
			t.Errorf("%s: %+v", c.name, c.got)
		}
	}
}

// A loop around a saddle has index -1, one beside it 0; counter-clockwise means inside.
func TestLoops(t *testing.T) {
	s := plane(t, 1, saddle)
	square := func(x, y, r float64) []r3.Vec {
		return []r3.Vec{{X: x - r, Y: y - r}, {X: x + r, Y: y - r}, {X: x + r, Y: y + r}, {X: x - r, Y: y + r}}
	}
	for _, c := range []struct {
		through []r3.Vec
		index   float64
		inside  int
	}{{square(0, 0, 0.4), -1, 1}, {square(0.5, 0, 0.2), 0, 0}} {
		got, err := s.Loop(context.Background(), c.through)
		if err != nil {
			t.Fatal(err)
		}
		if float64(got.Index) != c.index || len(got.Inside) != c.inside || !got.Accounts || !got.Bounds {
			t.Errorf("loop %v: got %+v", c.through, got)
		}
		n := len(got.Points)
		if h := got.Hodograph; len(h.S) != n || len(h.Angle) != n || len(h.Tau) != n {
			t.Errorf("lists of different lengths")
		}
		if turn := float64(got.Hodograph.Angle[n-1]); math.Abs(turn-360*c.index) > 1e-6 {
			t.Errorf("tau turns by %g degrees, want %g", turn, 360*c.index)
		}
	}
}
