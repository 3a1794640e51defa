package render

import (
	"context"
	"errors"
	"math"
	"time"

	"shearprint/field"
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

// stages are the keys of what the buffers hold: a stage is done anew where its key changes.
type stages struct {
	raster  rasterKey
	surface surfaceKey
	texture textureKey
	scalar  scalarKey
}

type rasterKey struct {
	field       *field.Field
	lens        Lens
	w, h        int
	top, bottom int
	coarse      bool
}

type surfaceKey struct {
	rasterKey
	look look
}

type textureKey struct {
	surfaceKey
	smear smear
	flow  bool
	rows  [4]int // convolved from, to, softened from, to
}

type scalarKey struct {
	rasterKey
	quantity Quantity
}

type rangeKey struct {
	field    *field.Field
	quantity Quantity
	limits   Range
}

// NewRenderer returns a renderer without a frame.
func NewRenderer() *Renderer { return &Renderer{} }

// maxPixels bounds a frame's size: 16K x 16K, 4 GiB of buffers that nobody means.
const maxPixels = 1 << 28

// errSize is what a frame of no or too many pixels gives.
var errSize = errors.New("the picture's size is not usable: give a width and height of at least 1 and at most 16384 pixels")

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

// Frame draws the scene. The frame's buffers are used again by the next call. The error is that of the context, or tells
// that the size or the scene is not usable; the last frame is then lost.
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
	l.Overlay = fitted(l.Overlay, 4*w*h)
	r.over.reset(l.Overlay, w, h)
	if err := r.overlay(ctx, s, &r.over, float64(k)); err != nil {
		return nil, err
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

// Rows draws rows top..bottom of the still frame of w x h pixels, without its overlay: what one of several workers does.
// The rows are the same bytes as those of the whole frame. The result's H is bottom-top; bounds that are multiples of 120
// cost least.
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
	l.Overlay = fitted(l.Overlay, 4*w*f.H)
	clear(l.Overlay)
	f.Pix = fitted(f.Pix, 4*w*f.H)
	err := bands(ctx, 0, f.H, 60, func(from, to int) { l.mixRows(f.Pix, w, f.H, s.Phase, from, to) })
	f.Times.lap(&f.Times.Mix, start)
	return f, err
}

// Overlay returns what lies above the surface in the still frame of w x h pixels: RGBA, premultiplied. Laid over the rows
// of Rows it gives the pixels of Frame. The buffer is used again by the next call.
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
	l.Overlay = fitted(l.Overlay, 4*w*h)
	r.over.reset(l.Overlay, w, h)
	return l.Overlay, r.overlay(ctx, s, &r.over, float64(k))
}

// sightPixels is the number of pixels beyond which what can be seen is decided on a smaller raster.
const sightPixels = 10_000_000

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

// job is what the stages up to mixing are asked for.
type job struct {
	scene       *Scene
	lens        Lens // in field coordinates, for w x h
	w, h        int
	top, bottom int // the rows that are wanted
	pixels      float64
	quality     Quality
	sightOnly   bool // no texture
}

