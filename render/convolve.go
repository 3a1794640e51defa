package render

import (
	"context"
	"math"

	"shearprint/field/r3"
)

// kernelLength is half the length of the convolution kernel in points: the pattern then shows the direction over about
// a fingertip's width on a screen, and still bends into small foci.
const kernelLength = 20

// serve is how far [pixels], each way from where it starts, a streamline serves the pixels that it crosses.
const serve = 40

// smear holds the settings of a convolution.
type smear struct {
	half    int // half length of the kernel, in steps of one pixel
	serve   int
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
// A streamline that starts at a pixel serves all pixels it crosses within its band: along it the convolution with a tent
// is two running sums (Stalling and Hege, Fast and resolution independent line integral convolution, SIGGRAPH 1995, with
// a box in place of the tent). A pixel's value is the mean over the streamlines that crossed it. It is divided by the
// root of the kernel's sum of squares, so that a kernel cut short at a silhouette gives no other contrast.
//
// With animate, two more textures are made with the kernel times cos and sin of one wave per half length: A + C cos(2 pi
// phase) + S sin(2 pi phase) is the texture smeared by a kernel whose wave has moved by the phase along the flow.
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
	t := &tracer{at: make([]int32, n), box: make([]float32, n), gain: kernelGain(s.half), cos: make([]float32, n), sin: make([]float32, n)}
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
	// Rows are taken in an order that spreads the first streamlines over the band: later ones then find most pixels served.
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

// neighbours returns the counts of the rows above and below row y of a band; at the band's ends those of the row itself.
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
	return uint8(min(max(int32(float32(v*(127/textureSpread))+128.5), 1), 255)) // whole numbers: their min and max need no call
}

// streamline adds the convolution along the streamline through pixel i to the pixels in lo..hi that it crosses.
func (p *plate) streamline(t *tracer, s smear, channels, i, lo, hi int) {
	middle := s.half + s.serve
	t.at[middle] = int32(i)
	ahead := p.walk(t.at[middle+1:], i, 1)
	behind := p.walkBack(t.at[:middle], i)
	first, last := middle-behind, middle+ahead
	value := t.value[0]
	clear(value[:first])
	for k := first; k <= last; k++ {
		value[k] = p.noise[t.at[k]]
	}
	clear(value[last+1:])
	if channels == 3 {
		for k, v := range value {
			t.value[1][k], t.value[2][k] = float32(v*t.cos[k]), float32(v*t.sin[k])
		}
	}
	for c := range channels {
		tent(t.value[c], t.box, t.sum[c], s.half)
	}
	from, to := max(first, s.half), min(last, len(value)-1-s.half)
	for k := from; k <= to; k++ {
		at := int(t.at[k])
		if at < lo || at >= hi {
			continue
		}
		gain := t.gain[min(k-first, s.half)*(s.half+1)+min(last-k, s.half)]
		at -= lo
		if t.count[at] == math.MaxUint16 {
			continue
		}
		t.count[at]++
		t.acc[0][at] += float32(t.sum[0][k] * gain)
		if channels == 3 {
			const root2 = 1.41421356
			a, b := float32(float32(t.sum[1][k]*gain)*root2), float32(float32(t.sum[2][k]*gain)*root2)
			t.acc[1][at] += float32(a*t.cos[k]) + float32(b*t.sin[k])
			t.acc[2][at] += float32(a*t.sin[k]) - float32(b*t.cos[k])
		}
	}
}

// tent fills sum with the convolution of value with a tent of the given half width: a box after a box, each as a running
// sum. Values beyond the ends are taken as zero.
func tent(value, box, sum []float32, half int) {
	var run float32
	n := len(value)
	for k := n - 1; k >= 0; k-- { // box[k] = value[k] + .. + value[k+half-1]
		run += value[k]
		if k+half < n {
			run -= value[k+half]
		}
		box[k] = run
	}
	run = 0
	for k, b := range box { // sum[k] = box[k-half+1] + .. + box[k]
		run += b
		if k >= half {
			run -= box[k-half]
		}
		sum[k] = run
	}
}

