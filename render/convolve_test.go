package render

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"shearprint/field/r3"
)

// whole returns a plate whose every pixel has a direction and noise.
func whole(w, h int, dir func(x, y float64) (dx, dy float64)) *plate {
	p := &plate{}
	p.size(w, h, 0, h)
	rng := rand.New(rand.NewPCG(1, 2))
	for i := range p.dirs {
		dx, dy := dir(float64(i%w)+0.5, float64(i/w)+0.5)
		if n := r3.Hypot(dx, dy); n > 0 {
			p.dirs[i] = direction{float32(dx / n), float32(dy / n)}
		}
		p.noise[i] = float32((rng.Float64()*2 - 1) * math.Sqrt(3))
		p.fade[i] = 255
		p.steps[i] = 0
		p.hits[i] = hit{near: 1}
	}
	return p
}

// vortices is a pattern with a focus, a saddle and a node.
func vortices(w, h float64) func(x, y float64) (float64, float64) {
	return func(x, y float64) (float64, float64) {
		x, y = (x-w/2)/h, (y-h/2)/h
		return float64(y*(x-0.4)) - 0.3*x - 0.05, float64(x*(y+0.2)) - 0.4*y + 0.07
	}
}

// plain is line integral convolution as first published (Cabral and Leedom, SIGGRAPH 1993): every pixel by itself, a
// streamline each way, the tent kernel summed over it. The reference for the fast method.
func (p *plate) plain(s smear) []float32 {
	out := make([]float32, len(p.dirs))
	ahead, behind := make([]int32, s.half), make([]int32, s.half)
	for i := range out {
		sum := float64(p.noise[i]) * float64(s.half)
		squares := float64(s.half * s.half)
		n := p.walk(ahead, i, 1)
		for k, j := range ahead[:n] {
			w := float64(s.half - k - 1)
			sum += w * float64(p.noise[j])
			squares += w * w
		}
		n = p.walk(behind, i, -1)
		for k, j := range behind[:n] {
			w := float64(s.half - k - 1)
			sum += w * float64(p.noise[j])
			squares += w * w
		}
		out[i] = float32(sum / math.Sqrt(squares))
	}
	return out
}

func correlation(a, b []float64) float64 {
	var ma, mb float64
	for i := range a {
		ma += a[i]
		mb += b[i]
	}
	ma, mb = ma/float64(len(a)), mb/float64(len(b))
	var ab, aa, bb float64
	for i := range a {
		ab += (a[i] - ma) * (b[i] - mb)
		aa += (a[i] - ma) * (a[i] - ma)
		bb += (b[i] - mb) * (b[i] - mb)
	}
	return ab / math.Sqrt(aa*bb)
}

// Every pixel of the plain method has a streamline through its middle; of the fast one, streamlines pass up to half a
// pixel beside it and one pixel in four is the mean of its neighbours. They can therefore not agree better than noise
// with cells of one and a half pixels agrees with itself half a pixel aside.
func TestFastConvolutionAgreesWithThePlainMethod(t *testing.T) {
	const w, h = 320, 240
	p := whole(w, h, vortices(w, h))
	for i := range p.noise { // as the surface pass makes it
		x, y := float64(i%w), float64(i/w)
		p.noise[i] = solidNoise(0.8*x+0.6*y, 0.6*x-0.5*y, 0.5*y, cellPixels)
	}
	s := smear{half: 20, serve: 40, enough: 3}
	if err := p.convolve(context.Background(), s, 0, h); err != nil {
		t.Fatal(err)
	}
	var fast, plain []float64
	for i, v := range p.plain(s) {
		fast = append(fast, float64(p.tex[0][i]))
		plain = append(plain, float64(textureByte(v)))
	}
	if c := correlation(fast, plain); c < 0.85 {
		t.Errorf("correlation with the plain method is %.3f, want 0.85", c)
	}
}

// The exact value: in a parallel flow along the rows, without any doubt about the streamline, the fast method must give
// the sum that the kernel stands for.
func TestConvolutionOfParallelFlowIsTheKernelSum(t *testing.T) {
	const w, h = 200, 5
	for _, sign := range []float64{1, -1} {
		p := whole(w, h, func(x, y float64) (float64, float64) { return sign, 0 })
		s := smear{half: 10, serve: 20, enough: 3}
		if err := p.convolve(context.Background(), s, 0, h); err != nil {
			t.Fatal(err)
		}
		exact := 0
		for i, v := range p.plain(s) {
			got, want := int(p.tex[0][i]), int(textureByte(v))
			if got >= want-1 && got <= want+1 {
				exact++
			}
		}
		// Where no streamline went, a pixel is the mean of its neighbours: up to two thirds of the rows are between others.
		if exact < w*h*2/5 {
			t.Errorf("%d of %d pixels have the kernel's sum", exact, w*h)
		}
	}
}

