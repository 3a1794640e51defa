package render

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// sight tells what of the surface can be seen in the last frame.
type sight struct {
	p      *plate
	lens   Lens // of the frame, in field coordinates
	factor float64
	zero   float64
	f      *field.Field
}

func (r *Renderer) sight(factor float64) *sight {
	l := r.body.lens(r.lens)
	return &sight{p: &r.plate, lens: r.lens, factor: factor, zero: zeroOf(&l), f: r.body.field}
}

// see returns where a place of the surface appears on the frame, and how much of it can be seen: 1 in plain view, 0
// behind something or off the frame. inside tells that it is on the frame, seen or not.
func (s *sight) see(p r3.Vec) (x, y, seen float64, inside bool) {
	x, y, z := s.lens.Project(p)
	seen, inside = s.seeAt(x, y, z)
	return x, y, seen, inside
}

// seeAt is see for a place that appears at x, y at the distance z.
func (s *sight) seeAt(x, y, z float64) (seen float64, inside bool) {
	if !s.lens.ortho && z <= 0 {
		return 0, false
	}
	i, j := int(math.Floor(x/s.factor)), int(math.Floor(y/s.factor))-s.p.top
	if i < 0 || j < 0 || i >= s.p.w || j >= s.p.bottom-s.p.top {
		return 0, false
	}
	// The farthest surface among the pixels around: a place on the surface is no farther than that, give or take what the
	// surface falls away within a pixel.
	pixel := float64(s.lens.Pixel(z) * s.factor)
	farthest, nearest := math.Inf(-1), math.Inf(1)
	for dj := max(j-1, 0); dj <= min(j+1, s.p.bottom-s.p.top-1); dj++ {
		for di := max(i-1, 0); di <= min(i+1, s.p.w-1); di++ {
			h := &s.p.hits[dj*s.p.w+di]
			if h.tri == noHit {
				farthest = math.Inf(1)
				continue
			}
			d := s.zero - float64(h.near)
			if !s.lens.ortho {
				d = 1 / float64(h.near)
			}
			farthest, nearest = max(farthest, d), min(nearest, d)
		}
	}
	if math.IsInf(farthest, 1) { // beside a silhouette
		farthest = nearest + float64(6*pixel)
		if math.IsInf(nearest, 1) {
			return 1, true
		}
	}
	behind := (z - farthest) / pixel
	return min(max(3-behind, 0), 1), true
}

// seeLoc is see for a place given as such; a place whose surface faces away is not seen.
func (s *sight) seeLoc(l field.Loc) (x, y, seen float64, inside bool) {
	p := s.f.Position(l)
	x, y, seen, inside = s.see(p)
	if inside && s.away(l.Tri, p) {
		seen = 0
	}
	return x, y, seen, inside
}

// away tells whether triangle t shows its back.
func (s *sight) away(t int32, p r3.Vec) bool {
	d := s.lens.forward
	if !s.lens.ortho {
		d = p.Sub(s.lens.eye)
	}
	return s.f.Corner(t).Normal().Dot(d) > 0
}

// curve returns the way along the places on the frame, in steps of at least a pixel and a half, with opacity by sight.
func (s *sight) curve(locs []field.Loc, width float64) []vertex {
	out := make([]vertex, 0, 64)
	least := float64(1.5 * s.factor)
	for i, l := range locs {
		p := s.f.Position(l)
		x, y, z := s.lens.Project(p)
		if n := len(out); n > 0 && i+1 < len(locs) && math.Abs(out[n-1].x-x)+math.Abs(out[n-1].y-y) < least {
			continue
		}
		seen, inside := s.seeAt(x, y, z)
		if inside && seen > 0 && s.away(l.Tri, p) {
			seen = 0
		}
		out = append(out, vertex{x, y, seen, width})
	}
	return out
}
