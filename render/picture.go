package render

import (
	"context"
	"image"
)

// maxSupersample bounds Picture's supersampling: beyond four samples each way nothing is to be seen.
const maxSupersample = 4

// stripPixels is the number of samples that Picture draws at a time: some 40 bytes each.
const stripPixels = 6_000_000

// Picture draws the scene at w x h pixels for a file, with the given number of samples per pixel each way (1 to 4; 1
// gives the pixels of a still Frame). Big pictures are drawn in strips, so that memory stays at 4 bytes per pixel twice
// and some 240 MB. The picture is premultiplied, as image.RGBA is.
func (r *Renderer) Picture(ctx context.Context, s *Scene, cam Camera, w, h, samples int) (*image.RGBA, error) {
	if err := checkSize(w, h); err != nil {
		return nil, err
	}
	k := min(max(samples, 1), maxSupersample)
	above, err := r.Overlay(ctx, s, cam, w, h)
	if err != nil {
		return nil, err
	}
	above = append([]byte(nil), above...)
	out := image.NewRGBA(image.Rect(0, 0, w, h))
	rows := max(stripPixels/(w*k)/bandRows*bandRows, bandRows) // of samples: a multiple of the bands, and of all k
	f := &r.frame
	sampled := make([]byte, 4*w*k*k)
	for top := 0; top < h*k; top += rows {
		bottom := min(top+rows, h*k)
		f.Quality, f.Times = Still, Times{}
		if err := r.stage(ctx, &job{scene: s, lens: cam.Lens(w, h).resize(float64(k)), w: w * k, h: h * k,
			top: top, bottom: bottom, pixels: s.scale() * float64(k), quality: Still}); err != nil {
			return nil, err
		}
		m := newMixer(&f.Layers, s.Phase)
		for y := top / k; y < bottom/k; y++ {
			for j := range k {
				m.row(sampled[4*w*k*j:], (y*k+j-top)*w*k, w*k)
			}
			average(out.Pix[y*out.Stride:][:4*w], sampled, w, k)
			over(out.Pix[y*out.Stride:][:4*w], above[4*y*w:4*(y+1)*w])
		}
	}
	r.lens = cam.Lens(w, h)
	r.kept = stages{}
	r.frame.Layers.Factor = 0 // no frame to pick from
	return out, ctx.Err()
}

// average writes the mean of each k x k samples.
func average(into, sampled []byte, w, k int) {
	n := uint32(k * k)
	for x := range w {
		var sum [4]uint32
		for j := range k {
			for i := range k {
				at := 4 * (j*w*k + x*k + i)
				for c := range sum {
					sum[c] += uint32(sampled[at+c])
				}
			}
		}
		for c := range sum {
			into[4*x+c] = uint8((sum[c] + n/2) / n)
		}
	}
}