// Variance of smeared white noise is one everywhere, also where the kernel is cut short at the end of a flow: the gain
// of a box kernel over n samples is sqrt n, that of any kernel 1/sqrt of its sum of squares.
func TestContrastIsEvenUpToTheEnds(t *testing.T) {
	const w, h = 400, 300
	p := whole(w, h, func(x, y float64) (float64, float64) { return 1, 0 })
	for i := range p.dirs {
		if i%w < 40 || i%w >= w-40 {
			p.dirs[i], p.fade[i] = direction{}, 0
		}
	}
	out := p.plain(smear{half: 20})
	deviation := func(x int) float64 {
		sum := 0.0
		for y := range h {
			sum += float64(out[y*w+x]) * float64(out[y*w+x])
		}
		return math.Sqrt(sum / h)
	}
	// The error of a deviation from 300 independent rows is 1/sqrt(600) = 4 %; four of that.
	for _, x := range []int{40, 45, 60, 200, 340, 359} {
		if d := deviation(x); math.Abs(d-1) > 0.17 {
			t.Errorf("column %d: deviation %.3f, want 1", x, d)
		}
	}
}

func TestTextureStopsAtJumps(t *testing.T) {
	const w, h, edge = 200, 60, 100
	smeared := func(right float32) []uint8 {
		p := whole(w, h, func(x, y float64) (float64, float64) { return 1, 0.05 })
		for i := range p.noise {
			if i%w >= edge {
				p.noise[i] *= right
			}
			if i%w == edge-1 {
				p.steps[i] = stepRight
			}
		}
		if err := p.convolve(context.Background(), smear{half: 10, serve: 20, enough: 3}, 0, h); err != nil {
			t.Fatal(err)
		}
		return p.tex[0]
	}
	a, b := smeared(1), smeared(-1)
	for i := range a {
		// A pixel beside the jump that no streamline has crossed takes the mean of its neighbours across it.
		if i%w < edge-1 && a[i] != b[i] {
			t.Fatalf("pixel %d,%d left of the jump depends on what lies right of it", i%w, i/w)
		}
	}
}

// In a vortex the way is a circle: after a whole turn and more it is where it was, to within a pixel or two, also where
// the circle is small.
func TestWalkKeepsToCircles(t *testing.T) {
	const w, h = 200, 200
	p := whole(w, h, func(x, y float64) (float64, float64) { return -(y - 100), x - 100 })
	for _, radius := range []float64{5, 10, 25, 60} {
		for _, sign := range []float32{1, -1} {
			at := make([]int32, 60)
			start := 100*w + 100 + int(radius)
			if n := p.walk(at, start, sign); n != len(at) {
				t.Fatalf("radius %g: the way ends after %d steps", radius, n)
			}
			for k, i := range at {
				r := r3.Hypot(float64(int(i)%w)+0.5-100, float64(int(i)/w)+0.5-100)
				// Half a pixel for the start and for the end each, and what a step errs: the third power of its angle.
				if allowed := 1.2 + float64(k)*0.5/(radius*radius); math.Abs(r-radius) > allowed {
					t.Errorf("radius %g, sign %g: %.2f after %d steps", radius, sign, r, k+1)
					break
				}
			}
		}
	}
}

func TestPhaseMovesThePatternAlongTheFlow(t *testing.T) {
	const w, h = 400, 60
	p := whole(w, h, func(x, y float64) (float64, float64) { return 1, 0 })
	s := smear{half: 20, serve: 40, enough: 3, animate: true}
	if err := p.convolve(context.Background(), s, 0, h); err != nil {
		t.Fatal(err)
	}
	wave := func(i int, phase float64) float64 {
		sin, cos := r3.SinCos(2 * math.Pi * phase)
		return cos*(float64(p.tex[1][i])-128) + sin*(float64(p.tex[2][i])-128)
	}
	// The picture a tenth of a turn later, moved back by some pixels, is most like the one before for the right way: one
	// turn is one half length of the kernel, 20 pixels.
	best, at := -2.0, 0
	for shift := -8; shift <= 8; shift++ {
		var before, after []float64
		for y := range h {
			for x := 100; x < 300; x++ {
				before = append(before, wave(y*w+x, 0))
				after = append(after, wave(y*w+x+shift, 0.1))
			}
		}
		if c := correlation(before, after); c > best {
			best, at = c, shift
		}
	}
	if at < 1 || at > 3 {
		t.Errorf("a tenth of a turn moves the pattern by %d pixels along the flow, want 2", at)
	}
}

func BenchmarkConvolve(b *testing.B) {
	const w, h = 1280, 720
	p := whole(w, h, vortices(w, h))
	s := smear{half: 20, serve: 40, enough: 3}
	b.Run("fast", func(b *testing.B) {
		for b.Loop() {
			if err := p.convolve(context.Background(), s, 0, h); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("soften", func(b *testing.B) {
		for b.Loop() {
			if err := p.soften(context.Background(), s, 0, h); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("plain", func(b *testing.B) {
		for b.Loop() {
			p.plain(s)
		}
	})
}