// walk fills at with the pixels along the direction from pixel i in steps of one pixel, and returns their number: all, or
// fewer where the surface or the direction ends. Steps are by the midpoint rule; where the direction turns by more than
// half a right angle within half a step, the step is halved.
func (p *plate) walk(at []int32, i int, sign float32) int {
	w, top := p.w, p.top
	// Rows are counted from the frame's top, so that rounding is the same in every strip.
	x, y := float32(i%w)+0.5, float32(i/w+top)+0.5
	right, upper, lower := float32(w), float32(top), float32(p.bottom)
	for k := range at {
		d := p.dirs[i]
		h := float32(0.5 * sign)
		mx, my := x+float32(h*d.x), y+float32(h*d.y)
		if !(mx >= 0 && mx < right && my >= upper && my < lower) {
			return k
		}
		e := p.dirs[(int(my)-top)*w+int(mx)]
		turn := float32(d.x*e.x) + float32(d.y*e.y)
		if turn < 0.7 {
			if turn == 0 && e == (direction{}) {
				e = d
			} else {
				if turn < -0.5 { // two flows meet
					return k
				}
				e = d
				h *= 0.5
			}
		}
		x += float32(2 * h * e.x)
		y += float32(2 * h * e.y)
		if !(x >= 0 && x < right && y >= upper && y < lower) {
			return k
		}
		j := (int(y)-top)*w + int(x)
		if p.dirs[j] == (direction{}) {
			return k
		}
		if j != i && p.steps[i]|p.steps[j] != 0 && p.blocked(i, j) {
			return k
		}
		at[k] = int32(j)
		i = j
	}
	return len(at)
}

// walkBack is walk against the direction, filling at from its end.
func (p *plate) walkBack(at []int32, i int) int {
	n := p.walk(at, i, -1)
	if n < len(at) {
		copy(at[len(at)-n:], at[:n])
	}
	for a, b := len(at)-n, len(at)-1; a < b; a, b = a+1, b-1 {
		at[a], at[b] = at[b], at[a]
	}
	return n
}

// blocked tells whether a step between neighbouring pixels crosses a jump of the surface.
func (p *plate) blocked(i, j int) bool {
	if i > j {
		i, j = j, i
	}
	switch j - i {
	case 1:
		return p.steps[i]&stepRight != 0
	case p.w:
		return p.steps[i]&stepDown != 0
	case p.w + 1:
		return p.steps[i] != 0 || p.steps[i+1]&stepDown != 0 && p.steps[i+p.w]&stepRight != 0
	case p.w - 1:
		return p.steps[i]&stepDown != 0 || p.steps[i-1] != 0
	}
	return false
}

// soften smooths rows from..to of the texture by a binomial filter over three pixels each way, and restores the contrast:
// the stairs of lines that run nearly along the rows go, the lines stay.
func (p *plate) soften(ctx context.Context, s smear, from, to int) error {
	channels := 1
	if s.animate {
		channels = 3
	}
	for c := range channels {
		plane := p.tex[c]
		p.soft = fitted(p.soft, len(plane))
		rows := p.bottom - p.top
		err := bands(ctx, from, to, 64, func(from, to int) {
			for y := from; y < to; y++ {
				above := plane[max(y-1, 0)*p.w:][:p.w]
				row := plane[y*p.w:][:p.w]
				below := plane[min(y+1, rows-1)*p.w:][:p.w]
				out := p.soft[y*p.w:][:p.w]
				fade := p.fade[y*p.w:][:p.w]
				column := func(x int) int32 { return int32(above[x]) + 2*int32(row[x]) + int32(below[x]) - 512 }
				left, middle := column(0), column(0)
				for x := range p.w {
					right := column(min(x+1, p.w-1))
					v := int32(128)
					if fade[x] != 0 {
						v = min(max(128+((left+2*middle+right)*softenGain)>>8, 1), 255)
					}
					out[x] = uint8(v)
					left, middle = middle, right
				}
			}
		})
		if err != nil {
			return err
		}
		copy(plane[from*p.w:to*p.w], p.soft[from*p.w:to*p.w])
	}
	return nil
}

// softenGain makes up for the contrast that softening takes, in 1/16: measured on the radome, so that the texture's
// variance stays.
const softenGain = 23
