// Package render makes pictures of a run on the CPU: the same bytes on the command line, in a test and in the browser.
//
// # Use
//
//	r := render.NewRenderer()
//	scene := render.SceneOf(f, skeleton) // or a Scene filled by hand: only Field is needed
//	cam := render.NamedView("iso", f)    // or LookFrom, or a Camera turned by Orbit, Pan and Zoom
//	frame, err := r.Frame(ctx, scene, cam, 1280, 720, render.Still)
//	// frame.Pix: 1280 x 720 RGBA, premultiplied; frame.Layers: what the pixels were mixed from
//	loc, ok := r.Pick(x, y)              // the place on the surface under a pixel of that frame
//
// Picture makes a picture for a file: large sizes in strips, supersampled.
//
// # Pipeline
//
// The surface is rastered once per camera into a G-buffer (nearness, triangle, barycentric weights). The surface pass
// takes from it the projected unit direction of tau, the noise, light and the texture's weight; the convolution smears
// the noise along the direction (Stalling and Hege 1995); the scalar pass takes cp, p or |tau|. Mixing looks colours up
// in a palette and modulates them; lines, marks, labels and the legend lie above as an overlay. Every stage is kept
// until something that it depends on changes: a changed palette or range costs neither raster nor convolution.
//
// # Determinism
//
// Work is split over bands of rows with fixed bounds, so that the bytes do not depend on the number of processors, and
// a picture that is made in strips is the same as one made at once. Products that are added to something are wrapped in
// a conversion, which forbids fused multiply-add (see package r3).
package render
