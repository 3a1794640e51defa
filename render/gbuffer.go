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

// surfaceRow is one straight kernel, without calls in its loop: it runs once per pixel, and in the browser a call (min
// and max of floats are calls there) costs as much as ten products.
func (p *plate) surfaceRow(b *body, l *level, lens *Lens, look *look, row int) {
	lit := lights(b, lens)
	base := row * p.w
	inverseFocal := 1 / lens.focal
	slopeY := float64((float64(p.top+row) + 0.5 - lens.cy) * inverseFocal)
	// Below the lowest floor tau is an exact zero (field.ZeroFraction).
	lowest := float64(1e-12 * b.field.MaxTau)
	fadeScale := 1 / max(look.floor, lowest, math.SmallestNonzeroFloat64)
	cell := float64(cellPixels * inverseFocal * look.pixels)
	rx, ry, rz := lens.right.X, lens.right.Y, lens.right.Z
	ux, uy, uz := lens.up.X, lens.up.Y, lens.up.Z
	fx, fy, fz := lens.forward.X, lens.forward.Y, lens.forward.Z
	hits := p.hits[base:][:p.w]
	dirs, noise := p.dirs[base:][:p.w], p.noise[base:][:p.w]
	fade, shade := p.fade[base:][:p.w], p.shade[base:][:p.w]
	for x := range hits {
		h := &hits[x]
		if h.tri == noHit || h.tri < 0 {
			dirs[x], noise[x], fade[x], shade[x] = direction{}, 0, 0, 0
			if h.tri < 0 {
				shade[x] = backShade
			}
			continue
		}
		tri := &l.tris[h.tri]
		b1, b2 := float64(h.u), float64(h.v)
		b0 := 1 - b1 - b2
		p0, p1, p2 := &b.pos[tri[0]], &b.pos[tri[1]], &b.pos[tri[2]]
		// Light.
		n0, n1, n2 := &b.normal[tri[0]], &b.normal[tri[1]], &b.normal[tri[2]]
		nx := float64(b0*float64(n0[0])) + float64(b1*float64(n1[0])) + float64(b2*float64(n2[0]))
		ny := float64(b0*float64(n0[1])) + float64(b1*float64(n1[1])) + float64(b2*float64(n2[1]))
		nz := float64(b0*float64(n0[2])) + float64(b1*float64(n1[2])) + float64(b2*float64(n2[2]))
		if n0[3]+n1[3]+n2[3] != 0 {
			nx, ny, nz = b.creased(tri, b0, b1, b2)
		}
		inverse := 1 / math.Sqrt(float64(nx*nx)+float64(ny*ny)+float64(nz*nz)+1e-30)
		facing := float64((float64(nx*lit.key.X) + float64(ny*lit.key.Y) + float64(nz*lit.key.Z)) * inverse)
		upward := float64((float64(nx*lit.sky.X) + float64(ny*lit.sky.Y) + float64(nz*lit.sky.Z)) * inverse)
		k := ambientLight + skyLight/2 + float64(skyLight/2*upward)
		if facing > 0 {
			k += float64(keyLight * facing)
		}
		shade[x] = uint8(min(int32(float64(255*k)+0.5), 255))
		// Direction.
		c := &l.tau[h.tri]
		tx := float64(b0*float64(c[0])) + float64(b1*float64(c[3])) + float64(b2*float64(c[6]))
		ty := float64(b0*float64(c[1])) + float64(b1*float64(c[4])) + float64(b2*float64(c[7]))
		tz := float64(b0*float64(c[2])) + float64(b1*float64(c[5])) + float64(b2*float64(c[8]))
		dx := float64(tx*rx) + float64(ty*ry) + float64(tz*rz)
		dy := -(float64(tx*ux) + float64(ty*uy) + float64(tz*uz))
		wanted := cell
		if !lens.ortho {
			f := float64(tx*fx) + float64(ty*fy) + float64(tz*fz)
			dx -= float64((float64(x) + 0.5 - lens.cx) * inverseFocal * f)
			dy -= float64(slopeY * f)
			wanted = cell / float64(h.near)
		}
		length := math.Sqrt(float64(dx*dx) + float64(dy*dy))
		tau := math.Sqrt(float64(tx*tx) + float64(ty*ty) + float64(tz*tz))
		if !(tau > lowest) || length == 0 {
			dirs[x], noise[x], fade[x] = direction{}, 0, 0
			continue
		}
		inverse = 1 / length
		dirs[x] = direction{float32(dx * inverse), float32(dy * inverse)}
		w := float64(tau*fadeScale) - 0.5 // no texture at half the floor, all of it at one and a half times
		switch {
		case w >= 1:
			fade[x] = 255
		case w <= 0:
			fade[x] = 0
		default:
			fade[x] = uint8(float64(255*w*w*(3-float64(2*w))) + 0.5)
		}
		noise[x] = solidNoise(
			float64(b0*p0.X)+float64(b1*p1.X)+float64(b2*p2.X),
			float64(b0*p0.Y)+float64(b1*p1.Y)+float64(b2*p2.Y),
			float64(b0*p0.Z)+float64(b1*p1.Z)+float64(b2*p2.Z), wanted)
	}
}

