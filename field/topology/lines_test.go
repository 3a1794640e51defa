package topology_test

import (
	"cmp"
	"math"
	"slices"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
	"shearprint/field/topology"
)

var withLines = topology.Options{Lines: true}

// link is a line of a graph between points that are numbered by their places.
type link struct{ from, to int }

// graphOf lists who is connected to whom, with the points numbered by the nearest of the given places.
func graphOf(t *testing.T, s *topology.Skeleton, places []r3.Vec, reach float64) []link {
	t.Helper()
	number := func(i int) int {
		if i < 0 {
			return -1
		}
		for k, p := range places {
			if p.Sub(s.Points[i].Position).Norm() < reach {
				return k
			}
		}
		t.Fatalf("point %s at %v is none of the expected", s.Points[i].ID, s.Points[i].Position)
		return -1
	}
	var out []link
	for _, l := range s.Lines {
		if l.Type == topology.Closed || l.Type == topology.Horn {
			out = append(out, link{number(l.From), number(l.To)})
		}
	}
	slices.SortFunc(out, func(a, b link) int { return cmp.Or(cmp.Compare(a.from, b.from), cmp.Compare(a.to, b.to)) })
	return out
}

// gradient returns the tangential gradient on the unit sphere of a function with gradient g in space.
func gradient(raw field.Raw, g func(p r3.Vec) r3.Vec) field.Raw {
	raw.Tau = make([]r3.Vec, len(raw.Points))
	for i, p := range raw.Points {
		raw.Tau[i] = g(p).Reject(p.Unit())
	}
	return raw
}

