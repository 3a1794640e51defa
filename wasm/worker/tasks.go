//go:build js && wasm

package main

import (
	"bytes"
	"context"
	"image"
	"image/png"
	"math"
	"slices"
	"syscall/js"
	"time"

	"shearprint/field"
	"shearprint/field/r3"
	"shearprint/render"
	"shearprint/wasm/session"
)

// task answers a request that concerns the picture; nil and no error where there is nothing to answer.
type task func(p *painter, r session.Request, block js.Value) (any, error)

var painterTasks = map[string]task{
	"size": (*painter).resize, "gesture": (*painter).gesture, "shown": (*painter).shown, "set": (*painter).set,
	"view": (*painter).tellView, "link": (*painter).follow, "look": (*painter).look, "fly": (*painter).fly,
	"pick": (*painter).pick, "loupe": (*painter).magnify, "picture": (*painter).picture,
	"settled": (*painter).settled,
}

func (p *painter) resize(r session.Request, _ js.Value) (any, error) {
	size, err := session.Read[session.Size](r)
	if err == nil && size != p.size {
		p.size = size
		p.moved, p.rough = true, true
	}
	return nil, err
}

// shown hears that the page has shown a frame, and takes the frame's memory back.
func (p *painter) shown(_ session.Request, block js.Value) (any, error) {
	p.waiting, p.spare = false, block
	return nil, nil
}

// settled answers once the finished picture of the present view is shown.
func (p *painter) settled(r session.Request, _ js.Value) (any, error) {
	p.waiters = append(p.waiters, r)
	return nil, nil
}

// sameAnchor is the time within which zooms at one place of the screen, or steps of an orbit, belong together.
const sameAnchor = 500 * time.Millisecond

func (p *painter) gesture(r session.Request, _ js.Value) (any, error) {
	g, err := session.Read[session.Gesture](r)
	if err != nil || p.field == nil {
		return nil, err
	}
	p.flight = nil
	p.hand = time.Now()
	if g.Kind != "zoom" { // an orbit turns about what is in the middle
		g.X, g.Y = p.size.Middle()
	}
	near := math.Abs(g.X-p.anchor.x) < 2 && math.Abs(g.Y-p.anchor.y) < 2
	if g.Kind != p.anchor.kind || !near || time.Since(p.anchor.time) > sameAnchor {
		p.anchor = anchor{kind: g.Kind, x: g.X, y: g.Y, at: p.under(g.X, g.Y)}
	}
	p.anchor.time = time.Now()
	p.point(g.Move(p.view.Camera(), p.size.Height, p.anchor.at, p.field.Diagonal()))
	return nil, nil
}

// under returns the place under a place of the stage: of the surface, or else of the plane through the target.
func (p *painter) under(x, y float64) r3.Vec {
	x, y = x*p.size.Ratio, y*p.size.Ratio
	if loc, ok := p.renderer.Pick(x, y); ok {
		return p.field.Position(loc)
	}
	lens := p.view.Camera().Lens(p.size.Pixels())
	return lens.OnTarget(x, y)
}

// set changes what is shown.
func (p *painter) set(r session.Request, _ js.Value) (any, error) {
	view, err := p.view.Change(r.Args)
	if err != nil {
		return nil, err
	}
	camera := view.Camera() != p.view.Camera()
	p.view = view
	if p.field != nil {
		p.view = view.Suit(p.field.P != nil, p.field.Cp != nil)
	}
	p.moved = p.moved || camera
	p.compose()
	return nil, nil
}

// viewBody is the answer to "view" and "link".
type viewBody struct {
	View session.View `json:"view"`
	Link string       `json:"link"`
}

// tellView answers with the view, changed first if there is something to change.
func (p *painter) tellView(r session.Request, block js.Value) (any, error) {
	if string(r.Args) != "{}" && len(r.Args) > 0 {
		p.flight = nil
		if _, err := p.set(r, block); err != nil {
			return nil, err
		}
		if p.stop != nil {
			p.stop()
		}
	}
	return viewBody{p.view, p.view.Encode()}, nil
}

