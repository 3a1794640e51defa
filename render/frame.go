package render

import (
	"context"
	"errors"
	"time"
)

// Quality says how much care a frame takes.
type Quality uint8

// The qualities. A Moving frame keeps up with the hand: surface and texture at half size or less, big meshes coarsened.
// A Still frame is exact: full size, all triangles.
const (
	Moving Quality = iota
	Still
)

// Frame is a finished picture with what it was mixed from. Its buffers belong to the Renderer and last until its next
// frame.
type Frame struct {
	W, H    int
	Pix     []byte // RGBA, premultiplied by alpha, rows from the top: 4 W H bytes
	Layers  Layers
	Quality Quality
	Times   Times
}

// Times tells what the stages of a frame took; a stage that was kept from an earlier frame takes none.
type Times struct{ Prepare, Raster, Surface, Convolve, Scalar, Overlay, Mix time.Duration }

// Sum returns the time of all stages together.
func (t Times) Sum() time.Duration {
	return t.Prepare + t.Raster + t.Surface + t.Convolve + t.Scalar + t.Overlay + t.Mix
}

// Renderer makes frames and keeps the buffers and stages of the last one. It is not for several goroutines at once; it
// uses several itself.
type Renderer struct {
	body      *body
	plate     plate
	frame     Frame
	lens      Lens // of the frame
	kept      stages
	spread    rangeKey
	low, high float64
	values    []float64
	over      canvas
	small     *typist
	layout    layout
	facing    []bool // per triangle: it shows its front
}

// NewRenderer returns a renderer without a frame.
func NewRenderer() *Renderer { return &Renderer{} }

// maxPixels bounds a frame's size: 16K x 16K, 4 GiB of buffers that nobody means.
const maxPixels = 1 << 28

// errSize is what a frame of no or too many pixels gives.
var errSize = errors.New("the picture's size is not usable: give a width and height from 1 to 16384 pixels")

func checkSize(w, h int) error {
	if w < 1 || h < 1 || w > 16384 || h > 16384 || w*h > maxPixels {
		return errSize
	}
	return nil
}

// movingPixels is the number of pixels up to which the surface of a moving frame is drawn: what one thread in a browser
// rasters, lights and convolves in some 20 ms.
const movingPixels = 250_000

// factor returns the number of frame pixels per pixel of the planes, each way.
func (q Quality) factor(w, h int) int {
	if q == Still {
		return 1
	}
	k := 2
	for w*h > movingPixels*k*k {
		k++
	}
	return k
}

// Frame draws the scene. What has not changed since the last frame is kept: marks, lines and streamlines that are to be
// drawn anew come in new slices. The frame's buffers are used again by the next call. The error is that of the context,
// or tells that the size or the scene is not usable; the last frame is then lost.
func (r *Renderer) Frame(ctx context.Context, s *Scene, cam Camera, w, h int, q Quality) (*Frame, error) {
	if err := checkSize(w, h); err != nil {
		return nil, err
	}
	k := q.factor(w, h)
	f := &r.frame
	f.W, f.H, f.Quality, f.Times = w, h, q, Times{}
	r.lens = cam.Lens(w, h)
	job := job{scene: s, lens: r.lens.resize(1 / float64(k)), w: (w + k - 1) / k, h: (h + k - 1) / k,
		pixels: s.scale(), quality: q}
	if q == Moving {
		job.pixels = max(s.scale()*movingDetail/float64(k), movingDetail)
	}
	job.bottom = job.h
	if err := r.stage(ctx, &job); err != nil {
		return nil, err
	}
	l := &f.Layers
	l.Factor = k
	start := time.Now()
	if key := overlayKeyOf(s, w, h, q); r.kept.overlay != key {
		r.kept.overlay = overlayKey{}
		l.Overlay = fitted(l.Overlay, 4*w*h)
		r.over.reset(l.Overlay, w, h)
		if err := r.overlay(ctx, s, &r.over, float64(k)); err != nil {
			return nil, err
		}
		r.kept.overlay = key
	}
	start = f.Times.lap(&f.Times.Overlay, start)
	f.Pix = fitted(f.Pix, 4*w*h)
	err := bands(ctx, 0, h, 60, func(from, to int) { l.mixRows(f.Pix, w, h, s.Phase, from, to) })
	f.Times.lap(&f.Times.Mix, start)
	return f, err
}

// movingDetail is the size of the kernel and of the noise of a moving frame, in pixels of its planes per point: smaller
// than in a still frame, so that enough lines remain across the fewer pixels.
const movingDetail = 0.75

func (t *Times) lap(into *time.Duration, since time.Time) time.Time {
	now := time.Now()
	*into += now.Sub(since)
	return now
}

func (s *Scene) scale() float64 {
	if s.Scale > 0 && s.Scale <= 16 {
		return s.Scale
	}
	return 1
}

// resize returns the lens for a frame of k times the size.
func (l Lens) resize(k float64) Lens {
	l.cx, l.cy, l.focal = float64(l.cx*k), float64(l.cy*k), float64(l.focal*k)
	return l
}