func build(t testing.TB, raw field.Raw) *field.Field {
	t.Helper()
	f, err := field.Build(raw)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// The spherical harmonic xyz of degree 3 has its extrema at the corners of a cube and its saddles on the axes. Its gradient
// runs from every minimum to every saddle beside it and on to the maxima, along great circles through the corners.
func TestSkeletonOfHarmonic(t *testing.T) {
	raw := exact.Shake(exact.Sphere(1, 8000), 0.2, 5, exact.OntoSphere(1))
	s := find(t, build(t, gradient(raw, func(p r3.Vec) r3.Vec { return r3.Vec{X: p.Y * p.Z, Y: p.Z * p.X, Z: p.X * p.Y} })), withLines)
	if len(s.Points) != 14 || len(s.Lines) != 24 {
		t.Fatalf("%d points and %d lines, want 14 and 24", len(s.Points), len(s.Lines))
	}
	out, in := make([]int, 14), make([]int, 14)
	for _, l := range s.Lines {
		if l.From < 0 || l.To < 0 || l.Type != topology.Closed {
			t.Fatalf("%s is %v from %d to %d", l.ID, l.Type, l.From, l.To)
		}
		out[l.From]++
		in[l.To]++
		want := topology.SeparationLine
		if s.Points[l.To].Type == topology.Saddle {
			want = topology.AttachmentLine
		}
		if l.Kind != want {
			t.Errorf("%s from %s to %s: kind %v, want %v (%s)", l.ID, s.Points[l.From].ID, s.Points[l.To].ID, l.Kind, want, l.Reason)
		}
		// A line runs along one of the six planes x = +-y, y = +-z, z = +-x.
		for _, loc := range l.Locs {
			p := s.Field.Position(loc)
			x, y, z := math.Abs(p.X), math.Abs(p.Y), math.Abs(p.Z)
			if off := math.Min(math.Abs(x-y), math.Min(math.Abs(y-z), math.Abs(z-x))); off > 0.02 {
				t.Fatalf("%s is %g off its great circle at %v", l.ID, off, p)
			}
		}
		if d := math.Acos(1 / math.Sqrt(3)); math.Abs(l.Length-d) > 0.02 {
			t.Errorf("%s: length %g, want %g", l.ID, l.Length, d)
		}
	}
	for i, p := range s.Points {
		want := link{3, 0} // minima send three lines, maxima take three
		switch {
		case p.Type == topology.Saddle:
			want = link{2, 2}
		case p.Sense == topology.Separation:
			want = link{0, 3}
		}
		if got := (link{out[i], in[i]}); got != want {
			t.Errorf("%s: %d lines out and %d in, want %v", p.ID, out[i], in[i], want)
		}
	}
}

// A field without symmetry has the same graph on a structured, a shaken and a graded mesh.
func TestGraphIsIndependentOfMesh(t *testing.T) {
	g := func(p r3.Vec) r3.Vec {
		return r3.Vec{X: p.Y*p.Z + 0.4*p.X + 0.1, Y: p.Z*p.X + 0.07*p.X*p.X - 0.05, Z: p.X*p.Y - 0.2*p.Z + 0.13}.
			Add(p.Cross(r3.Vec{X: 0.1, Y: 0.05, Z: 0.2}))
	}
	graded := exact.Sphere(1, 20000)
	for i, p := range graded.Points {
		graded.Points[i] = p.Add(r3.Vec{X: 0.4, Y: 0.2}).Unit() // edges between 0.7 and 1.8 times the mean
	}
	var places []r3.Vec
	var want []link
	for _, raw := range []field.Raw{exact.Sphere(1, 20000), exact.Shake(exact.Sphere(1, 30000), 0.3, 9, exact.OntoSphere(1)), graded} {
		s := find(t, build(t, gradient(raw, g)), withLines)
		if places == nil {
			for _, p := range s.Points {
				places = append(places, p.Position)
			}
			want = graphOf(t, s, places, 0.03)
			if len(want) < 8 {
				t.Fatalf("only %d lines: no test", len(want))
			}
			continue
		}
		if got := graphOf(t, s, places, 0.03); !slices.Equal(got, want) {
			t.Errorf("graph %v, want %v", got, want)
		}
	}
}

// The basins of a strained sphere in a stream (closed form in CHECKS 3.5, E = diag(1, -0.2, -0.8), U = 2): two sources, two
// sinks, four basins; those of one sink mirror each other, and together they are the surface.
func TestBasins(t *testing.T) {
	f := caseNamed("stream-and-strain").Field(20000)
	s := find(t, f, withLines)
	if len(s.Regions) != 4 {
		t.Fatalf("%d basins, want 4: %+v", len(s.Regions), s.Regions)
	}
	triangles, area := make([]int, 4), 0.0
	for _, b := range s.Basins {
		triangles[b]++
	}
	bySink := map[int][]float64{}
	for i, r := range s.Regions {
		if r.Source < 0 || r.Sink < 0 || s.Points[r.Source].Trace < 0 || s.Points[r.Sink].Trace > 0 {
			t.Fatalf("basin %d: from %d to %d", i, r.Source, r.Sink)
		}
		if r.Triangles != triangles[i] {
			t.Errorf("basin %d: %d triangles, %d are marked", i, r.Triangles, triangles[i])
		}
		area += r.Area
		bySink[r.Sink] = append(bySink[r.Sink], r.Area)
	}
	for sink, a := range bySink {
		if len(a) != 2 || math.Abs(a[0]-a[1]) > 0.03*(a[0]+a[1]) {
			t.Errorf("areas %v go to %s, want two alike", a, s.Points[sink].ID)
		}
	}
	if math.Abs(area-4*math.Pi) > 0.01 {
		t.Errorf("area %g, want 4 pi", area)
	}
}

// A monkey saddle, conj(z)^2, has three separatrices out and three in, sixty degrees apart.
func TestMonkeySaddle(t *testing.T) {
	s := find(t, caseNamed("disk-monkey-saddle").Field(8000), withLines)
	if len(s.Lines) != 6 {
		t.Fatalf("%d lines, want 6", len(s.Lines))
	}
	for _, l := range s.Lines {
		far, kind, shift := l.Locs[len(l.Locs)-1], topology.SeparationLine, 0.0
		if l.To == 0 {
			far, kind, shift = l.Locs[0], topology.AttachmentLine, math.Pi/3
		}
		p := s.Field.Position(far).Sub(s.Points[0].Position)
		// The field conj(z)^2 points straight out where its angle -2 phi equals phi.
		off := r3.Wrap(3*(math.Atan2(p.Y, p.X)-shift)) / 3
		if math.Abs(off) > 0.03 || l.Kind != kind || l.From+l.To != -1 {
			t.Errorf("%s: %g rad off its direction, kind %v, from %d to %d", l.ID, off, l.Kind, l.From, l.To)
		}
	}
}

// The computed runs, as their pictures show them. Radome: the horseshoe separation from the saddle ahead of the dome
// goes round it into the two foci of the wake. Pod: one open separation on either side, that runs into the node at
// the tail, and an open attachment line below.
func TestLinesOfRuns(t *testing.T) {
	s := find(t, load(t, "radome.ply"), withLines)
	horseshoe := 0
	for _, l := range s.Lines {
		if l.From >= 0 && s.Points[l.From].ID == "S1" && l.Type == topology.Horn && l.Kind == topology.SeparationLine && l.Length > 4 {
			horseshoe++
		}
		if l.Type == topology.Closed && l.From < 0 && l.To < 0 {
			t.Errorf("radome: %s has no end at a point", l.ID)
		}
	}
	if horseshoe != 2 {
		t.Errorf("radome: %d branches of the horseshoe, want 2", horseshoe)
	}
	s = find(t, load(t, "pod.ply"), withLines)
	open := map[topology.Kind]int{}
	for _, l := range s.Lines {
		if l.Type == topology.Open {
			open[l.Kind]++
			if l.Kind == topology.SeparationLine && (l.From != -1 || l.To < 0 || len(l.Angle) != len(l.Locs)) {
				t.Errorf("pod: %s from %d to %d with %d angles", l.ID, l.From, l.To, len(l.Angle))
			}
		}
	}
	if open[topology.SeparationLine] != 2 || open[topology.AttachmentLine] != 1 {
		t.Errorf("pod: open lines %v, want 2 of separation and 1 of attachment", open)
	}
}
