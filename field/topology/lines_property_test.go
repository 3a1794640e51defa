package topology_test

import (
	"context"
	"math"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

// checkLines tests what holds for the lines of any field.
func checkLines(t rapid.TB, s *topology.Skeleton) {
	f := s.Field
	for i, l := range s.Lines {
		if len(l.Locs) < 2 || l.Reason == "" || !(l.Length >= 0) || !(l.Strength >= 0) || math.IsInf(l.Length, 0) {
			t.Fatalf("%s: %d places, length %g, strength %g, reason %q", l.ID, len(l.Locs), l.Length, l.Strength, l.Reason)
		}
		sum := 0.0
		for k, loc := range l.Locs {
			for _, b := range loc.Bary {
				if !(b >= 0 && b <= 1) {
					t.Fatalf("%s: place %d is %v", l.ID, k, loc)
				}
			}
			if k > 0 {
				sum += f.Position(loc).Sub(f.Position(l.Locs[k-1])).Norm()
			}
		}
		if math.Abs(sum-l.Length) > 1e-9*sum {
			t.Fatalf("%s: length %g, its places have %g", l.ID, l.Length, sum)
		}
		at := func(point int, loc field.Loc, what string) {
			if point < 0 {
				return
			}
			p := &s.Points[point]
			if d := f.Position(loc).Sub(p.Position).Norm(); d > p.Size {
				t.Fatalf("%s (line %d) %s %s, %g from it", l.ID, i, what, p.ID, d)
			}
		}
		at(l.From, l.Locs[0], "begins at")
		at(l.To, l.Locs[len(l.Locs)-1], "ends at")
		if l.Type == topology.Cycle && (l.From >= 0 || l.To >= 0) || l.Angle != nil && len(l.Angle) != len(l.Locs) {
			t.Fatalf("%s: %v from %d to %d with %d angles", l.ID, l.Type, l.From, l.To, len(l.Angle))
		}
		for k, r := range l.Reaches {
			if k == 0 && r.First != 0 || k > 0 && (r.First != l.Reaches[k-1].Last || r.Kind == l.Reaches[k-1].Kind) ||
				k == len(l.Reaches)-1 && r.Last != len(l.Locs)-1 || r.Last <= r.First || !(r.Strength >= 0) ||
				(r.Kind != topology.NoKind) != (r.Strength >= 1) {
				t.Fatalf("%s: reach %d of %d places is %+v", l.ID, k, len(l.Locs), l.Reaches)
			}
		}
		for _, a := range l.Angle {
			if !(a >= 0 && a <= math.Pi) {
				t.Fatalf("%s: angle %g", l.ID, a)
			}
		}
	}
	triangles := make([]int, len(s.Regions))
	for _, b := range s.Basins {
		if b >= 0 {
			triangles[b]++
		}
	}
	for i, r := range s.Regions {
		if r.Triangles != triangles[i] || r.Source >= len(s.Points) || r.Sink >= len(s.Points) {
			t.Fatalf("basin %d: %+v, %d triangles are marked", i, r, triangles[i])
		}
	}
}

// Random fields on surfaces of every kind, smooth, rough, partly zero or with all sizes, with and without a floor: the
// lines end, begin and end where they say, and a second reading is the same.
func TestLinesOfRandomFields(t *testing.T) {
	surfaces := []field.Raw{
		exact.Sphere(1, 500), exact.Torus(1, 0.4, 600), exact.Eight(2), exact.Disk(1, 300),
		exact.Shake(exact.Annulus(0.4, 1, 400), 0.3, 3, exact.OntoPlane),
	}
	rapid.Check(t, func(t *rapid.T) {
		raw := rapid.SampledFrom(surfaces).Draw(t, "surface")
		v := rapid.Float64Range(-1, 1)
		vec := func(name string) r3.Vec { return r3.Vec{X: v.Draw(t, name), Y: v.Draw(t, name), Z: v.Draw(t, name)} }
		a, b, c := vec("a"), vec("b"), vec("c")
		rough := rapid.SampledFrom([]float64{0, 0, 0.3, 2}).Draw(t, "rough")
		zero := rapid.SampledFrom([]float64{-2, -2, 0}).Draw(t, "zero below")
		size := rapid.SampledFrom([]float64{1, 1e-300, 1e90}).Draw(t, "size")
		raw.Tau, raw.P = make([]r3.Vec, len(raw.Points)), make([]float64, len(raw.Points))
		for i, p := range raw.Points {
			noise := math.Sin(float64(i*i%977)) * rough
			if p.X > zero {
				raw.Tau[i] = a.Add(p.Cross(b)).AddScaled(p.X*p.Y, c).AddScaled(noise, c.Cross(p)).Scale(size)
			}
			raw.P[i] = p.Dot(b) * size
		}
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		opt := topology.Options{Lines: true, Relative: true}
		opt.MinRobustness = rapid.SampledFrom([]float64{0, 0.05, 0.5}).Draw(t, "floor")
		s := find(t, f, opt)
		checkLines(t, s)
		again := find(t, f, opt)
		if !reflect.DeepEqual(s.Lines, again.Lines) || !reflect.DeepEqual(s.Basins, again.Basins) {
			t.Fatal("two readings of one field differ")
		}
	})
}

// The computation stops with its context.
func TestLinesStopWithTheirContext(t *testing.T) {
	f := caseNamed("stream-and-strain").Field(20000)
	ctx, cancel := context.WithCancel(context.Background())
	s, err := topology.Find(ctx, f, topology.Options{Lines: true, Progress: func(share float64) {
		if share > 0.35 {
			cancel()
		}
	}})
	if err == nil {
		t.Errorf("no error, %d lines", len(s.Lines))
	}
}
