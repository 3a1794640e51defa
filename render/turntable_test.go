package render

import (
	"math"
	"testing"

	"shearprint/field"
)

// follow returns the textures of the places that both frames show, each at the pixel where it appears.
func follow(f *field.Field, before, after *plate, lens Lens) (a, b []float64) {
	for i, h := range before.hits {
		if h.tri == noHit || before.fade[i] == 0 {
			continue
		}
		u, v := float64(h.u), float64(h.v)
		p := f.Corner(h.tri).At([3]float64{1 - u - v, u, v})
		x, y, z := lens.Project(p)
		px, py := int(math.Floor(x-0.5)), int(math.Floor(y-0.5))
		if px < 0 || py < 0 || px+1 >= after.w || py+1 >= after.h {
			continue
		}
		j := py*after.w + px
		if g := after.hits[j]; g.tri == noHit || math.Abs(1/float64(g.near)-z) > 0.03 || after.fade[j] == 0 {
			continue
		}
		// Between the four pixels around.
		s, t := x-0.5-float64(px), y-0.5-float64(py)
		at := func(k int) float64 { return float64(after.tex[0][k]) }
		a = append(a, float64(before.tex[0][i]))
		b = append(b, (1-t)*((1-s)*at(j)+s*at(j+1))+t*((1-s)*at(j+after.w)+s*at(j+after.w+1)))
	}
	return a, b
}

func clonePlate(p *plate) *plate {
	q := &plate{w: p.w, h: p.h, top: p.top, bottom: p.bottom}
	q.hits = append(q.hits, p.hits...)
	q.fade = append(q.fade, p.fade...)
	q.tex[0] = append(q.tex[0], p.tex[0]...)
	return q
}

// A turntable of 120 frames: the texture rides with the body. Noise anchored to the frame instead of the surface would
// have a correlation near 0 here, since three degrees move the middle of the body by ten pixels.
func TestTextureRidesWithTheBody(t *testing.T) {
	f := strained(5000)
	cam := NamedView("iso", f)
	r := NewRenderer()
	s := &Scene{Field: f, Bare: true}
	const frames = 120
	var last *plate
	worst, sum := 1.0, 0.0
	for range frames {
		cam = cam.Orbit(2*math.Pi/frames, 0)
		shoot(t, r, s, cam, 320, 240, Still)
		if last != nil {
			a, b := follow(f, last, &r.plate, r.Lens())
			if len(a) < 10_000 {
				t.Fatalf("only %d places are in both frames", len(a))
			}
			c := correlation(a, b)
			worst, sum = min(worst, c), sum+c
		}
		last = clonePlate(&r.plate)
	}
	t.Logf("correlation between frames: mean %.3f, least %.3f", sum/(frames-1), worst)
	if worst < 0.8 {
		t.Errorf("the least correlation between frames is %.3f, want above 0.8", worst)
	}
}

// Coming nearer by 4 % a frame, from the whole body to a twelfth of it, no frame differs much from the one before:
// octaves of the noise are blended, not switched.
func TestTextureDoesNotPopWhenZooming(t *testing.T) {
	f := strained(5000)
	cam := NamedView("iso", f)
	loc, _ := f.Nearest(cam.From)
	to := f.Position(loc)
	r := NewRenderer()
	s := &Scene{Field: f, Bare: true}
	var last *plate
	worst := 1.0
	for range 63 {
		cam = cam.Zoom(1.04, to)
		shoot(t, r, s, cam, 320, 240, Still)
		if last != nil {
			a, b := follow(f, last, &r.plate, r.Lens())
			worst = min(worst, correlation(a, b))
		}
		last = clonePlate(&r.plate)
	}
	t.Logf("least correlation between frames: %.3f", worst)
	if worst < 0.8 {
		t.Errorf("the least correlation between frames is %.3f, want above 0.8", worst)
	}
}

// The texture has the same contrast on the whole body and on a thousandth of it.
func TestTextureIsLegibleAtAnyZoom(t *testing.T) {
	f := strained(5000)
	cam := NamedView("iso", f)
	loc, _ := f.Nearest(cam.From)
	for _, zoom := range []float64{1, 10, 1e3, 1e5} {
		r := NewRenderer()
		fr := shoot(t, r, &Scene{Field: f, Bare: true}, cam.Zoom(zoom, f.Position(loc)), 320, 240, Still)
		var sum, squares, n float64
		for i, x := range fr.Layers.Texture {
			if fr.Layers.Mask[i] != 0 {
				v := (float64(x) - 128) * textureSpread / 127
				sum, squares, n = sum+v, squares+v*v, n+1
			}
		}
		deviation := math.Sqrt(squares/n - sum/n*sum/n)
		t.Logf("zoom %g: deviation %.2f", zoom, deviation)
		if deviation < 0.7 || deviation > 1.3 {
			t.Errorf("zoom %g: deviation of the texture is %.2f, want about 1", zoom, deviation)
		}
	}
}