// creased returns the normal at a place of a triangle that touches a sharp edge: corners on the edge have the
// triangle's.
func (b *body) creased(tri *[3]int32, b0, b1, b2 float64) (x, y, z float64) {
	flat := single(b.pos[tri[1]].Sub(b.pos[tri[0]]).Cross(b.pos[tri[2]].Sub(b.pos[tri[0]])).Unit())
	for k, w := range [3]float64{b0, b1, b2} {
		n := [3]float32(b.normal[tri[k]][:3])
		if b.normal[tri[k]][3] != 0 {
			n = flat
		}
		x += float64(w * float64(n[0]))
		y += float64(w * float64(n[1]))
		z += float64(w * float64(n[2]))
	}
	return x, y, z
}

// stepRow marks where the surface jumps between a pixel of the row and its neighbours to the right and below. near is
// linear over a flat surface, so that a jump stands out against the differences on both sides of it.
func (p *plate) stepRow(lens *Lens, row int) {
	w, rows := p.w, p.bottom-p.top
	line := func(y int) []hit { return p.hits[min(max(y, 0), rows-1)*w:][:w] }
	here, above, below, after := line(row), line(row-1), line(row+1), line(row+2)
	steps := p.steps[row*w:][:w]
	least := float32(stepPixels / lens.focal)
	for x := range here {
		h := &here[x]
		if h.tri == noHit {
			steps[x] = stepRight | stepDown
			continue
		}
		limit := least
		if !lens.ortho {
			limit = float32(least * h.near)
		}
		var s uint8
		if x+1 < w {
			g := &here[x+1]
			if d := g.near - h.near; d > limit || d < -limit || g.tri^h.tri < 0 {
				if jumps(&here[max(x-1, 0)], h, g, &here[min(x+2, w-1)]) {
					s |= stepRight
				}
			}
		}
		g := &below[x]
		if d := g.near - h.near; d > limit || d < -limit || g.tri^h.tri < 0 {
			if jumps(&above[x], h, g, &after[x]) {
				s |= stepDown
			}
		}
		steps[x] = s
	}
}

// jumps tells whether the surface jumps between a and b, whose difference is large; before and after lie on either
// side.
func jumps(before, a, b, after *hit) bool {
	if b.tri == noHit || (a.tri < 0) != (b.tri < 0) {
		return true
	}
	slope := 0.0
	if before.tri != noHit {
		slope = math.Abs(float64(a.near) - float64(before.near))
	}
	if after.tri != noHit {
		slope = max(slope, math.Abs(float64(after.near)-float64(b.near)))
	}
	return math.Abs(float64(b.near)-float64(a.near)) > stepSlopes*slope
}

// A jump is deeper than stepPixels pixels are wide, and deeper than stepSlopes times the difference to the neighbour on
// either side: a surface seen edge on falls away evenly.
const (
	stepPixels = 3
	stepSlopes = 2.5
)
