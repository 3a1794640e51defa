package trace_test

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/trace"
)

func caseNamed(t testing.TB, name string) exact.Case {
	for _, c := range exact.Cases() {
		if c.Name == name {
			return c
		}
	}
	t.Fatalf("no case %q", name)
	return exact.Case{}
}

// flat builds a field on a plane patch.
func flat(t testing.TB, raw field.Raw, tau func(x, y float64) (float64, float64)) *field.Field {
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i].X, raw.Tau[i].Y = tau(p.X, p.Y)
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func at(f *field.Field, x, y float64) field.Loc {
	l, _ := f.Nearest(r3.Vec{X: x, Y: y})
	return l
}

// A logarithmic spiral, r = r0 exp(theta F/G), is the exact curve of a linear field, which the mesh reproduces: only the
// integration errs. Source of the rotor's values: Karman 1921, Cochran 1934.
func TestSpiralOfLinearField(t *testing.T) {
	k := exact.Rotors[0]
	f := flat(t, exact.Disk(1, 4000), func(x, y float64) (float64, float64) { return k.F*x - k.G*y, k.G*x + k.F*y })
	p := trace.New(f, nil, nil).Trace(context.Background(), at(f, 0.02, 0.01), trace.Options{Tolerance: 1e-9})
	if p.End != trace.Rim {
		t.Fatalf("ends because %v", p.End)
	}
	theta, r0, before := 0.0, math.Hypot(0.02, 0.01), math.Atan2(0.01, 0.02)
	for _, l := range p.Locs {
		q := f.Position(l)
		a := math.Atan2(q.Y, q.X)
		theta += r3.Wrap(a - before)
		before = a
		want := r0 * math.Exp(theta*k.F/k.G)
		if got := math.Hypot(q.X, q.Y); math.Abs(got-want) > 1e-5*want {
			t.Fatalf("after %.3f rad: r = %g, want %g", theta, got, want)
		}
	}
	// Arc length of the spiral: (r1 - r0) sqrt(1 + (G/F)^2).
	last := f.Position(p.Locs[len(p.Locs)-1])
	want := (math.Hypot(last.X, last.Y) - r0) * math.Sqrt(1+k.G*k.G/(k.F*k.F))
	if math.Abs(p.Length()-want) > 1e-5*want {
		t.Errorf("length %g, want %g", p.Length(), want)
	}
}

// On a field that is not linear the mesh errs by the square of its edges: halving them must quarter the error.
func TestOrderOfConvergence(t *testing.T) {
	var errs []float64
	for _, n := range []int{2000, 8000, 32000} {
		// Circles around the origin, run at a speed that varies with place.
		f := flat(t, exact.Shake(exact.Disk(1, n), 0.2, 7, exact.OntoPlane), func(x, y float64) (float64, float64) {
			s := 1 + x*x + 0.5*y
			return -s * y, s * x
		})
		p := trace.New(f, nil, nil).Trace(context.Background(), at(f, 0.6, 0), trace.Options{MaxLength: 1.2 * math.Pi})
		worst := 0.0
		for _, l := range p.Locs {
			worst = math.Max(worst, math.Abs(f.Position(l).Norm()-0.6))
		}
		errs = append(errs, worst)
	}
	order := math.Log2(errs[0]/errs[2]) / 2
	t.Logf("errors %.3g, order %.2f", errs, order)
	if order < 1.6 {
		t.Errorf("errors %v fall with order %.2f, want about 2", errs, order)
	}
}

