package render

import (
	"math"

	"shearprint/field/r3"
)

// DefaultFov is the vertical angle of view [rad] of a perspective camera that does not tell its own: 30 degrees, about
// that of a 75 mm lens on 35 mm film, which shows a body without exaggerating its near end.
const DefaultFov = math.Pi / 6

// Camera looks from a point at a point. It is a plain value: the functions below return changed copies.
//
// In both projections the frame's height shows, in the plane through At across the view, the length
// 2 |From-At| tan(Fov/2); changing Ortho keeps the size of what is at At.
type Camera struct {
	From, At r3.Vec
	Up       r3.Vec  // a direction that appears upright; need not be perpendicular to the view
	Fov      float64 // vertical angle of view [rad]; 0 for DefaultFov
	Ortho    bool    // parallel projection
}

// vertical is the direction about which Orbit turns: the runs' bodies stand on the ground with z up.
var vertical = r3.Vec{Z: 1}

func (c Camera) fov() float64 {
	if c.Fov > 0 && c.Fov < 3 {
		return c.Fov
	}
	return DefaultFov
}

// axes returns the unit vectors to the right, up and forward. They are finite for any camera.
func (c Camera) axes() (right, up, forward r3.Vec) {
	forward = c.At.Sub(c.From).Unit()
	if forward == (r3.Vec{}) {
		forward = r3.Vec{Y: 1}
	}
	right = forward.Cross(c.Up)
	if right.Norm() <= 1e-9*c.Up.Norm() { // up along the view: any right will do
		right = forward.Perpendicular()
	}
	right = right.Unit()
	return right, right.Cross(forward), forward
}

// Height returns the length that the frame's height shows in the plane through At.
func (c Camera) Height() float64 {
	s, k := r3.SinCos(c.fov() / 2)
	return 2 * c.At.Sub(c.From).Norm() * s / k
}

// Orbit turns the camera about At: by yaw [rad] about the vertical, positive moving the eye to the right, and by pitch
// [rad], positive moving it up. The eye stops short of passing over the poles, so that up stays up.
func (c Camera) Orbit(yaw, pitch float64) Camera {
	_, up, forward := c.axes()
	elevation := r3.Atan2(-forward.Dot(vertical), r3.Hypot(forward.X, forward.Y))
	const upright = -1e-6           // up is level at the poles, give or take rounding
	if up.Dot(vertical) < upright { // hanging upside down: leave it free
		elevation = 0
	}
	pitch = min(max(pitch, -math.Pi/2-elevation), math.Pi/2-elevation)
	d := c.At.Sub(c.From).Norm()
	s, k := r3.SinCos(pitch)
	back := forward.Scale(-k).AddScaled(s, up)
	up = up.Scale(k).AddScaled(s, forward)
	s, k = r3.SinCos(yaw)
	turn := func(v r3.Vec) r3.Vec {
		return r3.Vec{X: float64(k*v.X) - float64(s*v.Y), Y: float64(s*v.X) + float64(k*v.Y), Z: v.Z}
	}
	c.From = c.At.AddScaled(d, turn(back).Unit())
	c.Up = turn(up).Unit()
	return c
}

// Pan moves eye and target so that what is at At moves by dx, dy on the picture: shares of the frame's height, to the
// right and downward.
func (c Camera) Pan(dx, dy float64) Camera {
	right, up, _ := c.axes()
	h := c.Height()
	move := right.Scale(-dx*h).AddScaled(float64(dy*h), up)
	c.From, c.At = c.From.Add(move), c.At.Add(move)
	return c
}

// Zoom brings the camera nearer to p by the factor (2: twice as large), so that p stays where it is on the picture. p
// is the place under the pointer (Renderer.Pick), or Lens.OnTarget where there is no surface.
func (c Camera) Zoom(factor float64, p r3.Vec) Camera {
	if !(factor > 0) || math.IsInf(factor, 0) {
		return c
	}
	c.From = p.AddScaled(1/factor, c.From.Sub(p))
	c.At = p.AddScaled(1/factor, c.At.Sub(p))
	return c
}

// FlyTo returns the camera at share t in [0, 1] of the way from c to d, with an even rate of zoom.
func (c Camera) FlyTo(d Camera, t float64) Camera {
	t = min(max(t, 0), 1)
	t = float64(t * t * (3 - float64(2*t)))
	a, b := c.From.Sub(c.At), d.From.Sub(d.At)
	size := r3.Exp(float64((1-t)*r3.Log(max(a.Norm(), 1e-300))) + float64(t*r3.Log(max(b.Norm(), 1e-300))))
	way := a.Unit().Lerp(b.Unit(), t).Unit()
	if way == (r3.Vec{}) {
		way = a.Unit().Perpendicular()
	}
	e := d
	e.At = c.At.Lerp(d.At, t)
	e.From = e.At.AddScaled(size, way)
	e.Up = c.Up.Lerp(d.Up, t)
	return e
}

// Lens is a camera on a frame of w x h pixels: it projects.
type Lens struct {
	right, up, forward, eye r3.Vec
	cx, cy                  float64 // the principal point [pixels]
	focal                   float64 // perspective: pixels per unit of slope; ortho: pixels per unit of length
	distance                float64 // from the eye to the target plane
	ortho                   bool
}

// Lens returns the camera's projection onto a frame of w x h pixels.
func (c Camera) Lens(w, h int) Lens {
	var l Lens
	l.right, l.up, l.forward = c.axes()
	l.eye, l.ortho = c.From, c.Ortho
	l.cx, l.cy = float64(w)/2, float64(h)/2
	l.distance = c.At.Sub(c.From).Norm()
	if c.Ortho {
		l.focal = float64(h) / max(c.Height(), 1e-300)
	} else {
		s, k := r3.SinCos(c.fov() / 2)
		l.focal = float64(h) / 2 * k / s
	}
	return l
}

// Project returns where p appears [pixels, from the upper left corner] and how far in front of the eye it is along the
// view. In perspective a point at z <= 0 is behind the eye and x, y mean nothing.
func (l *Lens) Project(p r3.Vec) (x, y, z float64) {
	d := p.Sub(l.eye)
	x, y, z = d.Dot(l.right), d.Dot(l.up), d.Dot(l.forward)
	s := l.focal
	if !l.ortho {
		if z <= 0 {
			return 0, 0, z
		}
		s /= z
	}
	return l.cx + float64(x*s), l.cy - float64(y*s), z
}

// Pixel returns the length that a pixel shows at the distance z along the view.
func (l *Lens) Pixel(z float64) float64 {
	if l.ortho {
		return 1 / l.focal
	}
	return z / l.focal
}

// OnTarget returns the point under pixel x, y in the plane through the camera's target across the view.
func (l *Lens) OnTarget(x, y float64) r3.Vec {
	s := l.Pixel(l.distance)
	return l.eye.AddScaled(l.distance, l.forward).AddScaled(float64((x-l.cx)*s), l.right).
		AddScaled(float64((l.cy-y)*s), l.up)
}
