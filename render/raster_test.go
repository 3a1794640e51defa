package render

import (
	"context"
	"math"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

// rastered returns the raster of a field.
func rastered(t interface{ Fatal(...any) }, f *field.Field, c Camera, w, h int) (*plate, *body, Lens) {
	b := newBody(f)
	p := &plate{}
	p.size(w, h, 0, h)
	lens := c.Lens(w, h)
	if err := p.raster(context.Background(), b, &b.fine, b.lens(lens)); err != nil {
		t.Fatal(err)
	}
	return p, b, lens
}

// A flat surface that fills the frame covers every pixel exactly once, however its triangles lie: no gaps, no overlaps.
func TestNeighboursShareEveryPixelOnce(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		raw := exact.Plate(1, 1, 400)
		raw = exact.Shake(raw, rapid.Float64Range(0, 0.25).Draw(t, "shake"), rapid.Uint64().Draw(t, "seed"), exact.OntoPlane)
		f := mustField(raw)
		c := Camera{From: r3.Vec{X: 0.1, Y: -0.2, Z: 1.1}, At: r3.Vec{X: rapid.Float64Range(-0.2, 0.2).Draw(t, "x")},
			Up: r3.Vec{Y: 1}, Ortho: rapid.Bool().Draw(t, "ortho")}
		const w, h = 97, 83
		p, _, _ := rastered(t, f, c, w, h)
		if p.counts.tried != w*h || p.counts.written != w*h {
			t.Fatalf("%d pixels tried, %d written, want %d each", p.counts.tried, p.counts.written, w*h)
		}
	})
}

// What the raster says of a pixel is the place that projects to the pixel's middle.
func TestHitsProjectToTheirPixels(t *testing.T) {
	f := mustField(exact.Torus(2, 0.7, 3000))
	for _, ortho := range []bool{false, true} {
		c := NamedView("iso", f).Orbit(0.3, 0.2)
		c.Ortho = ortho
		const w, h = 160, 120
		p, b, lens := rastered(t, f, c, w, h)
		seen := 0
		for i, hit := range p.hits {
			if hit.tri == noHit {
				continue
			}
			seen++
			u, v := float64(hit.u), float64(hit.v)
			at := f.Corner(hit.tri).At([3]float64{1 - u - v, u, v})
			x, y, z := lens.Project(at)
			// Corners lie on a grid of 1/256 pixel; a sliver seen edge on may be off by more along itself.
			if math.Abs(x-float64(i%w)-0.5) > 0.05 || math.Abs(y-float64(i/w)-0.5) > 0.05 {
				t.Fatalf("ortho %v: pixel %d,%d shows a place at %.3f,%.3f", ortho, i%w, i/w, x, y)
			}
			r := raster{lens: lens, zero: lens.forward.Dot(b.center.Sub(lens.eye))}
			if d := r.z(hit.near); math.Abs(d-z) > 0.02 {
				t.Fatalf("ortho %v: depth %.4f, want %.4f", ortho, d, z)
			}
			if f.Corner(hit.tri).Normal().Dot(at.Sub(c.From)) > 0 && !ortho {
				t.Fatalf("pixel %d,%d shows a back", i%w, i/w)
			}
		}
		if seen < 2000 {
			t.Errorf("ortho %v: only %d pixels", ortho, seen)
		}
	}
}

// The nearest surface is what a ray meets first: compared with a slow search over all triangles.
func TestNearestSurfaceWins(t *testing.T) {
	f := mustField(exact.Eight(3))
	c := NamedView("iso", f)
	const w, h = 64, 48
	p, _, lens := rastered(t, f, c, w, h)
	for i := 0; i < len(p.hits); i += 5 {
		through := lens.OnTarget(float64(i%w)+0.5, float64(i/w)+0.5)
		way := through.Sub(c.From).Unit()
		nearest, edge := math.Inf(1), false
		for t := range f.Tris {
			d, margin, ok := meet(f.Corner(int32(t)), c.From, way)
			if ok && d < nearest {
				nearest, edge = d, margin < 0.02
			}
			edge = edge || ok && margin < 0.02
		}
		if edge {
			continue // a pixel's middle on an edge may go either way
		}
		if got := p.hits[i].tri != noHit; got != !math.IsInf(nearest, 1) {
			t.Fatalf("pixel %d,%d: hit %v, want %v", i%w, i/w, got, !got)
		}
		if p.hits[i].tri == noHit {
			continue
		}
		want := nearest * way.Dot(lens.forward)
		if got := 1 / float64(p.hits[i].near); math.Abs(got-want) > 1e-3*want {
			t.Fatalf("pixel %d,%d: depth %.5f, want %.5f", i%w, i/w, got, want)
		}
	}
}

