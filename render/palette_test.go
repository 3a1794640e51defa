package render

import (
	"math"
	"testing"
)

func decode(c rgb) linear {
	var l linear
	for i, x := range c {
		v := float64(x) / 255
		if v <= 0.04045 {
			l[i] = v / 12.92
		} else {
			l[i] = math.Pow((v+0.055)/1.055, 2.4)
		}
	}
	return l
}

// Values of OKLab for the primaries: recomputed with the published matrices (Ottosson 2020, matrices of 2021-01-25).
func TestOKLab(t *testing.T) {
	for _, c := range []struct {
		in   linear
		want lab
	}{
		{linear{1, 0, 0}, lab{.6279553606, .2248630611, .1258462985}},
		{linear{0, 1, 0}, lab{.8664396115, -.2338875742, .1794984799}},
		{linear{0, 0, 1}, lab{.4520137184, -.0324569842, -.3115281477}},
		{decode(rgb{128, 128, 128}), lab{.5998708, 0, 0}},
	} {
		got := c.in.toLab()
		if math.Abs(got.l-c.want.l)+math.Abs(got.a-c.want.a)+math.Abs(got.b-c.want.b) > 2e-7 {
			t.Errorf("%v: %v, want %v", c.in, got, c.want)
		}
		back := got.toLinear()
		for i := range back {
			if math.Abs(back[i]-c.in[i]) > 1e-6 {
				t.Errorf("%v comes back as %v", c.in, back)
			}
		}
	}
}

func TestEncodeAgreesWithThePower(t *testing.T) {
	for i := range 256 {
		if got := encode(decode(rgb{uint8(i), 0, 0})[0]); got != uint8(i) {
			t.Errorf("%d comes back as %d", i, got)
		}
	}
}

func TestLightnessOfPalettesIsMonotone(t *testing.T) {
	for name, s := range map[string]spine{"cool": coolArm, "warm": warmArm, "depth": depth, "grey": grey} {
		last := 2.0
		for i := range 101 {
			c := s.at(float64(i) / 100)
			if got := decode(c.rgb()).toLab(); math.Abs(got.l-c.l) > 0.006 {
				t.Errorf("%s at %d %%: shown with lightness %.3f, wanted %.3f", name, i, got.l, c.l)
			}
			if c.l >= last {
				t.Errorf("%s at %d %%: lightness does not fall", name, i)
			}
			last = c.l
		}
		if span := s.at(0).l - s.at(1).l; span < 0.45 {
			t.Errorf("%s spans only %.2f of lightness", name, span)
		}
	}
}

// The steps of a palette look alike: no step of lightness and chroma is more than twice another of the same arm.
func TestStepsOfPalettesAreEven(t *testing.T) {
	for name, s := range map[string]spine{"cool": coolArm, "warm": warmArm, "depth": depth} {
		least, most := math.Inf(1), 0.0
		for i := range 20 {
			d := apart(s.at(float64(i)/20), s.at(float64(i+1)/20))
			least, most = min(least, d), max(most, d)
		}
		if most > 2*least {
			t.Errorf("%s: steps from %.4f to %.4f", name, least, most)
		}
	}
}

func TestDivergingPaletteIsSymmetricAboutZero(t *testing.T) {
	p := Light.palette(Cp)
	for _, x := range []float64{0.1, 0.35, 0.8, 1} {
		a, b := decode(p.color(-x, -1, 1)).toLab(), decode(p.color(x, -1, 1)).toLab()
		if math.Abs(a.l-b.l) > 0.008 {
			t.Errorf("lightness at +-%g: %.3f and %.3f", x, a.l, b.l)
		}
	}
	// Unequal limits keep 0 in the middle colour, and equal distances equally light.
	middle := p.color(0, -1, 1)
	for _, limits := range [][2]float64{{-2, 1}, {-0.5, 3}, {-1, 1}} {
		if got := p.color(0, limits[0], limits[1]); got != middle {
			t.Errorf("0 within %v is %v, want %v", limits, got, middle)
		}
		a := decode(p.color(-0.4, limits[0], limits[1])).toLab()
		b := decode(p.color(0.4, limits[0], limits[1])).toLab()
		if math.Abs(a.l-b.l) > 0.008 {
			t.Errorf("within %v lightness at +-0.4: %.3f and %.3f", limits, a.l, b.l)
		}
	}
	if c := decode(middle).toLab(); math.Abs(c.a)+math.Abs(c.b) > 0.005 {
		t.Errorf("the middle has a hue: %v", c)
	}
}