// Source: Stokes flow past a sphere; limiting streamlines are meridians from the front to the rear stagnation point.
func TestMeridianOfStokesSphere(t *testing.T) {
	f := caseNamed(t, "stokes-sphere").Field(20000)
	rear, _ := f.Nearest(r3.Vec{X: 1})
	front, _ := f.Nearest(r3.Vec{X: -1})
	tr := trace.New(f, []trace.Stop{{ID: 4, Loc: rear, Radius: 0.02}, {ID: 7, Loc: front, Radius: 0.02}}, nil)
	from, _ := f.Nearest(r3.Vec{X: -0.3, Y: 0.8, Z: 0.5})
	b := tr.Through(context.Background(), from, trace.Options{})
	if b.Ahead.End != trace.Captured || b.Ahead.Stop != 4 || b.Back.End != trace.Captured || b.Back.Stop != 7 {
		t.Fatalf("ahead: %v at %d; back: %v at %d", b.Ahead.End, b.Ahead.Stop, b.Back.End, b.Back.Stop)
	}
	if got := b.S[len(b.S)-1] - b.S[0]; math.Abs(got-(math.Pi-0.04)) > 0.01 {
		t.Errorf("length %g, want pi less the two radii", got)
	}
	start := f.Position(from)
	plane := start.Cross(r3.Vec{X: 1}).Unit()
	for _, l := range b.Locs {
		if d := f.Position(l).Dot(plane); math.Abs(d) > 2e-3 {
			t.Fatalf("the curve leaves its meridian by %g", d)
		}
	}
	if f.Position(b.Locs[b.Start]).Sub(start).Norm() > 1e-6 {
		t.Errorf("the start is not at index %d", b.Start)
	}
}

// Source: a Stokes sphere with swirl and strain; the equator is a closed orbit of length 2 pi, here attracting against
// the flow. And the supercritical Hopf normal form, whose circle attracts along it.
func TestClosedOrbits(t *testing.T) {
	sphere := caseNamed(t, "swirl-and-strain").Field(20000)
	from, _ := sphere.Nearest(r3.Vec{X: 0.7, Z: 0.6})
	p := trace.New(sphere, nil, nil).Trace(context.Background(), from, trace.Options{Backward: true})
	if p.End != trace.Cycle {
		t.Fatalf("sphere: ends because %v after %g", p.End, p.Length())
	}
	if got := p.Length() - p.S[p.Loop]; math.Abs(got-2*math.Pi) > 0.02 {
		t.Errorf("sphere: length of the orbit %g, want 2 pi", got)
	}
	hopf := caseNamed(t, "hopf-cycle").Field(20000)
	p = trace.New(hopf, nil, nil).Trace(context.Background(), at(hopf, 0.1, 0), trace.Options{})
	if p.End != trace.Cycle {
		t.Fatalf("Hopf: ends because %v after %g", p.End, p.Length())
	}
	for _, l := range p.Locs[p.Loop:] {
		if r := hopf.Position(l).Norm(); math.Abs(r-0.6) > 2e-3 {
			t.Errorf("Hopf: radius %g, want 0.6", r)
		}
	}
}

// Where both sides of a ridge flow into it, the curve ends up running along the ridge.
func TestFollowsRidge(t *testing.T) {
	raw := exact.Plate(2, 1, 1600)
	for i, p := range raw.Points {
		raw.Points[i].Z = -math.Abs(p.Y)
	}
	for _, tri := range raw.Tris {
		y := (raw.Points[tri[0]].Y + raw.Points[tri[1]].Y + raw.Points[tri[2]].Y) / 3
		s := math.Copysign(1, y)
		raw.FaceTau = append(raw.FaceTau, r3.Vec{X: 1, Y: -s, Z: 1})
	}
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	from, _ := f.Nearest(r3.Vec{X: -1.5, Y: 0.4, Z: -0.4})
	p := trace.New(f, nil, nil).Trace(context.Background(), from, trace.Options{})
	last := f.Position(p.Locs[len(p.Locs)-1])
	if p.End != trace.Rim || math.Abs(last.Y) > 0.02 || last.X < 1.99 {
		t.Errorf("ends at %v because %v", last, p.End)
	}
}

