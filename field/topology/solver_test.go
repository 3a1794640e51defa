package topology

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat"
	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

// The least-squares solver against gonum's QR, and its error estimates against gonum's inverse.
func TestFitAgreesWithGonum(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		n := rapid.IntRange(12, 40).Draw(t, "samples")
		stretch := math.Pow(10, rapid.Float64Range(-1, 0).Draw(t, "aspect"))
		samples := make([][5]float64, n)
		a := mat.NewDense(n, terms, nil)
		b := mat.NewDense(n, 3, nil)
		for i := range samples {
			x, y := rng.Float64()*2-1, (rng.Float64()*2-1)*stretch
			samples[i] = [5]float64{x, y, rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()}
			a.SetRow(i, []float64{1, x, y, x * x, x * y, y * y})
			b.SetRow(i, samples[i][2:])
		}
		q, ok := fit(samples, 1)
		if !ok {
			t.Fatal("no fit")
		}
		var want, residual, square, inverse mat.Dense
		if err := want.Solve(a, b); err != nil {
			t.Fatal(err)
		}
		scale := mat.Max(&want) - mat.Min(&want)
		for k := range terms {
			for c, got := range [3]float64{q.u[k], q.v[k], q.z[k]} {
				if math.Abs(got-want.At(k, c)) > 1e-10*scale {
					t.Fatalf("coefficient %d of %d: %g, gonum %g", k, c, got, want.At(k, c))
				}
			}
		}
		residual.Mul(a, &want)
		residual.Sub(b, &residual)
		for i := range 2 {
			for j := range 2 {
				s := mat.Dot(residual.ColView(i), residual.ColView(j)) / float64(n-terms)
				if math.Abs(q.noise[i][j]-s) > 1e-9 {
					t.Fatalf("noise %v, want %g at %d %d", q.noise, s, i, j)
				}
			}
		}
		square.Mul(a.T(), a)
		if err := inverse.Inverse(&square); err != nil {
			return // gonum's own warning of a bad condition
		}
		p := r3.Vec2{X: 0.2, Y: 0.3 * stretch}
		g := mat.NewDense(2, terms, []float64{0, 1, 0, 2 * p.X, p.Y, 0, 0, 0, 1, 0, p.X, 2 * p.Y})
		var m mat.Dense
		m.Product(g, &inverse, g.T())
		got := q.errors(p)
		for i := range 2 {
			for j := range 2 {
				if math.Abs(got[i][j]-m.At(i, j)) > 1e-7*mat.Max(&m) {
					t.Fatalf("errors %v, want %v", got, mat.Formatted(&m))
				}
			}
		}
	})
}

func TestFitRefusesLines(t *testing.T) {
	var samples [][5]float64
	for i := range 20 {
		x := float64(i) / 20
		samples = append(samples, [5]float64{x, 2 * x, 1, 2, 3})
	}
	if _, ok := fit(samples, 1); ok {
		t.Error("samples on a line were taken for a surface")
	}
	if _, ok := fit(samples[:3], 1); ok {
		t.Error("three samples were taken for a quadratic")
	}
}

func TestSortByKey(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		special := rapid.SampledFrom([]float64{0, 1, 5e-324, 0.5, 1e-300})
		values := rapid.SliceOf(rapid.OneOf(rapid.Float64Range(0, 1), special)).Draw(t, "values")
		var edges []keyed
		for i, x := range values {
			edges = append(edges, keyed{math.Float64bits(x), int32(i)})
		}
		want := slices.Clone(edges)
		slices.SortStableFunc(want, func(a, b keyed) int {
			return cmp.Compare(math.Float64frombits(a.key), math.Float64frombits(b.key))
		})
		if got := sortByKey(edges); !slices.Equal(got, want) {
			t.Fatalf("%v, want %v", got, want)
		}
	})
}

// The samples of the error distribution are normal: mean 0, variance 1, uncorrelated, and with the share of one
// standard deviation (68.27 %).
func TestNormals(t *testing.T) {
	z := normals()
	columns := make([][]float64, 4)
	for _, w := range z {
		for k := range columns {
			columns[k] = append(columns[k], w[k])
		}
	}
	for k, c := range columns {
		if m, s := stat.MeanStdDev(c, nil); math.Abs(m) > 0.02 || math.Abs(s-1) > 0.02 {
			t.Errorf("column %d: mean %g, deviation %g", k, m, s)
		}
		for l := range k {
			if r := stat.Correlation(c, columns[l], nil); math.Abs(r) > 0.05 {
				t.Errorf("columns %d and %d correlate by %g", k, l, r)
			}
		}
		near := 0
		for _, x := range c {
			if math.Abs(x) < 1 {
				near++
			}
		}
		if share := float64(near) / float64(len(c)); math.Abs(share-0.6827) > 0.02 {
			t.Errorf("column %d: %g within one deviation", k, share)
		}
	}
}

