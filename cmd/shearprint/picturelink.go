package main

import (
	"context"
	"image"
	"strings"

	"shearprint/field"
	"shearprint/field/topology"
	"shearprint/render"
	"shearprint/wasm/session"
)

// linked tells whether --view is a link of the page, which brings everything but the size.
func (p *pictureFlags) linked() bool { return strings.HasPrefix(p.view, "#") }

func (p *pictureFlags) link() (session.View, error) {
	return session.Decode(p.view, session.Default(""))
}

// drawLink makes the picture that the page shows at a link, with the legend of pictures.
func (p *pictureFlags) drawLink(ctx context.Context, a *app, f *field.Field, w, h int, quiet bool) (*image.RGBA, error) {
	v, err := p.link()
	if err != nil {
		return nil, err
	}
	v = v.Suit(f.P != nil, f.Cp != nil)
	opt := topology.Options{Lines: true, MinRobustness: v.Floor}
	var end func()
	opt.Progress, end = a.progress("reading the pattern", quiet)
	sk, err := topology.Find(ctx, f, opt)
	end()
	if err != nil {
		return nil, err
	}
	var points []*topology.Point
	for i := range sk.Points {
		points = append(points, &sk.Points[i])
	}
	scene := v.Scene(f, sk, points)
	scene.Transparent = p.transparent
	if scene.Flow == render.FlowLines {
		if scene.Streamlines, err = render.Streamlines(ctx, f, float64(streamlineGap*f.Diagonal())); err != nil {
			return nil, err
		}
	}
	camera := v.Camera()
	if !v.HasCamera() {
		camera = render.NamedView("iso", f).Fit(f, float64(w)/float64(h))
	}
	return p.paint(ctx, scene, camera, w, h)
}
