package render

import (
	"bytes"
	"context"
	"errors"
	"math"
	"runtime"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/r3"
)

// strained is the unit sphere in a strain with some spin: nodes, saddles, foci.
func strained(triangles int) *field.Field {
	raw := exact.Sphere(1, triangles)
	tau, p := exact.StokesSphere(r3.Vec{X: 0.3}, r3.Vec{Z: 0.2}, exact.Diagonal(1, -0.3, -0.7))
	for _, x := range raw.Points {
		raw.Tau = append(raw.Tau, tau(x))
		raw.P = append(raw.P, p(x))
	}
	f, err := field.Build(raw)
	if err != nil {
		panic(err)
	}
	return f
}

func shoot(t testing.TB, r *Renderer, s *Scene, c Camera, w, h int, q Quality) *Frame {
	t.Helper()
	f, err := r.Frame(context.Background(), s, c, w, h, q)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func marked(f *field.Field) *Scene {
	s := &Scene{Field: f, Isobars: 6}
	for i, p := range []r3.Vec{{X: 1}, {X: -1}, {Y: 1}, {Y: -1}, {Z: 1}, {Z: -1}} {
		loc, _ := f.Nearest(p)
		s.Marks = append(s.Marks, Mark{Loc: loc, Shape: Shape(i % 5), Sense: Sense(i % 3), Label: string(rune('A' + i))})
	}
	return s
}

// The bytes depend neither on the number of processors, nor on what the renderer drew before, nor on the run of the
// test.
func TestSameBytes(t *testing.T) {
	f := strained(3000)
	s := marked(f)
	c := NamedView("iso", f)
	for _, q := range []Quality{Moving, Still} {
		want := bytes.Clone(shoot(t, NewRenderer(), s, c, 300, 260, q).Pix)
		r := NewRenderer()
		shoot(t, r, s, c.Orbit(1, 0), 200, 300, Still)
		if !bytes.Equal(shoot(t, r, s, c, 300, 260, q).Pix, want) {
			t.Errorf("quality %d: other bytes after another frame", q)
		}
		old := runtime.GOMAXPROCS(1)
		got := shoot(t, NewRenderer(), s, c, 300, 260, q).Pix
		runtime.GOMAXPROCS(7)
		more := shoot(t, NewRenderer(), s, c, 300, 260, q).Pix
		runtime.GOMAXPROCS(old)
		if !bytes.Equal(got, want) || !bytes.Equal(more, want) {
			t.Errorf("quality %d: other bytes with other numbers of processors", q)
		}
	}
}

// Rows drawn by several workers, with the overlay above, are the frame.
func TestRowsMakeTheFrame(t *testing.T) {
	f := strained(3000)
	s := marked(f)
	c := NamedView("iso", f)
	const w, h = 220, 500
	want := bytes.Clone(shoot(t, NewRenderer(), s, c, w, h, Still).Pix)
	var got []byte
	r := NewRenderer()
	for _, rows := range [][2]int{{0, 120}, {120, 250}, {250, 251}, {251, 500}} {
		part, err := r.Rows(context.Background(), s, c, w, h, rows[0], rows[1])
		if err != nil {
			t.Fatal(err)
		}
		got = append(got, part.Pix...)
	}
	above, err := NewRenderer().Overlay(context.Background(), s, c, w, h)
	if err != nil {
		t.Fatal(err)
	}
	over(got, above)
	for i := range got {
		if got[i] != want[i] {
			t.Fatalf("byte %d of pixel %d,%d is %d, want %d", i%4, i/4%w, i/4/w, got[i], want[i])
		}
	}
}

// A picture with one sample per pixel is the still frame; with more, strips are no seams.
func TestPictureIsTheStillFrame(t *testing.T) {
	f := strained(3000)
	s := marked(f)
	c := NamedView("iso", f)
	want := bytes.Clone(shoot(t, NewRenderer(), s, c, 240, 250, Still).Pix)
	r := NewRenderer()
	got, err := r.Picture(context.Background(), s, c, 240, 250, 1)
	if err != nil || !bytes.Equal(got.Pix, want) {
		t.Fatalf("%v: other bytes than the frame's", err)
	}
	fine, err := r.Picture(context.Background(), s, c, 240, 250, 3)
	if err != nil {
		t.Fatal(err)
	}
	// Another sampling of the same picture: the mean colour stays.
	for ch := range 3 {
		var a, b float64
		for i := ch; i < len(want); i += 4 {
			a += float64(want[i])
			b += float64(fine.Pix[i])
		}
		if n := float64(len(want) / 4); math.Abs(a-b)/n > 2.5 {
			t.Errorf("channel %d: mean %.2f with one sample, %.2f with nine", ch, a/n, b/n)
		}
	}
}

func TestTransparentBackground(t *testing.T) {
	f := strained(3000)
	s := &Scene{Field: f, Transparent: true, Bare: true}
	p, err := NewRenderer().Picture(context.Background(), s, NamedView("iso", f), 120, 120, 2)
	if err != nil {
		t.Fatal(err)
	}
	if p.Pix[3] != 0 || p.Pix[4*(60*120+60)+3] != 255 {
		t.Errorf("alpha is %d in the corner and %d in the middle", p.Pix[3], p.Pix[4*(60*120+60)+3])
	}
	for i := 0; i < len(p.Pix); i += 4 {
		if a := p.Pix[i+3]; p.Pix[i] > a || p.Pix[i+1] > a || p.Pix[i+2] > a {
			t.Fatalf("pixel %d is not premultiplied: %v", i/4, p.Pix[i:i+4])
		}
	}
}

// A presenter that mixes the layers by the formula of Layers gives the frame's pixels within 2/255.
func TestLayersMixToTheFrame(t *testing.T) {
	f := strained(3000)
	s := marked(f)
	s.Animate, s.Phase = true, 0.3
	for _, q := range []Quality{Moving, Still} {
		fr := shoot(t, NewRenderer(), s, NamedView("iso", f), 201, 150, q)
		l := &fr.Layers
		for y := range fr.H {
			for x := range fr.W {
				i := min(y/l.Factor, l.H-1)*l.W + min(x/l.Factor, l.W-1)
				angle := 2 * math.Pi * s.Phase
				a := 128 + (2*(float64(l.Texture[i])-128)+3*(math.Cos(angle)*(float64(l.Cos[i])-128)+
					math.Sin(angle)*(float64(l.Sin[i])-128)))/4
				a = min(max(math.Floor(a), 0), 255)
				light := math.Floor(float64(l.Shade[i]) * float64(l.Curve[int(a)]) / 128)
				for c := range 3 {
					out := math.Floor(min(float64(l.Table[l.Scalar[i]][c])*light/255, 255))
					if l.Mask[i] == 0 {
						out = float64(l.Back[c])
					}
					o := 4 * (y*fr.W + x)
					out = float64(l.Overlay[o+c]) + math.Floor(out*float64(255-l.Overlay[o+3])/255)
					if d := math.Abs(out - float64(fr.Pix[o+c])); d > 2 {
						t.Fatalf("quality %d: pixel %d,%d channel %d is %d, the formula gives %.1f", q, x, y, c, fr.Pix[o+c], out)
					}
				}
			}
		}
	}
}

// A new palette or range, another theme or phase draw neither raster nor convolution anew, and give the same as a fresh
// frame.
func TestColoursCostNoConvolution(t *testing.T) {
	f := strained(3000)
	c := NamedView("iso", f)
	r := NewRenderer()
	s := &Scene{Field: f}
	shoot(t, r, s, c, 200, 200, Still)
	texture := &r.plate.tex[0][0]
	for i, change := range []func(){
		func() { s.Bands = 7 }, func() { s.Range = Range{Span: Fixed, Min: -1, Max: 2} }, func() { s.Theme = Dark },
		func() { s.Quantity = TauSize }, func() { s.Isobars = 5 },
	} {
		change()
		// A convolution would overwrite this.
		keep := *texture
		*texture = 77
		got := bytes.Clone(shoot(t, r, s, c, 200, 200, Still).Pix)
		if *texture != 77 {
			t.Errorf("change %d: the texture was made anew", i)
		}
		*texture = keep
		if want := shoot(t, NewRenderer(), s, c, 200, 200, Still).Pix; !bytes.Equal(got, want) {
			t.Errorf("change %d: other pixels than a fresh frame", i)
		}
	}
}

// A new phase draws no overlay anew; other marks do.
func TestPhaseCostsNoOverlay(t *testing.T) {
	f := strained(3000)
	c := NamedView("iso", f)
	r := NewRenderer()
	s := marked(f)
	s.Animate = true
	fr := shoot(t, r, s, c, 200, 200, Still)
	fr.Layers.Overlay[0] = 77
	s.Phase = 0.4
	if fr = shoot(t, r, s, c, 200, 200, Still); fr.Layers.Overlay[0] != 77 {
		t.Error("the overlay was drawn anew")
	}
	s.Marks = append([]Mark(nil), s.Marks[:3]...)
	got := bytes.Clone(shoot(t, r, s, c, 200, 200, Still).Pix)
	if want := shoot(t, NewRenderer(), s, c, 200, 200, Still).Pix; !bytes.Equal(got, want) {
		t.Error("with fewer marks: other pixels than a fresh frame")
	}
}

func TestPick(t *testing.T) {
	f := strained(200_000) // enough for moving frames to take the coarser mesh
	c := NamedView("iso", f)
	for _, q := range []Quality{Moving, Still} {
		r := NewRenderer()
		shoot(t, r, &Scene{Field: f}, c, 400, 300, q)
		lens := r.Lens()
		picked := 0
		for y := 5; y < 300; y += 23 {
			for x := 5; x < 400; x += 23 {
				loc, ok := r.Pick(float64(x)+0.5, float64(y)+0.5)
				if !ok {
					continue
				}
				picked++
				px, py, _ := lens.Project(f.Position(loc))
				k := float64(r.frame.Layers.Factor)
				// Within the pixel of the planes; on the coarse mesh, seen edge on, some more.
				if d := math.Abs(px-float64(x)-0.5) + math.Abs(py-float64(y)-0.5); d > 1.5*k+3*(k-1) {
					t.Errorf("quality %d: the place picked at %d,%d is at %.1f,%.1f", q, x, y, px, py)
				}
			}
		}
		if picked < 40 {
			t.Errorf("quality %d: only %d places picked", q, picked)
		}
		if _, ok := r.Pick(0, 0); ok {
			t.Error("the background was picked")
		}
		for _, bad := range [][2]float64{{-1, 5}, {5, -1}, {400, 5}, {5, 300}, {math.NaN(), 3}} {
			if _, ok := r.Pick(bad[0], bad[1]); ok {
				t.Errorf("%v was picked", bad)
			}
		}
	}
	if _, ok := NewRenderer().Pick(1, 1); ok {
		t.Error("a renderer without a frame picked something")
	}
}

func TestRefusals(t *testing.T) {
	f := strained(300)
	c := NamedView("iso", f)
	r := NewRenderer()
	for _, size := range [][2]int{{0, 5}, {5, 0}, {-1, 5}, {20000, 5}} {
		if _, err := r.Frame(context.Background(), &Scene{Field: f}, c, size[0], size[1], Still); err == nil {
			t.Errorf("size %v is accepted", size)
		}
	}
	if _, err := r.Frame(context.Background(), &Scene{}, c, 50, 50, Still); err == nil {
		t.Error("a scene without surface is accepted")
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := r.Frame(ctx, &Scene{Field: f}, c, 50, 50, Still); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
	// The renderer serves again afterwards.
	got := bytes.Clone(shoot(t, r, &Scene{Field: f}, c, 50, 50, Still).Pix)
	if !bytes.Equal(got, shoot(t, NewRenderer(), &Scene{Field: f}, c, 50, 50, Still).Pix) {
		t.Error("other bytes after a cancelled frame")
	}
}

// Where |tau| is below the floor the surface has no texture.
func TestTextureFadesBelowTheFloor(t *testing.T) {
	f := strained(5000)
	r := NewRenderer()
	fr := shoot(t, r, &Scene{Field: f, Floor: 1e9, Bare: true}, NamedView("iso", f), 100, 100, Still)
	for i, x := range fr.Layers.Texture {
		if x != 128 {
			t.Fatalf("pixel %d has texture %d", i, x)
		}
	}
	fr = shoot(t, r, &Scene{Field: f, Floor: 0.3 * f.MaxTau, Bare: true}, NamedView("iso", f), 100, 100, Still)
	faded, textured := 0, 0
	for i, m := range fr.Layers.Mask {
		if m != 0 && fr.Layers.Texture[i] == 128 {
			faded++
		} else if m != 0 {
			textured++
		}
	}
	if faded < 50 || textured < 500 {
		t.Errorf("%d pixels faded, %d textured", faded, textured)
	}
}

// Animated frames keep their layers through a change of phase, and the pattern returns after a whole turn.
func TestPhaseIsPeriodic(t *testing.T) {
	f := strained(3000)
	s := &Scene{Field: f, Animate: true, Bare: true}
	r := NewRenderer()
	fr := shoot(t, r, s, NamedView("iso", f), 120, 120, Still)
	a, b, c := make([]byte, len(fr.Pix)), make([]byte, len(fr.Pix)), make([]byte, len(fr.Pix))
	fr.Layers.Mix(a, fr.W, fr.H, 0.25)
	fr.Layers.Mix(b, fr.W, fr.H, 1.25)
	fr.Layers.Mix(c, fr.W, fr.H, 0.5)
	if !bytes.Equal(a, b) || bytes.Equal(a, c) {
		t.Error("phases 0.25 and 1.25 must agree, 0.25 and 0.5 must not")
	}
}