// Confidence against the share of a plain random sample of the same distribution.
func TestConfidenceAgreesWithSampling(t *testing.T) {
	z := normals()
	rng := rand.New(rand.NewPCG(1, 2))
	for _, c := range []struct {
		j     [2][2]float64
		index int
		noise float64
	}{
		{[2][2]float64{{1, 0}, {0, 0.2}}, 1, 0.04}, {[2][2]float64{{1, 0.3}, {-0.3, 1}}, 1, 0.05},
		{[2][2]float64{{1, 0}, {0, -0.1}}, -1, 0.03}, {[2][2]float64{{1, 0}, {0, -2}}, -1, 1e-6},
	} {
		s, m := [2][2]float64{{c.noise, c.noise / 3}, {c.noise / 3, c.noise}}, [2][2]float64{{1, 0.2}, {0.2, 0.5}}
		b := bordersOf(c.j, s, m)
		kind, ok := typeOf(c.j, c.index, b)
		if !ok {
			t.Fatal("no type")
		}
		got := confidence(c.j, s, m, c.index, kind, b, z)
		ls, lm := cholesky(s), cholesky(m)
		kept := 0
		const n = 20000
		for range n {
			var w, e [2][2]float64
			for i := range 2 {
				for a := range 2 {
					w[i][a] = rng.NormFloat64()
				}
			}
			for i := range 2 {
				for a := range 2 {
					e[i][a] = c.j[i][a]
					for k := range 2 {
						for l := range 2 {
							e[i][a] += ls[i][k] * w[k][l] * lm[a][l]
						}
					}
				}
			}
			if k, ok := typeOf(e, c.index, b); ok && k == kind {
				kept++
			}
		}
		if want := float64(kept) / n; math.Abs(got-want) > 0.02 {
			t.Errorf("%v: confidence %g, by random sampling %g", c.j, got, want)
		}
	}
}

// Rotations along the two half-edges of an edge are opposite to the last bit, and the faces' indices are whole numbers
// up to rounding.
func TestTurnsCancel(t *testing.T) {
	raw := exact.Shake(exact.Sphere(1, 2000), 0.4, 3, exact.OntoSphere(1))
	f := exact.Case{Surface: func(int) field.Raw { return raw }, Tau: func(p r3.Vec) r3.Vec {
		return r3.Vec{X: math.Sin(30 * p.X), Y: math.Cos(20 * p.Z), Z: p.Y}
	}}.Field(0)
	c, err := readIndices(t.Context(), f)
	if err != nil {
		t.Fatal(err)
	}
	for h, g := range f.Twin {
		if c.turn(int32(h)) != -c.turn(g) {
			t.Fatalf("half-edge %d turns by %g, its twin by %g", h, c.turn(int32(h)), c.turn(g))
		}
	}
	if c.residue > 1e-13 {
		t.Errorf("indices are off whole numbers by up to %g", c.residue)
	}
	t.Logf("largest residue %.1e", c.residue)
}

// A walk goes straight: its length is that of the great circle, up to the mesh's chords, its legs join, and it ends
// where it should.
func TestWalksAreStraight(t *testing.T) {
	f := exact.Cases()[0].Field(20000)
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-1, 1)
		p := r3.Vec{X: x.Draw(t, "px"), Y: x.Draw(t, "py"), Z: x.Draw(t, "pz")}.Unit()
		q := r3.Vec{X: x.Draw(t, "qx"), Y: x.Draw(t, "qy"), Z: x.Draw(t, "qz")}.Unit()
		if p.Norm() == 0 || q.Norm() == 0 || p.Dot(q) < -0.99 {
			return // nearly opposite: any way is straight
		}
		a, _ := f.Nearest(p)
		b, _ := f.Nearest(q)
		a, b = inside(a), inside(b)
		legs, err := walk(f.Mesh, a, b)
		if err != nil {
			t.Fatal(err)
		}
		length := 0.0
		for i, g := range legs {
			c := f.Corner(g.tri)
			length += c.At(g.to).Sub(c.At(g.from)).Norm()
			if i > 0 {
				if gap := f.Corner(legs[i-1].tri).At(legs[i-1].to).Sub(c.At(g.from)).Norm(); gap > 1e-12 {
					t.Fatalf("a gap of %g after leg %d", gap, i)
				}
			}
		}
		u, v := f.Position(a).Unit(), f.Position(b).Unit()
		want := r3.Atan2(u.Cross(v).Norm(), u.Dot(v))
		if math.Abs(length-want) > 1e-3*want+1e-6 {
			t.Fatalf("the walk from %v to %v is %g long, the great circle %g", p, q, length, want)
		}
		if legs[0].tri != a.Tri || legs[len(legs)-1].tri != b.Tri {
			t.Fatal("the walk ends elsewhere")
		}
	})
}
