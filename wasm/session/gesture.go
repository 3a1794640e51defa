package session

import (
	"fmt"
	"math"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/render"
)

// Gesture is a small movement of hand or key on the stage.
type Gesture struct {
	Kind   string  `json:"kind"`   // "orbit", "pan" or "zoom"
	DX     float64 `json:"dx"`     // orbit, pan: movement to the right [CSS pixels]
	DY     float64 `json:"dy"`     // downward
	Factor float64 `json:"factor"` // zoom: above 1 comes closer
	X      float64 `json:"x"`      // zoom: the place that stays [CSS pixels]
	Y      float64 `json:"y"`
}

// largestStep bounds the factor of one zoom.
const largestStep = 16

// Check implements the check of Read.
func (g Gesture) Check() error {
	if !finite(g.DX, g.DY, g.Factor, g.X, g.Y) {
		return fmt.Errorf("a gesture without a number")
	}
	switch g.Kind {
	case "orbit", "pan":
		return nil
	case "zoom":
		if g.Factor >= 1.0/largestStep && g.Factor <= largestStep {
			return nil
		}
		return fmt.Errorf("a zoom by %g", g.Factor)
	}
	return fmt.Errorf("there is no gesture %q", g.Kind)
}

// turnAcross is the angle [rad] by which a drag over the height of the stage turns the body.
const turnAcross = 0.9 * math.Pi

// zoomRange bounds the distance of the eye from its target, in diagonals of the run: from a single face of a fine mesh to
// a body that is a dot.
var zoomRange = [2]float64{1e-5, 50}

// Move returns the camera after the gesture on a stage of that height [CSS pixels]. at is the place that stays on the
// frame: that under the pointer of a zoom, or what an orbit turns about; diagonal the size of the run.
func (g Gesture) Move(c render.Camera, height float64, at r3.Vec, diagonal float64) render.Camera {
	height = max(height, 1)
	switch g.Kind {
	case "orbit":
		// The body follows the hand: the eye goes the other way.
		return about(c, c.Orbit(-g.DX/height*turnAcross, g.DY/height*turnAcross), at)
	case "pan":
		return c.Pan(g.DX/height, g.DY/height)
	}
	d := c.At.Sub(c.From).Norm()
	factor := g.Factor
	if d > 0 && diagonal > 0 {
		factor = min(factor, max(1, d/(zoomRange[0]*diagonal)))
		factor = max(factor, min(1, d/(zoomRange[1]*diagonal)))
	}
	return c.Zoom(factor, at)
}

// about returns the turned camera, moved so that the place at appears where it did before the turn.
func about(before, turned render.Camera, at r3.Vec) render.Camera {
	old, now := axes(before), axes(turned)
	d := at.Sub(before.From)
	from := at
	for i := range old {
		from = from.AddScaled(-d.Dot(old[i]), now[i])
	}
	turned.At = turned.At.Add(from.Sub(turned.From))
	turned.From = from
	return turned
}

// axes returns the camera's unit vectors to the right, up and forward.
func axes(c render.Camera) [3]r3.Vec {
	forward := c.At.Sub(c.From).Unit()
	right := forward.Cross(c.Up).Unit()
	return [3]r3.Vec{right, right.Cross(forward), forward}
}

// shownAround is the height that Toward shows around a point, in diagonals of the run: enough to recognise the place.
const shownAround = 0.16

// Toward returns a camera that looks at a place of the surface against its normal, leaned a little towards the way the
// given camera looks, so that the place is seen as a place of a body.
func Toward(c render.Camera, at, normal r3.Vec, diagonal float64) render.Camera {
	back := c.From.Sub(c.At).Unit()
	way := normal.Unit().Scale(1).AddScaled(0.35, back)
	if way.Norm() < 0.1 { // seen from behind
		way = normal
	}
	way = way.Unit()
	if way == (r3.Vec{}) {
		way = back
	}
	d := c.At.Sub(c.From).Norm()
	if h := c.Height(); h > 0 && d > 0 {
		d *= shownAround * diagonal / h
	}
	out := c
	out.At, out.From = at, at.AddScaled(d, way)
	// Upright where that can be told, else as it is now.
	if math.Abs(way.Z) < 0.95 {
		out.Up = r3.Vec{Z: 1}
	}
	return out
}

// leastFree is the share of the stage, each way, that counts as free whatever the instruments cover.
const leastFree = 0.3

// free returns the middle of what the instruments leave free, from the middle of the stage, and its size [CSS pixels].
func (s Size) free() (x, y, w, h float64) {
	left, right, top, bottom := max(s.Left, 0), max(s.Right, 0), max(s.Top, 0), max(s.Bottom, 0)
	w, h = s.Width-left-right, s.Height-top-bottom
	x, y = (left-right)/2, (top-bottom)/2
	if w < leastFree*s.Width {
		x, w = 0, s.Width
	}
	if h < leastFree*s.Height {
		y, h = 0, s.Height
	}
	return x, y, max(w, 1), max(h, 1)
}

// Middle returns the middle of the stage's free part [CSS pixels].
func (s Size) Middle() (x, y float64) {
	dx, dy, _, _ := s.free()
	return s.Width/2 + dx, s.Height/2 + dy
}

// Fit returns the camera, with its direction kept, from where the whole run fits into the free part of the stage.
func (s Size) Fit(c render.Camera, f *field.Field) render.Camera {
	_, _, w, h := s.free()
	c = c.Fit(f, w/h)
	return s.Centre(c.Zoom(h/max(s.Height, 1), c.At))
}

// Centre returns the camera moved so that what is in the middle of the stage comes to the middle of its free part.
func (s Size) Centre(c render.Camera) render.Camera {
	x, y, _, _ := s.free()
	return c.Pan(x/max(s.Height, 1), y/max(s.Height, 1))
}