// stage brings the plate and the layers up to date for the rows of the job.
func (r *Renderer) stage(ctx context.Context, j *job) error {
	f, s := &r.frame, j.scene
	if s.Field == nil || len(s.Field.Tris) == 0 {
		return errors.New("the scene has no surface: set Scene.Field")
	}
	start := time.Now()
	if r.body == nil || r.body.field != s.Field {
		r.body, r.kept = newBody(s.Field), stages{}
	}
	b := r.body
	level := &b.fine
	coarse := j.quality == Moving
	if coarse {
		level = &b.coarse
	}
	start = f.Times.lap(&f.Times.Prepare, start)
	sm := smear{half: max(int(math.Floor(float64(kernelLength*j.pixels)+0.5)), 2), animate: s.Animate}
	sm.serve = 2 * sm.half
	sm.soften, sm.enough = j.quality == Still, 2
	if sm.soften {
		sm.enough = 3
	}
	flow := s.Flow == Texture && !j.sightOnly
	// The convolution needs whole bands, and rows around them that its streamlines may reach.
	// Softening needs a row of the neighbouring bands.
	from, to := max(j.top/bandRows-1, 0)*bandRows, min(((j.bottom+bandRows-1)/bandRows+1)*bandRows, j.h)
	raster := rasterKey{s.Field, j.lens, j.w, j.h, max(from-sm.reach()-4, 0), min(to+sm.reach()+4, j.h), coarse}
	lens := b.lens(j.lens)
	p := &r.plate
	if r.kept.raster != raster {
		r.kept = stages{}
		p.size(j.w, j.h, raster.top, raster.bottom)
		if err := p.raster(ctx, b, level, lens); err != nil {
			return err
		}
		r.kept.raster = raster
	}
	start = f.Times.lap(&f.Times.Raster, start)
	surface := surfaceKey{raster, look{s.Floor, j.pixels}}
	if r.kept.surface != surface {
		if err := p.surface(ctx, b, level, lens, surface.look); err != nil {
			return err
		}
		r.kept.surface = surface
	}
	start = f.Times.lap(&f.Times.Surface, start)
	texture := textureKey{surface, sm, flow, [4]int{from, to, j.top, j.bottom}}
	if r.kept.texture != texture {
		if err := r.texture(ctx, texture); err != nil {
			return err
		}
		r.kept.texture = texture
	}
	start = f.Times.lap(&f.Times.Convolve, start)
	scalar := scalarKey{raster, s.Quantity.of(s.Field)}
	r.limits(s)
	if r.kept.scalar != scalar {
		if err := p.scalars(ctx, level, r.values); err != nil {
			return err
		}
		r.kept.scalar = scalar
	}
	r.layers(s, sm, flow, j.top-p.top, j.bottom-p.top)
	err := bands(ctx, j.top-p.top, j.bottom-p.top, 64, func(from, to int) {
		f.Layers.quantize(p, from, to, j.top-p.top, r.low, r.high)
	})
	f.Times.lap(&f.Times.Scalar, start)
	return err
}

// texture convolves and softens the rows of the key, or leaves them without texture.
func (r *Renderer) texture(ctx context.Context, key textureKey) error {
	p := &r.plate
	if !key.flow {
		for i := range p.tex[0] {
			p.tex[0][i] = 128
		}
		return nil
	}
	if err := p.convolve(ctx, key.smear, key.rows[0], key.rows[1]); err != nil || !key.smear.soften {
		return err
	}
	return p.soften(ctx, key.smear, key.rows[2]-p.top, key.rows[3]-p.top)
}

// limits brings the ends of the colours up to date.
func (r *Renderer) limits(s *Scene) {
	key := rangeKey{s.Field, s.Quantity.of(s.Field), s.Range}
	if r.spread == key {
		return
	}
	if r.spread.field != key.field || r.spread.quantity != key.quantity {
		r.values = key.quantity.values(s.Field)
	}
	r.low, r.high = s.Range.limits(r.values)
	r.spread = key
}

// layers hands rows from..to of the plate's planes to the frame and fills the tables.
func (r *Renderer) layers(s *Scene, sm smear, flow bool, from, to int) {
	p, l := &r.plate, &r.frame.Layers
	c := s.Theme.colors()
	l.W, l.H = p.w, to-from
	lo, hi := from*p.w, to*p.w
	l.Texture, l.Shade = p.tex[0][lo:hi], p.shade[lo:hi]
	l.Cos, l.Sin, l.Animated = nil, nil, false
	if flow && sm.animate {
		l.Cos, l.Sin, l.Animated = p.tex[1][lo:hi], p.tex[2][lo:hi], true
	}
	l.Scalar, l.Mask = fitted(l.Scalar, hi-lo), fitted(l.Mask, hi-lo)
	for i, x := range s.Theme.palette(s.Quantity.of(s.Field)).table(r.low, r.high, s.Bands, c.none) {
		l.Table[i] = x
	}
	l.Curve = contrastCurve(flow)
	l.Back = [4]uint8{c.back[0], c.back[1], c.back[2], 255}
	if s.Transparent {
		l.Back = [4]uint8{}
	}
	l.Low, l.High = r.low, r.high
}