// follow takes the view of a link of the run that is open.
func (p *painter) follow(r session.Request, _ js.Value) (any, error) {
	o, err := session.Read[session.Open](r)
	if err != nil || p.field == nil {
		return nil, err
	}
	view, err := session.Decode(o.Link, session.Default(p.view.Run))
	if err != nil {
		return nil, err
	}
	view.Run = p.view.Run
	if !view.HasCamera() {
		view = view.With(p.view.Camera())
	}
	p.view, p.flight, p.moved = view.Suit(p.field.P != nil, p.field.Cp != nil), nil, true
	p.compose()
	return viewBody{p.view, p.view.Encode()}, nil
}

// look flies to a view that has a name.
func (p *painter) look(r session.Request, _ js.Value) (any, error) {
	l, err := session.Read[session.Look](r)
	if err == nil && p.field != nil {
		p.flyTo(p.size.Fit(render.NamedView(l.Name, p.field), p.field))
	}
	return nil, err
}

// fly flies to a place on the surface.
func (p *painter) fly(r session.Request, _ js.Value) (any, error) {
	s, err := session.Read[session.Spot](r)
	if err == nil && p.field != nil {
		at, normal := vec(s.At), vec(s.Normal)
		p.flyTo(p.size.Centre(session.Toward(p.view.Camera(), at, normal, p.field.Diagonal())))
	}
	return nil, err
}

func (p *painter) flyTo(c render.Camera) {
	p.flight = &flight{from: p.view.Camera(), to: c, start: time.Now()}
}

func vec(x [3]float64) r3.Vec { return r3.Vec{X: x[0], Y: x[1], Z: x[2]} }

// picked is the answer to "pick".
type picked struct {
	At     *[3]float64 `json:"at"` // null beside the surface
	Normal [3]float64  `json:"normal"`
	Point  string      `json:"point"` // id of the critical point that was meant; "" for none
}

// pick finds the place of the surface under the pointer. A critical point within reach is meant rather than what lies
// beside it.
func (p *painter) pick(r session.Request, _ js.Value) (any, error) {
	at, err := session.Read[session.Place](r)
	if err != nil {
		return nil, err
	}
	if p.field == nil {
		return picked{}, nil
	}
	x, y, reach := at.X*p.size.Ratio, at.Y*p.size.Ratio, at.Reach*p.size.Ratio
	lens := p.renderer.Lens()
	best, out := reach, picked{}
	if p.skeleton != nil && p.view.Points {
		for _, q := range p.visiblePoints() {
			px, py, z := lens.Project(q.Position)
			if d := math.Hypot(px-x, py-y); d <= best && z > 0 && p.seen(q.Position, px, py, lens.Pixel(z)) {
				best, out = d, picked{(*[3]float64)(slice(q.Position)), [3]float64(slice(q.Normal)), q.ID}
			}
		}
	}
	if out.At == nil {
		if loc, ok := p.renderer.Pick(x, y); ok {
			out = picked{(*[3]float64)(slice(p.field.Position(loc))), [3]float64(slice(p.field.Normal(loc))), ""}
		}
	}
	return out, nil
}

func slice(v r3.Vec) []float64 { return []float64{v.X, v.Y, v.Z} }

// hiddenPixels is how far, in pixels, the surface under a point's pixel may be from the point for the point to be seen: a
// pixel's own slanted depth and the coarseness of a moving frame.
const hiddenPixels = 12

// seen tells whether nothing lies in front of a point of the surface that appears at a pixel.
func (p *painter) seen(at r3.Vec, x, y, pixel float64) bool {
	loc, ok := p.renderer.Pick(x, y)
	return ok && p.field.Position(loc).Sub(at).Norm() < hiddenPixels*pixel+0.002*p.field.Diagonal()
}

