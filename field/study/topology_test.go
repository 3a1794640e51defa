package study_test

import (
	"bytes"
	"context"
	"encoding/csv"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/study"
	"shearprint/field/topology"
)

// keys checks that an object has exactly, or at least, the names of the contract.
func keys(t *testing.T, what string, object any, names string) map[string]any {
	t.Helper()
	m, ok := object.(map[string]any)
	if !ok {
		t.Fatalf("%s: got %v, want an object", what, object)
	}
	for _, name := range strings.Fields(names) {
		if _, ok := m[name]; !ok {
			t.Errorf("%s: the field %q of the contract is missing", what, name)
		}
	}
	return m
}

func vector(t *testing.T, what string, x any) r3.Vec {
	t.Helper()
	list, ok := x.([]any)
	if !ok || len(list) != 3 {
		t.Fatalf("%s: got %v, want three numbers", what, x)
	}
	return r3.Vec{X: list[0].(float64), Y: list[1].(float64), Z: list[2].(float64)}
}

func matrix(t *testing.T, what string, x any) [2][2]float64 {
	t.Helper()
	var m [2][2]float64
	rows, ok := x.([]any)
	if !ok || len(rows) != 2 {
		t.Fatalf("%s: got %v, want two rows", what, x)
	}
	for i := range rows {
		for k, v := range rows[i].([]any) {
			m[i][k] = v.(float64)
		}
	}
	return m
}

// The JSON of topology as CONTRACT tells it: names, nulls, units, frames, order of ids, arithmetic of the ledger.
func TestTopologyJSON(t *testing.T) {
	for _, c := range exact.Cases() {
		t.Run(c.Name, func(t *testing.T) {
			result, err := study.New(c.Field(2000)).Topology(context.Background(), topology.Options{Lines: true})
			if err != nil {
				t.Fatal(err)
			}
			m := keys(t, "result", decode(t, result), "schema run surface points lines ledger")
			if m["schema"] != "shearprint/topology/1" {
				t.Errorf("schema: got %v", m["schema"])
			}
			run := keys(t, "run", m["run"], "name length_unit tau_unit")
			if run["name"] != c.Name || run["length_unit"] != "m" || run["tau_unit"] != "Pa" {
				t.Errorf("run: got %v", run)
			}
			surface := keys(t, "surface", m["surface"], "vertices triangles area euler_characteristic boundary_loops parts")
			for _, p := range surface["parts"].([]any) {
				keys(t, "part", p, "triangles euler_characteristic boundary_loops genus")
			}
			if got := surface["euler_characteristic"].(float64); int(got) != c.Euler {
				t.Errorf("Euler characteristic: got %v, want %d", got, c.Euler)
			}
			ids := checkPoints(t, m["points"].([]any))
			checkLines(t, m["lines"].([]any), ids)
			checkLedger(t, m, c)
		})
	}
}

func checkPoints(t *testing.T, points []any) map[string]bool {
	ids := map[string]bool{}
	count := map[string]int{}
	last := map[string]float64{}
	for _, p := range points {
		m := keys(t, "point", p, `id type sense index half part position normal frame jacobian eigenvalues trace determinant
			robustness confidence`)
		id := m["id"].(string)
		ids[id] = true
		kind := m["type"].(string)
		letter := map[string]string{"node": "N", "focus": "F", "saddle": "S", "degenerate": "D"}[kind]
		count[kind]++
		if id != fmt.Sprint(letter, count[kind]) {
			t.Errorf("id: got %s for %s number %d", id, kind, count[kind])
		}
		weight := math.Inf(1)
		if r := m["robustness"]; r != nil {
			weight = r.(float64)
		}
		if before, ok := last[kind]; ok && weight > before {
			t.Errorf("%s: more robust than the one before", id)
		}
		last[kind] = weight
		n := vector(t, "normal", m["normal"])
		frame := m["frame"].([]any)
		e1, e2 := vector(t, "frame", frame[0]), vector(t, "frame", frame[1])
		if d := e1.Cross(e2).Sub(n).Norm(); d > 1e-9 || math.Abs(n.Norm()-1) > 1e-9 {
			t.Errorf("%s: frame[0] x frame[1] misses the normal by %g", id, d)
		}
		checkJacobian(t, id, m)
		if c := m["confidence"].(float64); c < 0 || c > 1 {
			t.Errorf("%s: confidence %g", id, c)
		}
		if sense := m["sense"]; !slices.Contains([]any{"attachment", "separation", "neutral"}, sense) {
			t.Errorf("%s: sense %v", id, sense)
		}
	}
	return ids
}

