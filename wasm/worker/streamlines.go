//go:build js && wasm

package main

import (
	"context"

	"shearprint/field"
	"shearprint/render"
)

// streamlines holds the evenly spaced streamlines of a run, which are made when they are first wanted.
type streamlines struct {
	of   *field.Field
	locs [][]field.Loc // nil until they are made
}

// linesAcross is the number of streamlines side by side across the diagonal of a run.
const linesAcross = 60

// streamlines returns those of the open run, or none while they are being made: the picture then comes anew.
func (p *painter) streamlines() [][]field.Loc {
	f := p.field
	if p.lines.of == f {
		return p.lines.locs
	}
	p.lines = streamlines{of: f}
	go func() {
		locs, err := render.Streamlines(patient{context.Background()}, f, f.Diagonal()/linesAcross)
		if err != nil {
			return
		}
		p.enter("streamlines", func() {
			if p.lines.of == f {
				p.lines.locs = locs
				p.compose()
			}
		})
	}()
	return nil
}
