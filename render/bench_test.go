package render_test

import (
	"context"
	"fmt"
	"os"
	"slices"
	"sync"
	"testing"

	"shearprint/field"
	"shearprint/field/exact"
	"shearprint/field/format"
	"shearprint/field/r3"
	"shearprint/field/topology"
	"shearprint/render"
)

// strained is the unit sphere in pure strain, whose field has nodes and saddles: as rich as a sphere gets.
func strained(triangles int) *field.Field {
	raw := exact.Sphere(1, triangles)
	tau, p := exact.StokesSphere(r3.Vec{X: 0.3}, r3.Vec{Z: 0.2}, exact.Diagonal(1, -0.3, -0.7))
	for _, x := range raw.Points {
		raw.Tau = append(raw.Tau, tau(x))
		raw.P = append(raw.P, p(x))
	}
	f, err := field.Build(raw)
	if err != nil {
		panic(err)
	}
	return f
}

var benchSizes = []int{250_000, 1_000_000, 4_000_000}

var benchField = map[int]func() *field.Field{
	250_000:   sync.OnceValue(func() *field.Field { return strained(250_000) }),
	1_000_000: sync.OnceValue(func() *field.Field { return strained(1_000_000) }),
	4_000_000: sync.OnceValue(func() *field.Field { return strained(4_000_000) }),
}

// BenchmarkFrame draws 1280 x 720 frames of a sphere that fills most of the frame's height, each from a new direction,
// and reports the median of each stage in milliseconds.
func BenchmarkFrame(b *testing.B) {
	for _, n := range benchSizes {
		for _, q := range []render.Quality{render.Moving, render.Still} {
			name := fmt.Sprintf("%d/%s", n, [...]string{render.Moving: "moving", render.Still: "still"}[q])
			b.Run(name, func(b *testing.B) {
				f := benchField[n]()
				cam := render.NamedView("iso", f).Fit(f, 16.0/9)
				r := render.NewRenderer()
				scene := &render.Scene{Field: f}
				var all [6][]float64
				frame := func() render.Times {
					cam = cam.Orbit(0.02, 0)
					fr, err := r.Frame(context.Background(), scene, cam, 1280, 720, q)
					if err != nil {
						b.Fatal(err)
					}
					return fr.Times
				}
				frame()
				for b.Loop() {
					t := frame()
					for i, d := range []float64{float64(t.Raster), float64(t.Surface), float64(t.Convolve), float64(t.Scalar),
						float64(t.Overlay), float64(t.Mix)} {
						all[i] = append(all[i], d/1e6)
					}
				}
				for i, name := range []string{"raster", "surface", "convolve", "scalar", "overlay", "mix"} {
					slices.Sort(all[i])
					b.ReportMetric(all[i][len(all[i])/2], name+"-ms")
				}
			})
		}
	}
}

// BenchmarkRecolour draws a still frame again with another range: nothing but the mix is done.
func BenchmarkRecolour(b *testing.B) {
	f := benchField[250_000]()
	cam := render.NamedView("iso", f).Fit(f, 16.0/9)
	r := render.NewRenderer()
	for b.Loop() {
		for _, bands := range []int{0, 8} {
			s := &render.Scene{Field: f, Bands: bands}
			if _, err := r.Frame(context.Background(), s, cam, 1280, 720, render.Still); err != nil {
				b.Fatal(err)
			}
		}
	}
}

// BenchmarkOverlay draws the demo's moving frame with all its points and lines again and again from new directions, and
// reports the median of the overlay in milliseconds.
func BenchmarkOverlay(b *testing.B) {
	data, err := os.ReadFile("../testdata/runs/radome.ply")
	if err != nil {
		b.Fatal(err)
	}
	f, err := format.Load("radome.ply", data, format.Options{})
	if err != nil {
		b.Fatal(err)
	}
	sk, err := topology.Find(context.Background(), f, topology.Options{Lines: true})
	if err != nil {
		b.Fatal(err)
	}
	scene := render.SceneOf(f, sk)
	cam := render.NamedView("iso", f).Fit(f, 16.0/9)
	r := render.NewRenderer()
	var all []float64
	for b.Loop() {
		cam = cam.Orbit(0.02, 0)
		fr, err := r.Frame(context.Background(), scene, cam, 1280, 720, render.Moving)
		if err != nil {
			b.Fatal(err)
		}
		all = append(all, float64(fr.Times.Overlay)/1e6)
	}
	slices.Sort(all)
	b.ReportMetric(all[len(all)/2], "overlay-ms")
}
