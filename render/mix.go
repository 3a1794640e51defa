package render

import (
	"encoding/binary"
	"math"

	"shearprint/field/r3"
)

// Layers is what the pixels of a frame are mixed from, so that a presenter (a shader, or Mix) can change colours,
// contrast and phase without a new frame. Planes hold one byte per pixel, W x H; each pixel of them covers Factor x
// Factor pixels of the frame. Overlay has the frame's own size.
//
// The mix, in bytes, with all divisions rounding down and Cos, Sin used where Animated:
//
//	a     = Texture, or min(max(128 + (2 (Texture-128) + 3 (cos(p) (Cos-128) + sin(p) (Sin-128))) / 4, 0), 255)
//	light = Shade * Curve[a] / 128
//	rgb   = min(Table[Scalar] * light / 255, 255)
//	out   = Mask > 0 ? rgb : Back
//	out   = Overlay.rgb + out * (255 - Overlay.a) / 255        (Overlay is premultiplied)
//
// with p = 2 pi phase. A transparent background has Back = 0, and Mask as its alpha.
type Layers struct {
	W, H, Factor int
	Texture      []byte // 128 is the middle; 128 all over where there is no texture
	Cos, Sin     []byte // nil unless Animated
	Scalar       []byte // 0 without a value, 1 to 255 from Low to High
	Shade        []byte
	Mask         []byte // 255 on the surface, 0 beside it
	Overlay      []byte // RGBA, premultiplied
	Table        [256][3]uint8
	Curve        [256]uint8
	Back         [4]uint8 // RGBA of the background, premultiplied
	Low, High    float64  // the values at the ends of the palette
	Animated     bool
}

// textureContrast is the change of light that the texture makes: the palette's colours stay recognisable at 0.5, the
// lines stay legible above 0.3.
const (
	textureContrast = 0.27
	// textureLight is the light of the texture's middle: its bright lines then just reach the palette's own colour.
	textureLight = 0.90
)

// contrastCurve returns the texture's effect on light, 128 for the palette's own colour. The curve flattens the
// extremes: of a normal distribution it makes nearly an even one, which has the most contrast for its range. Without
// texture light is as it is.
func contrastCurve(texture bool) (curve [256]uint8) {
	for i := range curve {
		if !texture {
			curve[i] = 128
			continue
		}
		t := float64((float64(i) - 128) * textureSpread / 127 * 1.5)
		s := t / math.Sqrt(1+float64(t*t))
		curve[i] = uint8(float64(128*(textureLight+float64(textureContrast*s))) + 0.5)
	}
	return curve
}

// quantize fills Scalar and Mask from rows from..to of the plate; the planes begin with the plate's row first.
func (l *Layers) quantize(p *plate, from, to, first int, lo, hi float64) {
	scale := float32(254 / (hi - lo))
	low := float32(lo)
	for i := from * p.w; i < to*p.w; i++ {
		o := i - first*p.w
		l.Mask[o] = 0
		if p.hits[i].tri != noHit {
			l.Mask[o] = 255
		}
		s := p.scalar[i]
		if s != s {
			l.Scalar[o] = 0
			continue
		}
		switch v := float32((s-low)*scale) + 1.5; {
		case v >= 255:
			l.Scalar[o] = 255
		case v >= 1:
			l.Scalar[o] = uint8(v)
		default:
			l.Scalar[o] = 1
		}
	}
}

// mixer holds the tables of a mix.
type mixer struct {
	l        *Layers
	cos, sin int32 // in 1/65536
	curve    [256]int32
}

func newMixer(l *Layers, phase float64) mixer {
	s, c := r3.SinCos(2 * math.Pi * (phase - math.Floor(phase)))
	m := mixer{l: l, cos: int32(math.Floor(float64(c*65536) + 0.5)), sin: int32(math.Floor(float64(s*65536) + 0.5))}
	for i, x := range l.Curve {
		m.curve[i] = int32(x)
	}
	return m
}

// row mixes n pixels of the layers, from index i, into RGBA.
func (m *mixer) row(into []byte, i, n int) {
	l := m.l
	into = into[:4*n]
	back := l.Back
	texture, scalar, shade, mask := l.Texture[i:i+n], l.Scalar[i:i+n], l.Shade[i:i+n], l.Mask[i:i+n]
	for k := range n {
		o := into[4*k : 4*k+4 : 4*k+4]
		if mask[k] == 0 {
			o[0], o[1], o[2], o[3] = back[0], back[1], back[2], back[3]
			continue
		}
		a := int32(texture[k])
		if l.Animated {
			wave := m.cos*(int32(l.Cos[i+k])-128) + m.sin*(int32(l.Sin[i+k])-128)
			a = min(max(128+((a-128)<<17+3*wave)>>18, 0), 255)
		}
		light := uint32(shade[k]) * uint32(m.curve[a]) >> 7
		c := &l.Table[scalar[k]]
		o[0] = uint8(min(uint32(c[0])*light/255, 255))
		o[1] = uint8(min(uint32(c[1])*light/255, 255))
		o[2] = uint8(min(uint32(c[2])*light/255, 255))
		o[3] = 255
	}
}

// Mix fills pix, RGBA of w x h pixels, with the frame whose layers these are, at the given phase [turns] of the flow's
// animation.
func (l *Layers) Mix(pix []byte, w, h int, phase float64) {
	l.mixRows(pix, w, h, phase, 0, h)
}

// mixRows mixes rows from..to of the frame.
func (l *Layers) mixRows(pix []byte, w, h int, phase float64, from, to int) {
	m := newMixer(l, phase)
	row := make([]byte, 4*l.W)
	wide := make([]byte, 4*w)
	last := -1
	for y := from; y < to; y++ {
		into := pix[4*y*w : 4*(y+1)*w]
		source := min(y/l.Factor, l.H-1)
		if l.Factor == 1 {
			m.row(into, source*l.W, w)
		} else {
			if source != last {
				m.row(row, source*l.W, l.W)
				widen(wide, row, l.Factor)
				last = source
			}
			copy(into, wide)
		}
		over(into, l.Overlay[4*y*w:4*(y+1)*w])
	}
}

// widen repeats every pixel of from the given number of times.
func widen(into, from []byte, factor int) {
	i := 0
	for ; len(from) >= 4 && i+4*factor <= len(into); from = from[4:] {
		a, b, c, d := from[0], from[1], from[2], from[3]
		for range factor {
			o := into[i : i+4 : i+4]
			o[0], o[1], o[2], o[3] = a, b, c, d
			i += 4
		}
	}
	for ; len(from) >= 4 && i+4 <= len(into); i += 4 {
		copy(into[i:i+4], from[:4])
	}
}

// over lays premultiplied pixels over others.
func over(into, above []byte) {
	above = above[:len(into)]
	for i := 0; i+4 <= len(above); i += 4 {
		// Most of an overlay is empty: four pixels at a look.
		for i+16 <= len(above) && binary.NativeEndian.Uint64(above[i:])|binary.NativeEndian.Uint64(above[i+8:]) == 0 {
			i += 16
		}
		if i+4 > len(above) {
			return
		}
		s := above[i : i+4 : i+4]
		if s[3] == 0 {
			continue
		}
		o := into[i : i+4 : i+4]
		k := 255 - uint32(s[3])
		for c := range 4 {
			o[c] = s[c] + uint8(uint32(o[c])*k/255)
		}
	}
}
