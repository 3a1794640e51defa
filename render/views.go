package render

import (
	"fmt"
	"strconv"
	"strings"

	"shearprint/field"
	"shearprint/field/r3"
)

// viewNames lists the named views with the direction from the body to the eye. The stream of the runs comes along +x:
// front looks at the windward side, and left and right are the sides of one who looks along the stream.
var viewNames = []struct {
	name string
	back r3.Vec
	up   r3.Vec
}{
	{"front", r3.Vec{X: -1}, r3.Vec{Z: 1}},
	{"rear", r3.Vec{X: 1}, r3.Vec{Z: 1}},
	{"left", r3.Vec{Y: 1}, r3.Vec{Z: 1}},
	{"right", r3.Vec{Y: -1}, r3.Vec{Z: 1}},
	{"top", r3.Vec{Z: 1}, r3.Vec{Y: 1}},
	{"bottom", r3.Vec{Z: -1}, r3.Vec{Y: 1}},
	{"iso", r3.Vec{X: -1, Y: -1.15, Z: 0.9}, r3.Vec{Z: 1}},
}

// ViewNames returns the names that NamedView knows.
func ViewNames() []string {
	names := make([]string, len(viewNames))
	for i, v := range viewNames {
		names[i] = v.name
	}
	return names
}

// NamedView returns the camera of that name, placed so that the whole surface fits a frame that is at least as wide as
// high. Unknown names give the iso view; ViewNames lists the known ones.
func NamedView(name string, f *field.Field) Camera {
	view := viewNames[len(viewNames)-1]
	for _, v := range viewNames {
		if v.name == name {
			view = v
		}
	}
	c := Camera{At: r3.Vec{}, From: view.back, Up: view.up}
	return c.Fit(f, 4.0/3)
}

// fitMargin is the share of the frame left free around a fitted body, for legend and scale bar.
const fitMargin = 0.06

// Fit keeps the camera's direction and moves it so that the whole surface fits a frame of the given width over height.
func (c Camera) Fit(f *field.Field, aspect float64) Camera {
	right, up, forward := c.axes()
	s, k := r3.SinCos(c.fov() / 2)
	slope := float64(s / k * (1 - 2*fitMargin))
	wide := float64(slope * max(aspect, 0.1))
	// For each direction of the frame, the farthest back that a point pushes the eye along the view, as a pair of
	// half-planes; the middle between opposite ones centres the body.
	const none = -1e300
	pushes := [4]float64{none, none, none, none} // right, left, up, down
	near, far := -none, none
	for v, p := range f.Points {
		if f.Out[v] < 0 {
			continue
		}
		x, y, z := p.Dot(right), p.Dot(up), p.Dot(forward)
		near, far = min(near, z), max(far, z)
		if c.Ortho {
			z = 0
		}
		for i, push := range [4]float64{x/wide - z, -x/wide - z, y/slope - z, -y/slope - z} {
			pushes[i] = max(pushes[i], push)
		}
	}
	if near > far {
		return c
	}
	x, y := float64((pushes[0]-pushes[1])/2*wide), float64((pushes[2]-pushes[3])/2*slope)
	back := max(pushes[0]+pushes[1], pushes[2]+pushes[3]) / 2 // distance of the eye behind the plane z = 0
	middle := (near + far) / 2
	eye := -back
	if c.Ortho {
		eye = middle - back
	}
	if middle-eye <= 0 { // a flat body seen edge on
		eye = middle - max(back, f.Diagonal())
	}
	place := func(z float64) r3.Vec {
		return right.Scale(x).AddScaled(y, up).AddScaled(z, forward)
	}
	c.From, c.At = place(eye), place(middle)
	return c
}

// LookFrom reads "x,y,z:x,y,z", the eye and the point it looks at; up is z, or y for a view straight up or down.
func LookFrom(text string) (Camera, error) {
	from, at, ok := strings.Cut(text, ":")
	eye, err1 := parsePoint(from)
	target, err2 := parsePoint(at)
	if !ok || err1 != nil || err2 != nil {
		return Camera{}, fmt.Errorf("look %q: want from:at as x,y,z:x,y,z", text)
	}
	d := target.Sub(eye)
	if d.Norm() == 0 {
		return Camera{}, fmt.Errorf("look %q: the two points are the same", text)
	}
	c := Camera{From: eye, At: target, Up: vertical}
	if r3.Hypot(d.X, d.Y) <= 1e-6*d.Norm() {
		c.Up = r3.Vec{Y: 1}
	}
	return c, nil
}

func parsePoint(text string) (r3.Vec, error) {
	var p [3]float64
	words := strings.Split(text, ",")
	if len(words) != 3 {
		return r3.Vec{}, fmt.Errorf("want three numbers")
	}
	for i, w := range words {
		x, err := strconv.ParseFloat(strings.TrimSpace(w), 64)
		if err != nil || x-x != 0 {
			return r3.Vec{}, fmt.Errorf("%q is no number", w)
		}
		p[i] = x
	}
	return r3.Vec{X: p[0], Y: p[1], Z: p[2]}, nil
}