// checkJacobian compares trace, determinant and eigenvalues with gonum's from the Jacobian.
func checkJacobian(t *testing.T, id string, m map[string]any) {
	j := matrix(t, "jacobian", m["jacobian"])
	size := math.Max(math.Max(math.Abs(j[0][0]), math.Abs(j[0][1])), math.Max(math.Abs(j[1][0]), math.Abs(j[1][1])))
	if size == 0 {
		return
	}
	if d := m["trace"].(float64) - j[0][0] - j[1][1]; math.Abs(d) > 1e-8*size {
		t.Errorf("%s: trace is off by %g", id, d)
	}
	if d := m["determinant"].(float64) - (j[0][0]*j[1][1] - j[0][1]*j[1][0]); math.Abs(d) > 1e-8*size*size {
		t.Errorf("%s: determinant is off by %g", id, d)
	}
	var eigen mat.Eigen
	if !eigen.Factorize(mat.NewDense(2, 2, []float64{j[0][0], j[0][1], j[1][0], j[1][1]}), mat.EigenNone) {
		t.Fatal("gonum finds no eigenvalues")
	}
	got := matrix(t, "eigenvalues", m["eigenvalues"])
	// Equal eigenvalues move by the root of the rounding of the Jacobian's ten digits.
	const tolerance = 1e-4
	for _, want := range eigen.Values(nil) {
		best := math.Inf(1)
		for _, e := range got {
			best = math.Min(best, math.Hypot(e[0]-real(want), e[1]-imag(want)))
		}
		if best > tolerance*size {
			t.Errorf("%s: eigenvalues %v, gonum has %v", id, got, want)
		}
	}
}

func checkLines(t *testing.T, lines []any, ids map[string]bool) {
	for i, l := range lines {
		m := keys(t, "line", l, "id kind type from to length points")
		if want := fmt.Sprintf("L%d", i+1); m["id"] != want {
			t.Errorf("line %d: id %v, want %s", i, m["id"], want)
		}
		for _, end := range []string{"from", "to"} {
			if id, ok := m[end].(string); m[end] != nil && (!ok || !ids[id]) {
				t.Errorf("%v: %s is %v, which is no point", m["id"], end, m[end])
			}
		}
		if !slices.Contains([]any{"closed", "horn", "open", "cycle"}, m["type"]) {
			t.Errorf("%v: type %v", m["id"], m["type"])
		}
		points := m["points"].([]any)
		length := 0.0
		for k := range points {
			p := vector(t, "points", points[k])
			if k > 0 {
				length += p.Sub(vector(t, "points", points[k-1])).Norm()
			}
		}
		if got := m["length"].(float64); math.Abs(got-length) > 0.01*length {
			t.Errorf("%v: length %g, its points have %g", m["id"], got, length)
		}
	}
}