// meet intersects a ray with a triangle; margin is the least barycentric weight.
func meet(tri r3.Tri, from, way r3.Vec) (distance, margin float64, ok bool) {
	n := tri.Normal()
	d := n.Dot(way)
	if math.Abs(d) < 1e-12 {
		return 0, 0, false
	}
	distance = n.Dot(tri[0].Sub(from)) / d
	p := from.AddScaled(distance, way)
	b := [3]float64{}
	for k := range 3 {
		a, c := tri[(k+1)%3], tri[(k+2)%3]
		b[k] = c.Sub(a).Cross(p.Sub(a)).Dot(n) / n.Dot(n)
	}
	margin = min(b[0], b[1], b[2])
	return distance, margin, distance > 0 && margin > -0.02
}

// A camera that stands on a large plate looks over parts in front of and behind it: clipping must give exactly the
// places that the pixels look at, up to the horizon.
func TestClippingAtTheEye(t *testing.T) {
	f := mustField(exact.Plate(1000, 1000, 8))
	c := Camera{From: r3.Vec{Z: 2}, At: r3.Vec{Y: 10, Z: 1}, Up: vertical}
	const w, h = 120, 90
	p, _, lens := rastered(t, f, c, w, h)
	covered := 0
	for i, hit := range p.hits {
		x, y := float64(i%w)+0.5, float64(i/w)+0.5
		way := lens.OnTarget(x, y).Sub(c.From)
		if way.Z >= 0 { // sky
			if hit.tri != noHit {
				t.Fatalf("pixel %d,%d above the horizon is covered", i%w, i/w)
			}
			continue
		}
		want := c.From.AddScaled(-c.From.Z/way.Z, way)
		if math.Abs(want.X) > 990 || math.Abs(want.Y) > 990 {
			continue
		}
		covered++
		if hit.tri == noHit {
			t.Fatalf("pixel %d,%d is empty", i%w, i/w)
		}
		u, v := float64(hit.u), float64(hit.v)
		got := f.Corner(hit.tri).At([3]float64{1 - u - v, u, v})
		// A hundredth of a pixel, in the length that a pixel covers there.
		distance := want.Sub(c.From).Norm()
		if d := got.Sub(want).Norm(); d > 0.02*lens.Pixel(distance)*distance/c.From.Z+1e-4*distance {
			t.Fatalf("pixel %d,%d shows %v, want %v", i%w, i/w, got, want)
		}
	}
	if covered < w*h/2 {
		t.Errorf("only %d pixels look at the plate", covered)
	}
}

// Cameras in odd places draw something or nothing, and end.
func TestOddCamerasDoNoHarm(t *testing.T) {
	f := mustField(exact.Sphere(1, 320))
	r := NewRenderer()
	nan := math.NaN()
	for i, c := range []Camera{
		{}, {From: r3.Vec{X: 1}, At: r3.Vec{X: 1}}, {At: r3.Vec{X: 1}}, {From: r3.Vec{Z: 5}, Up: r3.Vec{Z: 1}},
		{From: r3.Vec{X: 1e-9}}, {From: r3.Vec{X: 1e12}}, {From: r3.Vec{X: 1e12}, Ortho: true},
		{From: r3.Vec{X: nan}, At: r3.Vec{Y: nan}}, {From: r3.Vec{X: math.Inf(1)}}, {From: r3.Vec{X: 3}, Fov: 1e-12},
		{From: r3.Vec{X: 3}, Fov: 99}, {From: r3.Vec{X: 1.0000001}, At: r3.Vec{X: 1}, Up: vertical},
		{From: r3.Vec{X: 1e-300}, Ortho: true},
	} {
		for _, q := range []Quality{Moving, Still} {
			if _, err := r.Frame(context.Background(), &Scene{Field: f, Isobars: 5}, c, 64, 48, q); err != nil {
				t.Errorf("camera %d: %v", i, err)
			}
		}
	}
}
