package render

import (
	"context"
	"math"

	"shearprint/field/r3"
)

// The bits of plate.steps: the surface jumps away between a pixel and its neighbour to the right or below.
const (
	stepRight = 1 << iota
	stepDown
)

// light says how the surface is lit, in body coordinates.
type light struct {
	key, sky r3.Vec
}

// The parts of light: enough shade for the eye to read the shape, never so much that a palette's colour cannot be told.
// They add up to at most 1.
const (
	ambientLight = 0.60
	skyLight     = 0.12
	keyLight     = 0.28
)

// lights returns a key light over the viewer's left shoulder and a sky that brightens what faces up.
func lights(b *body, l *Lens) light {
	key := l.forward.Scale(-0.75).AddScaled(-0.42, l.right).AddScaled(0.52, l.up)
	return light{key: key.Unit(), sky: b.vector(vertical)}
}

func (s *light) shade(n r3.Vec) uint8 {
	k := ambientLight + float64(skyLight/2*(1+n.Dot(s.sky))) + float64(keyLight*max(n.Dot(s.key), 0))
	return uint8(255*min(k, 1) + 0.5)
}

// backShade dims the back of a surface against its front.
const backShade = 110

// surface goes over the hits of all rows: direction, noise, weight of the texture, light.
func (p *plate) surface(ctx context.Context, b *body, l *level, lens Lens, look look) error {
	return bands(ctx, 0, p.bottom-p.top, 16, func(from, to int) {
		for y := from; y < to; y++ {
			p.surfaceRow(b, l, &lens, &look, y)
			p.stepRow(&lens, y)
		}
	})
}

// look is what of a scene the surface pass depends on.
type look struct {
	floor  float64 // |tau| at which the texture has half its weight
	pixels float64 // pixels per point
}

func (p *plate) surfaceRow(b *body, l *level, lens *Lens, look *look, row int) {
	lit := lights(b, lens)
	zero := zeroOf(lens)
	base := row * p.w
	slopeY := (float64(p.top+row) + 0.5 - lens.cy) / lens.focal
	// Below the lowest floor tau is an exact zero (field.ZeroFraction).
	lowest := 1e-12 * b.field.MaxTau
	floor := max(look.floor, lowest)
	last := int32(noHit)
	var flat r3.Vec
	for x := range p.w {
		i := base + x
		h := &p.hits[i]
		if h.tri == noHit || h.tri < 0 {
			p.dirs[i], p.noise[i], p.fade[i], p.shade[i] = direction{}, 0, 0, 0
			if h.tri < 0 {
				p.shade[i] = backShade
			}
			continue
		}
		tri := &l.tris[h.tri]
		b1, b2 := float64(h.u), float64(h.v)
		b0 := 1 - b1 - b2
		p0, p1, p2 := &b.pos[tri[0]], &b.pos[tri[1]], &b.pos[tri[2]]
		z, px := zero-float64(h.near), 1/lens.focal
		slopeX := (float64(x) + 0.5 - lens.cx) / lens.focal
		if !lens.ortho {
			z = 1 / float64(h.near)
			px = z / lens.focal
		}
		// Light.
		if h.tri != last {
			last = h.tri
			flat = p1.Sub(*p0).Cross(p2.Sub(*p0)).Unit()
		}
		var n r3.Vec
		for k, w := range [3]float64{b0, b1, b2} {
			if v := tri[k]; b.smooth[v] {
				m := &b.normal[v]
				n.X += float64(w * float64(m[0]))
				n.Y += float64(w * float64(m[1]))
				n.Z += float64(w * float64(m[2]))
			} else {
				n.X += float64(w * flat.X)
				n.Y += float64(w * flat.Y)
				n.Z += float64(w * flat.Z)
			}
		}
		size := float64(n.X*n.X) + float64(n.Y*n.Y) + float64(n.Z*n.Z)
		p.shade[i] = lit.shade(n.Scale(1 / math.Sqrt(max(size, 1e-30))))
		// Direction.
		c := &l.tau[h.tri]
		tx := float64(b0*float64(c[0])) + float64(b1*float64(c[3])) + float64(b2*float64(c[6]))
		ty := float64(b0*float64(c[1])) + float64(b1*float64(c[4])) + float64(b2*float64(c[7]))
		tz := float64(b0*float64(c[2])) + float64(b1*float64(c[5])) + float64(b2*float64(c[8]))
		t := r3.Vec{X: tx, Y: ty, Z: tz}
		dx, dy := t.Dot(lens.right), -t.Dot(lens.up)
		if !lens.ortho {
			f := t.Dot(lens.forward)
			dx -= float64(slopeX * f)
			dy -= float64(slopeY * f)
		}
		length := math.Sqrt(float64(dx*dx) + float64(dy*dy))
		tau := math.Sqrt(float64(tx*tx) + float64(ty*ty) + float64(tz*tz))
		if !(tau > lowest) || length == 0 {
			p.dirs[i], p.noise[i], p.fade[i] = direction{}, 0, 0
			continue
		}
		p.dirs[i] = direction{float32(dx / length), float32(dy / length)}
		p.fade[i] = fadeOf(tau, floor)
		// Noise.
		p.noise[i] = solidNoise(
			float64(b0*p0.X)+float64(b1*p1.X)+float64(b2*p2.X),
			float64(b0*p0.Y)+float64(b1*p1.Y)+float64(b2*p2.Y),
			float64(b0*p0.Z)+float64(b1*p1.Z)+float64(b2*p2.Z), px*look.pixels)
	}
}

// fadeOf returns the texture's weight: none at half the floor, whole at one and a half times it.
func fadeOf(tau, floor float64) uint8 {
	s := min(max(tau/floor-0.5, 0), 1)
	return uint8(255*s*s*(3-2*s) + 0.5)
}

// stepRow marks where the surface jumps between a pixel of the row and its neighbours to the right and below. near is
// linear over a flat surface, so that a jump stands out against the differences on both sides of it.
func (p *plate) stepRow(lens *Lens, row int) {
	rows := p.bottom - p.top
	at := func(x, y int) *hit { return &p.hits[y*p.w+x] }
	jump := func(a, b, before, after *hit) bool {
		if a.tri == noHit || b.tri == noHit || (a.tri < 0) != (b.tri < 0) {
			return true
		}
		d := float64(b.near) - float64(a.near)
		if d < 0 {
			d = -d
		}
		least := stepPixels / lens.focal
		if !lens.ortho {
			least *= float64(max(a.near, b.near))
		}
		if d <= least {
			return false
		}
		slope := 0.0
		if before.tri != noHit {
			slope = math.Abs(float64(a.near) - float64(before.near))
		}
		if after.tri != noHit {
			slope = max(slope, math.Abs(float64(after.near)-float64(b.near)))
		}
		return d > stepSlopes*slope
	}
	for x := range p.w {
		var s uint8
		h := at(x, row)
		if h.tri == noHit {
			p.steps[row*p.w+x] = stepRight | stepDown
			continue
		}
		if x+1 < p.w && jump(h, at(x+1, row), at(max(x-1, 0), row), at(min(x+2, p.w-1), row)) {
			s |= stepRight
		}
		if row+1 < rows && jump(h, at(x, row+1), at(x, max(row-1, 0)), at(x, min(row+2, rows-1))) {
			s |= stepDown
		}
		p.steps[row*p.w+x] = s
	}
}

// A jump is deeper than stepPixels pixels are wide, and deeper than stepSlopes times the difference to the neighbour on
// either side: a surface seen edge on falls away evenly.
const (
	stepPixels = 3
	stepSlopes = 2.5
)