// Matrices of Machado, Oliveira and Fernandes 2009, severity 1, on linear RGB.
var deficiencies = map[string][3][3]float64{
	"protan": {{.152286, 1.052583, -.204868}, {.114503, .786281, .099216}, {-.003882, -.048116, 1.051998}},
	"deutan": {{.367322, .860646, -.227968}, {.280085, .672501, .047413}, {-.011820, .042940, .968881}},
	"tritan": {{1.255528, -.076749, -.178779}, {-.078411, .930809, .147602}, {.004733, .691367, .303900}},
}

func seenBy(m [3][3]float64, c rgb) lab {
	l := linear(times(&m, decode(c)))
	for i := range l {
		l[i] = min(max(l[i], 0), 1)
	}
	return l.toLab()
}

func apart(a, b lab) float64 {
	return math.Sqrt((a.l-b.l)*(a.l-b.l) + (a.a-b.a)*(a.a-b.a) + (a.b-b.b)*(a.b-b.b))
}

// A difference of 0.02 in OKLab is just noticeable (Ottosson's scale: 1 is black to white); five of them are told apart
// without a comparison side by side.
func TestPalettesServeAllColourVisions(t *testing.T) {
	p := Light.palette(Cp)
	for name, m := range deficiencies {
		// The sign of cp can be told from a third of the range on.
		for _, x := range []float64{0.35, 0.6, 0.8, 1} {
			if d := apart(seenBy(m, p.color(-x, -1, 1)), seenBy(m, p.color(x, -1, 1))); d < 0.1 {
				t.Errorf("%s: cp = +-%g are %.3f apart", name, x, d)
			}
		}
		// Fifths of the sequential palette can be told.
		for i := range 5 {
			a, b := depth.at(float64(i)/5).rgb(), depth.at(float64(i+1)/5).rgb()
			if d := apart(seenBy(m, a), seenBy(m, b)); d < 0.07 {
				t.Errorf("%s: fifths %d and %d of the sequential palette are %.3f apart", name, i, i+1, d)
			}
		}
	}
}

// Contrast by WCAG 2.2: type 4.5 against what is around it, lines 3 against their halo.
func TestThemesAreLegible(t *testing.T) {
	luminance := func(c rgb) float64 { l := decode(c); return 0.2126*l[0] + 0.7152*l[1] + 0.0722*l[2] }
	ratio := func(a, b rgb) float64 {
		x, y := luminance(a), luminance(b)
		return (max(x, y) + 0.05) / (min(x, y) + 0.05)
	}
	// Published ratios, to check the formula itself.
	if r := ratio(rgb{0x76, 0x76, 0x76}, rgb{255, 255, 255}); math.Abs(r-4.542225) > 1e-5 {
		t.Fatalf("#767676 on white: %.6f, want 4.542225", r)
	}
	for theme := Light; theme <= Print; theme++ {
		c := theme.colors()
		for _, pair := range []struct {
			what string
			a, b rgb
			want float64
		}{
			{"type on the background", c.ink, c.back, 4.5}, {"type on its halo", c.ink, c.halo, 4.5},
			{"separation on its halo", c.separation, c.halo, 3}, {"attachment on its halo", c.attachment, c.halo, 3},
			{"lines on their halo", c.line, c.halo, 3}, {"streamlines on their halo", c.stream, c.halo, 3},
		} {
			if r := ratio(pair.a, pair.b); r < pair.want {
				t.Errorf("%s: %s has contrast %.2f, want %g", theme, pair.what, r, pair.want)
			}
		}
	}
}

