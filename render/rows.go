package render

import (
	"context"
	"errors"
	"time"
)

// Rows draws rows top..bottom of the still frame of w x h pixels, without its overlay: what one of several workers
// does. The rows are the same bytes as those of the whole frame. The result's H is bottom-top; bounds that are
// multiples of 120 cost least.
func (r *Renderer) Rows(ctx context.Context, s *Scene, cam Camera, w, h, top, bottom int) (*Frame, error) {
	if err := checkSize(w, h); err != nil {
		return nil, err
	}
	top, bottom = max(top, 0), min(bottom, h)
	if top >= bottom {
		return nil, errors.New("no rows to draw: give 0 <= top < bottom <= the picture's height")
	}
	f := &r.frame
	f.W, f.H, f.Quality, f.Times = w, bottom-top, Still, Times{}
	r.lens = cam.Lens(w, h)
	if err := r.stage(ctx, &job{scene: s, lens: r.lens, w: w, h: h, top: top, bottom: bottom,
		pixels: s.scale(), quality: Still}); err != nil {
		return nil, err
	}
	start := time.Now()
	l := &f.Layers
	l.Factor = 1
	r.kept.overlay = overlayKey{}
	l.Overlay = fitted(l.Overlay, 4*w*f.H)
	clear(l.Overlay)
	f.Pix = fitted(f.Pix, 4*w*f.H)
	err := bands(ctx, 0, f.H, 60, func(from, to int) { l.mixRows(f.Pix, w, f.H, s.Phase, from, to) })
	f.Times.lap(&f.Times.Mix, start)
	return f, err
}

// Overlay returns what lies above the surface in the still frame of w x h pixels: RGBA, premultiplied. Laid over the
// rows of Rows it gives the pixels of Frame. The buffer is used again by the next call.
func (r *Renderer) Overlay(ctx context.Context, s *Scene, cam Camera, w, h int) ([]byte, error) {
	if err := checkSize(w, h); err != nil {
		return nil, err
	}
	k := 1
	for w*h > sightPixels*k*k {
		k++
	}
	f := &r.frame
	f.Quality, f.Times = Still, Times{}
	r.lens = cam.Lens(w, h)
	job := job{scene: s, lens: r.lens.resize(1 / float64(k)), w: (w + k - 1) / k, h: (h + k - 1) / k,
		pixels: s.scale(), quality: Still, sightOnly: true}
	job.bottom = job.h
	if err := r.stage(ctx, &job); err != nil {
		return nil, err
	}
	l := &f.Layers
	l.Factor = k
	r.kept.overlay = overlayKey{}
	l.Overlay = fitted(l.Overlay, 4*w*h)
	r.over.reset(l.Overlay, w, h)
	return l.Overlay, r.overlay(ctx, s, &r.over, float64(k))
}

// sightPixels is the number of pixels beyond which what can be seen is decided on a smaller raster.
const sightPixels = 10_000_000
