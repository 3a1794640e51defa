package render

import (
	"context"
	"runtime"
	"sync"
)

// bandRows is the number of rows of a band: the unit in which the convolution is done, whoever does it. Its bounds are
// multiples of bandRows on the frame, so that the bytes depend neither on the number of workers nor on strips.
const bandRows = 120

// plate holds the buffers of the stages for rows top..bottom of a frame of w x h pixels. Buffers are used again.
type plate struct {
	w, h        int
	top, bottom int
	hits        []hit
	dirs        []direction
	noise       []float32
	fade        []uint8 // weight of the texture
	shade       []uint8
	steps       []uint8    // see stepRight, stepDown
	scalar      []float32  // NaN where there is no surface or no value
	tex         [3][]uint8 // see Layers
	soft        []uint8
	spots       []spot
	scratch     sync.Pool
	counts      struct{ tried, written int }
}

// direction is the projected unit direction of tau at a pixel, y downward; zero where there is none.
type direction struct{ x, y float32 }

// size makes the buffers fit.
func (p *plate) size(w, h, top, bottom int) {
	p.w, p.h, p.top, p.bottom = w, h, top, bottom
	n := w * (bottom - top)
	p.hits = fitted(p.hits, n)
	p.dirs = fitted(p.dirs, n)
	p.noise = fitted(p.noise, n)
	p.fade = fitted(p.fade, n)
	p.shade = fitted(p.shade, n)
	p.steps = fitted(p.steps, n)
	p.scalar = fitted(p.scalar, n)
	p.tex[0] = fitted(p.tex[0], n)
}

func fitted[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// bands runs work over rows from..to in blocks whose bounds are multiples of step, on as many goroutines as there are
// processors, and stops between blocks when the context is done.
func bands(ctx context.Context, from, to, step int, work func(from, to int)) error {
	if from >= to {
		return ctx.Err()
	}
	first := from / step
	count := (to+step-1)/step - first
	block := func(i int) { work(max(from, (first+i)*step), min(to, (first+i+1)*step)) }
	workers := min(runtime.GOMAXPROCS(0), count)
	if workers <= 1 {
		for i := range count {
			if ctx.Err() != nil {
				return ctx.Err()
			}
			block(i)
		}
		return ctx.Err()
	}
	var wg sync.WaitGroup
	next := make(chan int)
	for range workers {
		wg.Go(func() {
			for i := range next {
				block(i)
			}
		})
	}
	for i := 0; i < count && ctx.Err() == nil; i++ {
		next <- i
	}
	close(next)
	wg.Wait()
	return ctx.Err()
}

// raster fills hits with what the lens, in body coordinates, sees of the level.
func (p *plate) raster(ctx context.Context, b *body, l *level, lens Lens) error {
	p.spots = fitted(p.spots, len(b.pos))
	zero := zeroOf(&lens)
	const vertices = 1 << 14 // that one goroutine takes at a time
	n := len(b.pos)
	if l.used != nil {
		n = len(l.used)
	}
	err := bands(ctx, 0, n, vertices, func(from, to int) { project(b, l.used, &lens, zero, p.spots, from, to) })
	if err != nil {
		return err
	}
	// Each goroutine goes through all triangles, but draws only in its own rows: no locks, and the same bytes however
	// many there are.
	share := (p.bottom - p.top + runtime.GOMAXPROCS(0) - 1) / runtime.GOMAXPROCS(0)
	var mu sync.Mutex
	p.counts.tried, p.counts.written = 0, 0
	return bands(ctx, 0, p.bottom-p.top, share, func(from, to int) {
		r := raster{lens: lens, zero: zero, width: p.w, top: p.top + from, bottom: p.top + to}
		r.hits = p.hits[from*p.w : to*p.w]
		r.clear()
		const triangles = 1 << 16 // between two looks at the context
		for t := 0; t < len(l.tris) && ctx.Err() == nil; t += triangles {
			r.draw(b, l, p.spots, t, min(t+triangles, len(l.tris)))
		}
		mu.Lock()
		p.counts.tried += r.tried
		p.counts.written += r.written
		mu.Unlock()
	})
}
