package render

import (
	"context"
	"math"
	"slices"

	"shearprint/field"
)

// Quantity is a scalar that colours the surface.
type Quantity uint8

// The quantities. Auto is cp, or p where the run has no cp, or |tau| where it has neither.
const (
	Auto Quantity = iota
	Cp
	Pressure
	TauSize
	Plain  // no scalar: one colour
	Basins // Scene.Regions, a colour each; neighbours may have the same when there are very many
)

// String returns the quantity's symbol.
func (q Quantity) String() string {
	return [...]string{"auto", "cp", "p", "|tau|", "plain", "basins"}[min(q, Basins)]
}

// of returns the quantity that is drawn: Auto resolved, and what the run does not have replaced by what it has.
func (q Quantity) of(f *field.Field) Quantity {
	if (q == Auto || q == Cp) && f.Cp != nil {
		return Cp
	}
	if (q == Auto || q == Pressure || q == Cp) && f.P != nil {
		return Pressure
	}
	if q >= Plain {
		return q
	}
	if q == Pressure && f.Cp != nil {
		return Cp
	}
	return TauSize
}

// unit returns the quantity's unit; "" where there is none or nobody told.
func (q Quantity) unit(f *field.Field) string {
	u := ""
	switch q {
	case Pressure:
		u = f.Units.P
	case TauSize:
		u = f.Units.Tau
	}
	if u == "1" {
		return ""
	}
	return u
}

// values returns the quantity at the vertices; nil for none.
func (q Quantity) values(f *field.Field) []float64 {
	switch q {
	case Cp:
		return f.Cp
	case Pressure:
		return f.P
	case TauSize:
		x := make([]float64, len(f.Points))
		for v := range x {
			x[v] = f.Size(int32(v))
		}
		return x
	}
	return nil
}

// Span is a way to choose the limits of the colours.
type Span uint8

// The spans. ByAuto leaves out the highest and lowest percent, so that a few extreme vertices do not wash out the rest;
// ByData takes all; ByShare leaves out Range.Share on either side; Symmetric is ByData with 0 in the middle; Fixed
// takes Range.Min and Max.
const (
	ByAuto Span = iota
	ByData
	ByShare
	Symmetric
	Fixed
)

// Range says which values the palette covers; what lies beyond has the colour of the end.
type Range struct {
	Span     Span
	Share    float64 // of ByShare: 0.02 leaves out two percent of the vertices at each end
	Min, Max float64 // of Fixed
}

// autoShare is the share of vertices that ByAuto leaves out at each end.
const autoShare = 0.005

// limits returns the ends of the colours for the values; always finite with lo < hi.
func (r Range) limits(values []float64) (lo, hi float64) {
	sorted := make([]float64, 0, len(values))
	for _, x := range values {
		if x-x == 0 {
			sorted = append(sorted, x)
		}
	}
	if r.Span == Fixed && r.Min < r.Max && r.Max-r.Min < math.MaxFloat64 {
		return r.Min, r.Max
	}
	if len(sorted) == 0 {
		return 0, 1
	}
	slices.Sort(sorted)
	share := 0.0
	switch r.Span {
	case ByAuto:
		share = autoShare
	case ByShare:
		share = min(max(r.Share, 0), 0.49)
	}
	out := int(share * float64(len(sorted)))
	lo, hi = sorted[out], sorted[len(sorted)-1-out]
	if r.Span == Symmetric {
		hi = max(math.Abs(lo), math.Abs(hi))
		lo = -hi
	}
	if r.Span == ByAuto && lo > 0 && lo < hi/4 { // almost from nought: show nought
		lo = 0
	}
	if !(hi-lo > 1e-12*max(math.Abs(lo), math.Abs(hi))) { // a constant
		pad := max(math.Abs(lo)*0.5, 0.5)
		lo, hi = lo-pad, hi+pad
	}
	return lo, hi
}

// scalars fills the scalar plane with the values at the vertices, interpolated; numbers of regions are taken from the
// nearest corner instead.
func (p *plate) scalars(ctx context.Context, l *level, values []float64, nearest bool) error {
	none := float32(math.NaN())
	return bands(ctx, 0, p.bottom-p.top, 32, func(from, to int) {
		for i := from * p.w; i < to*p.w; i++ {
			h := &p.hits[i]
			if h.tri == noHit || h.tri < 0 || values == nil {
				p.scalar[i] = none
				continue
			}
			t := &l.tris[h.tri]
			u, v := float64(h.u), float64(h.v)
			if nearest {
				p.scalar[i] = float32(values[t[largest(1-u-v, u, v)]])
				continue
			}
			p.scalar[i] = float32(float64((1-u-v)*values[t[0]]) + float64(u*values[t[1]]) + float64(v*values[t[2]]))
		}
	})
}

func largest(a, b, c float64) int {
	switch {
	case a >= b && a >= c:
		return 0
	case b >= c:
		return 1
	}
	return 2
}
