package render

import "context"

// overlay draws what lies above the surface. factor is the number of frame pixels per pixel of the plate.
func (r *Renderer) overlay(ctx context.Context, s *Scene, c *canvas, factor float64) error {
	return ctx.Err()
}
