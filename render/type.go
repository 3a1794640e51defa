package render

import (
	"image"
	"math"
	"sync"

	"golang.org/x/image/font"
	"golang.org/x/image/font/gofont/goregular"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/math/fixed"
)

// parsedFont is the only typeface: Go Regular, embedded. Parsing cannot fail for the embedded bytes.
var parsedFont = sync.OnceValue(func() *opentype.Font {
	f, err := opentype.Parse(goregular.TTF)
	if err != nil {
		panic("render: the embedded typeface: " + err.Error())
	}
	return f
})

// typist sets type of one size. It is not for several goroutines at once.
type typist struct {
	face   font.Face
	size   float64 // pixels per em
	glyphs map[string]*block
}

// block is a set line of type: coverage with a margin for the halo.
type block struct {
	w, h    int // of the bitmaps
	ink     []uint8
	halo    []uint8
	advance float64 // width of the type without margins
	ascent  int     // row of the base line
	margin  int
}

func newTypist(size float64) *typist {
	face, err := opentype.NewFace(parsedFont(), &opentype.FaceOptions{Size: size, DPI: 72, Hinting: font.HintingNone})
	if err != nil {
		panic("render: the embedded typeface: " + err.Error())
	}
	return &typist{face: face, size: size, glyphs: map[string]*block{}}
}

// set returns the line of type, from the cache if it has been set before.
func (t *typist) set(text string) *block {
	if b := t.glyphs[text]; b != nil {
		return b
	}
	if len(t.glyphs) > 500 { // tick labels of changing ranges
		clear(t.glyphs)
	}
	advance := font.MeasureString(t.face, text)
	margin := int(math.Ceil(t.size*0.16)) + 1
	metrics := t.face.Metrics()
	b := &block{advance: float64(advance) / 64, ascent: margin + metrics.Ascent.Ceil(), margin: margin}
	b.w, b.h = advance.Ceil()+2*margin, b.ascent+metrics.Descent.Ceil()+margin
	mask := image.NewAlpha(image.Rect(0, 0, b.w, b.h))
	d := font.Drawer{Dst: mask, Src: image.Opaque, Face: t.face, Dot: fixed.P(margin, b.ascent)}
	d.DrawString(text)
	b.ink = mask.Pix
	b.halo = spread(b.ink, b.w, b.h, t.size*0.16)
	t.glyphs[text] = b
	return b
}

// spread widens coverage by a disc of the given radius with a soft rim.
func spread(ink []uint8, w, h int, radius float64) []uint8 {
	out := make([]uint8, len(ink))
	n := int(math.Ceil(radius))
	for dy := -n; dy <= n; dy++ {
		for dx := -n; dx <= n; dx++ {
			share := uint32(256 * min(max(radius+0.5-math.Sqrt(float64(dx*dx+dy*dy)), 0), 1))
			if share == 0 {
				continue
			}
			for y := max(0, -dy); y < min(h, h-dy); y++ {
				for x := max(0, -dx); x < min(w, w-dx); x++ {
					i := (y+dy)*w + x + dx
					out[i] = max(out[i], uint8(uint32(ink[y*w+x])*share>>8))
				}
			}
		}
	}
	return out
}

// anchor says which point of a line of type is given: 0 its left end, 0.5 its middle, 1 its right end.
type anchor float64

// text draws a line of type with its base line at y.
func (c *canvas) text(t *typist, text string, x, y float64, a anchor, ink, halo rgb, alpha float64) {
	b := t.set(text)
	left := int(math.Floor(x-float64(b.advance*float64(a))+0.5)) - b.margin
	top := int(math.Floor(y+0.5)) - b.ascent
	k := uint32(min(max(alpha, 0), 1) * 256)
	for j := max(0, -top); j < min(b.h, c.h-top); j++ {
		for i := max(0, -left); i < min(b.w, c.w-left); i++ {
			at, from := (top+j)*c.w+left+i, j*b.w+i
			c.blend(at, halo, uint32(b.halo[from])*k>>8*220>>8)
			c.blend(at, ink, uint32(b.ink[from])*k>>8)
		}
	}
}