// magnified is the answer to "loupe"; the pixels lie beside it.
type magnified struct {
	Width  int          `json:"width"`
	Height int          `json:"height"`
	Shows  float64      `json:"shows"` // length that the side shows
	Axes   [][2]float64 `json:"axes"`  // directions of the eigenvectors on the picture, x right, y down; unit
}

// loupeShare is the length that the loupe shows, in diagonals of the run.
const loupeShare = 0.05

// sharedLoupe is the number of triangles above which the loupe borrows the stage's renderer, whose frame is then made
// anew: a second one would take as much memory as the run.
const sharedLoupe = 400_000

// magnify makes the picture of the loupe.
func (p *painter) magnify(r session.Request, _ js.Value) (any, error) {
	s, err := session.Read[session.Spot](r)
	if err != nil {
		return nil, err
	}
	if p.field == nil {
		return nil, errNoRun
	}
	renderer := p.loupe
	if len(p.field.Tris) > sharedLoupe {
		renderer, p.rough = p.renderer, true
	}
	loc, _ := p.field.Nearest(vec(s.At))
	at, normal := p.field.Position(loc), p.field.Normal(loc)
	c := p.view.Camera()
	shows := loupeShare * p.field.Diagonal()
	c.Ortho, c.Fov = true, 0
	c.At, c.From = at, at.AddScaled(1, normal)
	c.From = at.AddScaled(shows/c.Height(), normal)
	scene := *p.scene
	scene.Marks, scene.Lines, scene.Streamlines = nil, nil, nil
	scene.Bare, scene.Animate, scene.Isobars, scene.Title = true, false, 0, ""
	scene.Flow = render.Texture
	f, err := renderer.Frame(context.Background(), &scene, c, max(s.Size, 16), max(s.Size, 16), render.Still)
	if err != nil {
		return nil, err
	}
	lens := c.Lens(f.W, f.H)
	body := magnified{Width: f.W, Height: f.H, Shows: shows, Axes: p.axes(loc, &lens, shows)}
	p.post(session.Reply{ID: r.ID, Body: body}, f.Pix, js.Undefined())
	return nil, nil
}

// picture makes a finished picture as PNG.
func (p *painter) picture(r session.Request, _ js.Value) (any, error) {
	size, err := session.Read[session.Picture](r)
	if err != nil {
		return nil, err
	}
	if p.scene == nil {
		return nil, errNoRun
	}
	scene := *p.scene
	scene.Bare, scene.Scale, scene.Title = !p.view.Legend, 1, p.field.Name
	f, err := p.renderer.Frame(context.Background(), &scene, p.view.Camera(), size.Width, size.Height, render.Still)
	if err != nil {
		return nil, err
	}
	p.rough = true // the renderer now holds another frame than the stage shows
	var b bytes.Buffer
	img := &image.RGBA{Pix: f.Pix, Stride: 4 * f.W, Rect: image.Rect(0, 0, f.W, f.H)}
	if err := png.Encode(&b, img); err != nil {
		return nil, err
	}
	p.post(session.Reply{ID: r.ID, Body: size}, b.Bytes(), js.Undefined())
	return nil, nil
}

// axes returns the directions of real eigenvectors of tau's Jacobian at a place, on the picture of a lens.
func (p *painter) axes(loc field.Loc, lens *render.Lens, reach float64) [][2]float64 {
	at := p.field.Position(loc)
	out := [][2]float64{}
	for _, d := range eigenvectors(p.field, p.skeletonPoint(at), loc) {
		x0, y0, _ := lens.Project(at)
		x1, y1, _ := lens.Project(at.AddScaled(reach/4, d))
		n := math.Hypot(x1-x0, y1-y0)
		if n > 0 {
			out = append(out, [2]float64{(x1 - x0) / n, (y1 - y0) / n})
		}
	}
	return slices.Clip(out)
}
