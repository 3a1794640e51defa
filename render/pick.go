package render

import (
	"shearprint/field"
)

// Pick returns the place on the surface under pixel x, y of the last frame; false where there is none. The places that
// a coarse moving frame shows are moved to the surface itself.
func (r *Renderer) Pick(x, y float64) (field.Loc, bool) {
	p := &r.plate
	k := r.frame.Layers.Factor
	if r.body == nil || k == 0 || !(x >= 0 && y >= 0) {
		return field.Loc{}, false
	}
	i, j := int(x)/k, int(y)/k-p.top
	if i >= p.w || j < 0 || j >= p.bottom-p.top {
		return field.Loc{}, false
	}
	h := p.hits[j*p.w+i]
	if h.tri == noHit {
		return field.Loc{}, false
	}
	if h.tri < 0 {
		h.tri = ^h.tri
	}
	u, v := min(max(float64(h.u), 0), 1), min(max(float64(h.v), 0), 1)
	if u+v > 1 {
		u, v = u/(u+v), v/(u+v)
	}
	loc := field.Loc{Tri: h.tri, Bary: [3]float64{1 - u - v, u, v}}
	if !r.kept.raster.coarse {
		return loc, true
	}
	f := r.body.field
	tri := r.body.coarse.tris[h.tri]
	at := f.Points[tri[0]].Scale(loc.Bary[0]).AddScaled(u, f.Points[tri[1]]).AddScaled(v, f.Points[tri[2]])
	loc, _ = f.Nearest(at)
	return loc, true
}

// Lens returns the projection of the last frame.
func (r *Renderer) Lens() Lens { return r.lens }
