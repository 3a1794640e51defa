package render

import (
	"math"

	"shearprint/field/r3"
)

// stop is a colour of a palette's spine in OKLab's polar form: lightness, chroma, hue [degrees].
type stop struct{ l, c, h float64 }

// spine is a palette: a curve through OKLab along evenly spaced stops, with evenly falling lightness.
type spine []stop

// The palettes are our own. Diverging: a cool arm for negative values (suction) and a warm arm for positive ones, equal
// in lightness at equal distance from the middle; petrol against ochre and umber stays apart under all three deficiencies
// of colour vision. Sequential: from straw through moss to a deep sea green. Print: grey, since a copier keeps only
// lightness.
var (
	coolArm = spine{{.94, 0, 193}, {.82, .07, 195}, {.70, .098, 200}, {.565, .098, 212}, {.43, .092, 232}}
	warmArm = spine{{.94, 0, 85}, {.82, .10, 82}, {.70, .135, 70}, {.565, .132, 55}, {.43, .11, 42}}
	depth   = spine{{.955, .05, 98}, {.86, .095, 112}, {.75, .11, 130}, {.63, .105, 147}, {.51, .088, 163},
		{.38, .068, 190}}
	grey = spine{{.98, 0, 0}, {.50, 0, 0}}
)

// at returns the colour at t in [0, 1] along the spine.
func (s spine) at(t float64) lab {
	t = float64(min(max(t, 0), 1) * float64(len(s)-1))
	i := min(int(t), len(s)-2)
	t -= float64(i)
	mix := func(a, b float64) float64 { return a + float64(t*(b-a)) }
	a, b := s[i], s[i+1]
	sin, cos := r3.SinCos(mix(a.h, b.h) * math.Pi / 180)
	c := mix(a.c, b.c)
	return lab{mix(a.l, b.l), c * cos, c * sin}
}

// kind of palette for a quantity and theme.
type palette struct {
	negative, positive spine // positive alone for a sequential palette
}

func (t Theme) palette(q Quantity) palette {
	switch {
	case t == Print:
		return palette{positive: grey}
	case q == Cp:
		return palette{negative: coolArm, positive: warmArm}
	default:
		return palette{positive: depth}
	}
}

// diverges tells whether the palette has a middle, which stands for the value 0.
func (p palette) diverges() bool { return p.negative != nil }

// color returns the colour of value x within limits lo..hi. On a diverging palette 0 has the middle colour and equal
// distances from 0 have equal lightness, whatever the limits.
func (p palette) color(x, lo, hi float64) rgb {
	if p.diverges() {
		t := x / max(math.Abs(lo), math.Abs(hi), 1e-300)
		if t < 0 {
			return p.negative.at(-t).rgb()
		}
		if t == 0 {
			return lab{l: p.positive[0].l}.rgb()
		}
		return p.positive.at(t).rgb()
	}
	return p.positive.at((x - lo) / max(hi-lo, 1e-300)).rgb()
}

// table is a palette ready for mixing: entry 0 is for the surface without a value, 1..255 are lo..hi.
type table [256]rgb

// table returns the colours between the limits; if bands > 0 in about so many steps of a round width, of which one
// begins at 0.
func (p palette) table(lo, hi float64, bands int, none rgb) *table {
	var t table
	t[0] = none
	for i := 1; i < 256; i++ {
		x := lo + float64(float64(i-1)/254*(hi-lo))
		if bands > 0 {
			step := niceStep((hi - lo) / float64(bands))
			x = float64((math.Floor(x/step) + 0.5) * step)
		}
		t[i] = p.color(x, lo, hi)
	}
	return &t
}

// Theme is a set of colours for a purpose.
type Theme uint8

// The themes: Light for screens and paper, Dark for screens, Print for black-and-white printers and copiers.
const (
	Light Theme = iota
	Dark
	Print
)

// String returns the theme's name.
func (t Theme) String() string { return [...]string{"light", "dark", "print"}[min(t, Print)] }

// colors of a theme beside its palette.
type colors struct {
	back, ink, halo rgb // background, type and lines, what is around them
	none            rgb // surface without a value
	separation      rgb
	attachment      rgb
	line            rgb // neutral lines
	stream          rgb // streamlines
	edge            rgb // outline and creases of the body
	isobar          rgb
}

var themeColors = [...]colors{
	Light: {back: rgb{250, 250, 248}, ink: rgb{24, 28, 34}, halo: rgb{255, 255, 255}, none: rgb{205, 207, 208},
		separation: rgb{122, 12, 60}, attachment: rgb{0, 84, 66}, line: rgb{52, 56, 64}, stream: rgb{30, 34, 44},
		edge: rgb{40, 44, 50}, isobar: rgb{20, 22, 28}},
	Dark: {back: rgb{21, 24, 29}, ink: rgb{236, 238, 240}, halo: rgb{12, 14, 18}, none: rgb{120, 124, 130},
		separation: rgb{255, 128, 166}, attachment: rgb{120, 240, 186}, line: rgb{214, 218, 224}, stream: rgb{240, 242, 245},
		edge: rgb{10, 11, 13}, isobar: rgb{20, 22, 28}},
	Print: {back: rgb{255, 255, 255}, ink: rgb{0, 0, 0}, halo: rgb{255, 255, 255}, none: rgb{228, 228, 228},
		separation: rgb{0, 0, 0}, attachment: rgb{0, 0, 0}, line: rgb{60, 60, 60}, stream: rgb{0, 0, 0},
		edge: rgb{60, 60, 60}, isobar: rgb{0, 0, 0}},
}

func (t Theme) colors() *colors { return &themeColors[min(t, Print)] }