// Bands have a round width, and 0 is the border between two of them.
func TestBandsAreRound(t *testing.T) {
	p := Light.palette(Cp)
	for _, c := range []struct {
		lo, hi float64
		bands  int
		step   float64
	}{{-1, 1, 10, 0.2}, {-1.5, 0.9, 12, 0.2}, {-0.5, 0.7, 30, 0.05}, {-3, 5, 1, 10}} {
		tab := p.table(c.lo, c.hi, c.bands, rgb{1, 2, 3})
		if tab[0] != (rgb{1, 2, 3}) {
			t.Errorf("entry 0 is %v", tab[0])
		}
		for i := 1; i < 255; i++ {
			x, y := c.lo+float64(i-1)/254*(c.hi-c.lo), c.lo+float64(i)/254*(c.hi-c.lo)
			if border := math.Floor(x/c.step) != math.Floor(y/c.step); border != (tab[i] != tab[i+1]) {
				// Bands beyond the limits have the colour of the end, and far ones may round to the same colour.
				if !border {
					t.Errorf("%g..%g: the colour changes between %g and %g", c.lo, c.hi, x, y)
				}
			}
		}
		zero := 1 + int(-c.lo/(c.hi-c.lo)*254)
		if tab[max(zero-1, 1)] == tab[min(zero+2, 255)] {
			t.Errorf("%g..%g: no border at 0", c.lo, c.hi)
		}
	}
}

func TestTicksAreRoundAndWithin(t *testing.T) {
	for _, c := range []struct {
		lo, hi float64
		count  int
		want   []string
	}{
		{-1.53, 1.04, 6, []string{"−1.5", "−1.0", "−0.5", "0", "0.5", "1.0"}},
		{0, 1, 5, []string{"0", "0.2", "0.4", "0.6", "0.8", "1.0"}},
		{101000, 102000, 2, []string{"1.01e+05", "1.015e+05", "1.02e+05"}},
		{0.0002, 0.0009, 4, []string{"0.0002", "0.0004", "0.0006", "0.0008"}},
	} {
		values, step := ticks(c.lo, c.hi, c.count)
		var got []string
		for _, v := range values {
			got = append(got, tickText(v, step))
		}
		if len(got) != len(c.want) {
			t.Errorf("%g..%g: %q, want %q", c.lo, c.hi, got, c.want)
			continue
		}
		for i := range got {
			if got[i] != c.want[i] {
				t.Errorf("%g..%g: %q, want %q", c.lo, c.hi, got, c.want)
				break
			}
		}
	}
}

func TestLimits(t *testing.T) {
	values := make([]float64, 1001)
	for i := range values {
		values[i] = float64(i)/1000*4 - 1 // -1 to 3
	}
	for _, c := range []struct {
		r      Range
		lo, hi float64
	}{
		{Range{Span: ByData}, -1, 3},
		{Range{Span: ByShare, Share: 0.1}, -0.6, 2.6},
		{Range{Span: Symmetric}, -3, 3},
		{Range{Span: Fixed, Min: -2, Max: 0.5}, -2, 0.5},
		{Range{Span: Fixed, Min: 2, Max: 2}, -1, 3},
	} {
		if lo, hi := c.r.limits(values); math.Abs(lo-c.lo)+math.Abs(hi-c.hi) > 1e-9 {
			t.Errorf("%+v: %g..%g, want %g..%g", c.r, lo, hi, c.lo, c.hi)
		}
	}
	for _, odd := range [][]float64{nil, {3, 3, 3}, {math.NaN()}, {math.Inf(1), 1}, {0}} {
		if lo, hi := (Range{}).limits(odd); !(lo < hi) || math.IsInf(hi-lo, 0) {
			t.Errorf("%v: limits %g..%g", odd, lo, hi)
		}
	}
}