func checkLedger(t *testing.T, m map[string]any, c exact.Case) {
	l := keys(t, "ledger", m["ledger"],
		"nodes foci saddles half_nodes half_saddles index_sum boundary_term expected balanced rule parts")
	sum := 0.0
	for _, p := range m["points"].([]any) {
		q := p.(map[string]any)
		w := q["index"].(float64)
		if q["half"].(bool) {
			w /= 2
		}
		sum += w
	}
	if got := l["index_sum"].(float64); got != sum || int(got) != c.IndexSum {
		t.Errorf("index sum: got %g, the points have %g, the case %d", got, sum, c.IndexSum)
	}
	if got := l["boundary_term"].(float64); int(got) != c.BoundaryTerm {
		t.Errorf("boundary term: got %g, want %d", got, c.BoundaryTerm)
	}
	if l["expected"].(float64) != float64(c.Euler)+l["boundary_term"].(float64) || l["balanced"] != true {
		t.Errorf("ledger: got %v", l)
	}
	for _, p := range l["parts"].([]any) {
		keys(t, "part of the ledger", p,
			"part nodes foci saddles half_nodes half_saddles index_sum boundary_term expected balanced rule")
	}
}

// Weak points are cancelled in groups that keep the balance, at every floor up to the largest |tau|.
func TestBalanceAtEveryFloor(t *testing.T) {
	s := study.New(noisySphere(t))
	before := math.MaxInt
	for _, share := range []float64{0, 0.001, 0.01, 0.03, 0.1, 0.3, 1} {
		got, err := s.Topology(context.Background(), topology.Options{MinRobustness: share, Relative: true})
		if err != nil {
			t.Fatal(err)
		}
		if !got.Ledger.Balanced || got.Ledger.IndexSum != 2 {
			t.Errorf("floor %g: %+v", share, got.Ledger.Count)
		}
		if n := len(got.Points); n > before {
			t.Errorf("floor %g: %d points, more than the %d before", share, n, before)
		} else {
			before = n
		}
		for _, p := range got.Points {
			if float64(p.Robustness) < float64(got.Floor) {
				t.Errorf("floor %g: %s has robustness %g", share, p.ID, p.Robustness)
			}
		}
	}
	if before > 4 {
		t.Errorf("%d points are left at the largest |tau|", before)
	}
}

// noisySphere is a uniform flow on a sphere with a ripple that makes many weak points.
func noisySphere(t *testing.T) *field.Field {
	raw := exact.Sphere(1, 4000)
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		ripple := r3.Vec{X: math.Sin(9 * p.Y), Y: math.Sin(11 * p.Z), Z: math.Sin(8 * p.X)}
		raw.Tau[i] = r3.Vec{X: 1}.AddScaled(0.5, ripple).Reject(p.Unit())
	}
	return mustBuild(t, raw)
}

func TestTopologyText(t *testing.T) {
	result, err := study.New(noisySphere(t)).Topology(context.Background(), topology.Options{Lines: true})
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	if err := result.WriteText(&b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"The ledger balances: ", "What there is\n", "What separates\n", "What attaches\n",
		"What is doubtful\n"} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("the report lacks %q", want)
		}
	}
	for _, p := range result.Points {
		if !strings.Contains(b.String(), "\n  "+p.ID+" ") {
			t.Errorf("the report lacks %s", p.ID)
		}
	}
}

// The table file has the points and lines of the JSON, with the same digits.
func TestTopologyCSV(t *testing.T) {
	result, err := study.New(noisySphere(t)).Topology(context.Background(), topology.Options{Lines: true})
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := result.WriteCSV(&b); err != nil {
		t.Fatal(err)
	}
	var tables [][][]string
	for _, block := range strings.Split(b.String(), "# ")[1:] {
		_, rows, _ := strings.Cut(block, "\n")
		table, err := csv.NewReader(strings.NewReader(rows)).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		tables = append(tables, table)
	}
	if len(tables) != 3 {
		t.Fatalf("got %d tables, want 3", len(tables))
	}
	if got, want := len(tables[0])-1, len(result.Points); got != want {
		t.Errorf("%d points, want %d", got, want)
	}
	if got, want := len(tables[1])-1, len(result.Lines); got != want {
		t.Errorf("%d lines, want %d", got, want)
	}
	for i, p := range result.Points {
		x, _ := p.Position[0].MarshalJSON()
		if row := tables[0][i+1]; row[0] != p.ID || row[6] != string(x) {
			t.Errorf("row %d: got %v, want %s at %s", i+1, row[:9], p.ID, x)
		}
	}
}
