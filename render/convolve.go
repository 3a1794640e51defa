package render

import (
	"context"
	"math"

	"shearprint/field/r3"
)

// kernelLength is half the length of the convolution kernel in points: the pattern then shows the direction over about
// a fingertip's width on a screen, and still bends into small foci.
const kernelLength = 20

// smear holds the settings of a convolution.
type smear struct {
	half    int // half length of the kernel, in steps of one pixel
	serve   int // how far a streamline serves the pixels that it crosses, each way from where it starts
	animate bool
	soften  bool
	// enough is the number of a pixel's four neighbours that streamlines have crossed which makes one of its own
	// unnecessary: with 3 the texture is sharper, with 2 it takes a quarter less time.
	enough int
}

// reach returns how far a pixel's texture depends on others [pixels].
func (s smear) reach() int { return s.half + s.serve + 2 }

// tracer is what one goroutine needs to convolve a band.
type tracer struct {
	at       []int32 // pixels along the streamline; at[serve+half] is where it starts
	value    [3][]float32
	sum      [3][]float32
	box      []float32
	acc      [3][]float32
	count    []uint16
	gain     []float32 // by the numbers of samples before and after, see kernelGain
	cos, sin []float32
}

// convolve fills the texture of rows from..to of the frame: noise smeared along the direction by a tent-shaped kernel.
//
// A streamline that starts at a pixel serves all pixels it crosses within its band: along it the convolution with a
// tent is two running sums (Stalling and Hege, Fast and resolution independent line integral convolution, SIGGRAPH
// 1995, with a box in place of the tent). A pixel's value is the mean over the streamlines that crossed it. It is
// divided by the root of the kernel's sum of squares, so that a kernel cut short at a silhouette gives no other
// contrast.
//
// With animate, two more textures are made with the kernel times cos and sin of one wave per half length: A + C cos(2
// pi phase) + S sin(2 pi phase) is the texture smeared by a kernel whose wave has moved by the phase along the flow.
func (p *plate) convolve(ctx context.Context, s smear, from, to int) error {
	channels := 1
	if s.animate {
		channels = 3
		p.tex[1] = fitted(p.tex[1], len(p.tex[0]))
		p.tex[2] = fitted(p.tex[2], len(p.tex[0]))
	}
	return bands(ctx, from, to, bandRows, func(from, to int) {
		t, _ := p.scratch.Get().(*tracer)
		if t == nil || len(t.at) != 2*(s.half+s.serve)+1 {
			t = newTracer(s)
		}
		defer p.scratch.Put(t)
		p.band(t, s, channels, from-p.top, to-p.top)
	})
}

func newTracer(s smear) *tracer {
	n := 2*(s.half+s.serve) + 1
	t := &tracer{at: make([]int32, n), box: make([]float32, n), gain: kernelGain(s.half)}
	t.cos, t.sin = make([]float32, n), make([]float32, n)
	for c := range t.value {
		t.value[c], t.sum[c] = make([]float32, n), make([]float32, n)
	}
	for i := range n {
		sin, cos := r3.SinCos(2 * math.Pi * float64(i-n/2) / float64(s.half))
		t.sin[i], t.cos[i] = float32(sin), float32(cos)
	}
	return t
}

// kernelGain returns, per number a of samples before and b after, at index a*(half+1)+b, what makes the variance of a
// convolution of white noise one.
func kernelGain(half int) []float32 {
	squares := make([]float64, half+1)
	for k := 1; k <= half; k++ {
		w := float64(half - k)
		squares[k] = squares[k-1] + float64(w*w)
	}
	gain := make([]float32, (half+1)*(half+1))
	for a := range half + 1 {
		for b := range half + 1 {
			gain[a*(half+1)+b] = float32(1 / math.Sqrt(float64(half*half)+squares[a]+squares[b]))
		}
	}
	return gain
}

// band convolves rows from..to of the plate.
func (p *plate) band(t *tracer, s smear, channels, from, to int) {
	lo, hi := from*p.w, to*p.w
	n := hi - lo
	for c := range channels {
		t.acc[c] = fitted(t.acc[c], n)
		clear(t.acc[c])
	}
	t.count = fitted(t.count, n)
	clear(t.count)
	// Rows are taken in an order that spreads the first streamlines over the band: later ones then find most pixels
	// served.
	const stride = 5
	for start := range stride {
		for y := from + start; y < to; y += stride {
			row, fade := t.count[y*p.w-lo:][:p.w], p.fade[y*p.w:][:p.w]
			above, below := p.neighbours(t.count, y, from, to)
			for x, n := range row {
				if n != 0 || fade[x] == 0 {
					continue
				}
				// A pixel between two that a streamline has crossed needs none of its own: it takes their mean.
				crossed := 0
				if above[x] != 0 {
					crossed++
				}
				if below[x] != 0 {
					crossed++
				}
				if x > 0 && row[x-1] != 0 {
					crossed++
				}
				if x+1 < len(row) && row[x+1] != 0 {
					crossed++
				}
				if crossed < s.enough {
					p.streamline(t, s, channels, y*p.w+x, lo, hi)
				}
			}
		}
	}
	for c := range channels {
		acc := t.acc[c]
		for i, n := range t.count {
			if n > 1 {
				acc[i] /= float32(n)
			}
		}
		for y := from; y < to; y++ {
			p.finish(t, c, y, from, to)
		}
	}
}

// neighbours returns the counts of the rows above and below row y of a band; at the band's ends those of the row
// itself.
func (p *plate) neighbours(count []uint16, y, from, to int) (above, below []uint16) {
	row := func(y int) []uint16 { return count[(y-from)*p.w:][:p.w] }
	return row(max(y-1, from)), row(min(y+1, to-1))
}

// finish turns the means of a row of a band into bytes; pixels that no streamline has crossed take the mean of those of
// their four neighbours that one has.
func (p *plate) finish(t *tracer, c, y, from, to int) {
	base := (y - from) * p.w
	acc, count := t.acc[c], t.count
	fade, out := p.fade[y*p.w:][:p.w], p.tex[c][y*p.w:][:p.w]
	for x := range out {
		if fade[x] == 0 {
			out[x] = 128
			continue
		}
		i := base + x
		v := acc[i]
		if count[i] == 0 {
			n := float32(0)
			if x > 0 && count[i-1] != 0 {
				v, n = v+acc[i-1], n+1
			}
			if x+1 < p.w && count[i+1] != 0 {
				v, n = v+acc[i+1], n+1
			}
			if y > from && count[i-p.w] != 0 {
				v, n = v+acc[i-p.w], n+1
			}
			if y+1 < to && count[i+p.w] != 0 {
				v, n = v+acc[i+p.w], n+1
			}
			if n > 1 {
				v /= n
			}
		}
		out[x] = textureByte(float32(v*float32(fade[x])) * (1.0 / 255))
	}
}

// textureSpread is the number of standard deviations of the texture that a byte holds on each side of its middle.
const textureSpread = 3.2

func textureByte(v float32) uint8 {
	// Whole numbers: in the browser their min and max need no call.
	return uint8(min(max(int32(float32(v*(127/textureSpread))+128.5), 1), 255))
}