func TestStagnationAndRim(t *testing.T) {
	// tau = (-x, -y): straight into the origin, where it vanishes.
	f := flat(t, exact.Disk(1, 600), func(x, y float64) (float64, float64) { return -(x - 0.013), -(y + 0.007) })
	p := trace.New(f, nil, nil).Trace(context.Background(), at(f, 0.5, 0.3), trace.Options{})
	q := f.Position(p.Locs[len(p.Locs)-1])
	if p.End != trace.Stagnant || q.Sub(r3.Vec{X: 0.013, Y: -0.007}).Norm() > 1e-4 {
		t.Errorf("ends at %v because %v", q, p.End)
	}
	p = trace.New(f, nil, nil).Trace(context.Background(), at(f, 0.5, 0.3), trace.Options{Backward: true})
	if r := f.Position(p.Locs[len(p.Locs)-1]).Norm(); p.End != trace.Rim || r < 0.98 {
		t.Errorf("backward ends at radius %g because %v", r, p.End)
	}
	p = trace.New(f, nil, nil).Trace(context.Background(), at(f, 0.5, 0.3), trace.Options{MaxLength: 0.1})
	if p.End != trace.TooLong || p.Length() > 0.2 {
		t.Errorf("length limit: %v after %g", p.End, p.Length())
	}
	zero := flat(t, exact.Disk(1, 100), func(x, y float64) (float64, float64) { return 0, 0 })
	if p := trace.New(zero, nil, nil).Trace(context.Background(), at(zero, 0.5, 0.3), trace.Options{}); p.End != trace.Stagnant {
		t.Errorf("zero field: %v", p.End)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if p := trace.New(f, nil, nil).Trace(ctx, at(f, 0.5, 0.3), trace.Options{}); p.End != trace.Halted {
		t.Errorf("cancelled: %v", p.End)
	}
}

// On any field and surface every curve ends, is connected, and its arc length is that of its pieces.
func TestAnyCurveEnds(t *testing.T) {
	surfaces := []field.Raw{
		exact.Sphere(1, 500), exact.Torus(1, 0.4, 600), exact.Eight(2), exact.Disk(1, 300),
		exact.Shake(exact.Annulus(0.4, 1, 400), 0.3, 3, exact.OntoPlane),
	}
	rapid.Check(t, func(t *rapid.T) {
		raw := rapid.SampledFrom(surfaces).Draw(t, "surface")
		v := rapid.Float64Range(-1, 1)
		seedVec := func() r3.Vec { return r3.Vec{X: v.Draw(t, "x"), Y: v.Draw(t, "y"), Z: v.Draw(t, "z")} }
		a, b, c := seedVec(), seedVec(), seedVec()
		rough := rapid.Float64Range(0, 2).Draw(t, "rough")
		raw.Tau = make([]r3.Vec, len(raw.Points))
		for i, p := range raw.Points {
			noise := math.Sin(float64(i*i%977)) * rough
			raw.Tau[i] = a.Add(p.Cross(b)).AddScaled(p.X*p.Y, c).AddScaled(noise, c.Cross(p))
		}
		f, err := field.Build(raw)
		if err != nil {
			t.Fatal(err)
		}
		from, _ := f.Nearest(seedVec())
		p := trace.New(f, nil, nil).Trace(context.Background(), from, trace.Options{Backward: rapid.Bool().Draw(t, "back")})
		if p.End == trace.Halted || len(p.Locs) != len(p.S) || len(p.Locs) == 0 {
			t.Fatalf("end %v, %d places, %d lengths", p.End, len(p.Locs), len(p.S))
		}
		for i := 1; i < len(p.Locs); i++ {
			d := f.Position(p.Locs[i]).Sub(f.Position(p.Locs[i-1])).Norm()
			if ds := p.S[i] - p.S[i-1]; ds <= 0 || d > ds*1.001+1e-4*f.MeanEdge() {
				t.Fatalf("piece %d: %g in space for %g of arc", i, d, ds)
			}
			for _, x := range p.Locs[i].Bary {
				if !(x >= 0 && x <= 1) {
					t.Fatalf("place %d: %v", i, p.Locs[i])
				}
			}
		}
	})
}

func BenchmarkTrace(b *testing.B) {
	f := caseNamed(b, "stream-and-strain").Field(1_000_000)
	tr := trace.New(f, nil, nil)
	from, _ := f.Nearest(r3.Vec{X: -0.3, Y: 0.8, Z: 0.5})
	for b.Loop() {
		tr.Trace(context.Background(), from, trace.Options{})
	}
}
