package render

import (
	"context"
	"errors"
	"math"
	"time"

	"shearprint/field"
)

// stages are the keys of what the buffers hold: a stage is done anew where its key changes.
type stages struct {
	raster  rasterKey
	surface surfaceKey
	texture textureKey
	scalar  scalarKey
	overlay overlayKey
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
	regions  *int32 // where the scene's regions lie
}

// overlayKey is what an overlay depends on besides the raster. Marks and lines are told by where their slices lie.
type overlayKey struct {
	w, h        int
	quality     Quality
	quantity    Quantity
	limits      Range
	bands       int
	isobars     int
	theme       Theme
	flow        Flow
	scale       float64
	bare        bool
	title       string
	marks       *Mark
	lines       *Line
	streamlines *[]field.Loc
	counts      [3]int
}

func overlayKeyOf(s *Scene, w, h int, q Quality) overlayKey {
	return overlayKey{w, h, q, s.Quantity, s.Range, s.Bands, s.Isobars, s.Theme, s.Flow, s.Scale, s.Bare, s.Title,
		first(s.Marks), first(s.Lines), first(s.Streamlines), [3]int{len(s.Marks), len(s.Lines), len(s.Streamlines)}}
}

func first[T any](s []T) *T {
	if len(s) == 0 {
		return nil
	}
	return &s[0]
}

type rangeKey struct {
	field    *field.Field
	quantity Quantity
	limits   Range
	regions  *int32
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
	scalar := scalarKey{raster, s.Quantity.of(s.Field), s.regionKey()}
	r.limits(s)
	if r.kept.scalar != scalar {
		if err := p.scalars(ctx, level, r.values, scalar.quantity == Basins); err != nil {
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

// regionKey tells whose regions the scene colours.
func (s *Scene) regionKey() *int32 {
	if s.Quantity != Basins || len(s.Regions) == 0 {
		return nil
	}
	return &s.Regions[0]
}

// limits brings the ends of the colours up to date.
func (r *Renderer) limits(s *Scene) {
	key := rangeKey{s.Field, s.Quantity.of(s.Field), s.Range, s.regionKey()}
	if r.spread == key {
		return
	}
	if key.quantity == Basins {
		r.values = regionValues(s.Field, s.Regions)
		r.low, r.high = 0, regionColors-1
		r.spread = key
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
	t := s.Theme.palette(s.Quantity.of(s.Field)).table(r.low, r.high, s.Bands, c.none)
	if s.Quantity == Basins {
		t = regionTable(c.none)
	}
	for i, x := range t {
		l.Table[i] = x
	}
	l.Curve = contrastCurve(flow)
	l.Back = [4]uint8{c.back[0], c.back[1], c.back[2], 255}
	if s.Transparent {
		l.Back = [4]uint8{}
	}
	l.Low, l.High = r.low, r.high
}
