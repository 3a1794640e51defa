package render

import (
	"math"
)

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

// tent fills sum with the convolution of value with a tent of the given half width: a box after a box, each as a
// running sum. Values beyond the ends are taken as zero.
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

// walk fills at with the pixels along the direction from pixel i in steps of one pixel, and returns their number: all,
// or fewer where the surface or the direction ends. Steps are by the two-step method of Adams and Bashforth, which is
// of second order with one look at the direction a step; where the direction turns by more than half a right angle from
// one step to the next, the direction itself is taken.
func (p *plate) walk(at []int32, i int, sign float32) int {
	w, top := p.w, p.top
	// Rows are counted from the frame's top, so that rounding is the same in every strip.
	x, y := float32(i%w)+0.5, float32(i/w+top)+0.5
	right, upper, lower := float32(w), float32(top), float32(p.bottom)
	before := p.dirs[i]
	for k := range at {
		d := p.dirs[i]
		ex, ey := d.x, d.y
		if turn := float32(d.x*before.x) + float32(d.y*before.y); turn > 0.7 {
			ex += 0.5 * (d.x - before.x)
			ey += 0.5 * (d.y - before.y)
		} else if turn < -0.5 { // two flows meet
			return k
		}
		before = d
		x += float32(sign * ex)
		y += float32(sign * ey)
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
