package render

import (
	"math"
)

func (r *Renderer) legendTitle(s *Scene) string {
	q := s.Quantity.of(s.Field)
	title := q.String()
	if q == TauSize {
		title = "|τ|"
	}
	if u := q.unit(s.Field); u != "" {
		title += " [" + u + "]"
	}
	return title
}

func (r *Renderer) drawLegend(s *Scene, c *canvas, col *colors, k float64) {
	l := &r.layout
	c.rect(l.legend.x0, l.legend.y0, l.legend.x1, l.legend.y1, col.halo, panel)
	c.text(r.small, r.legendTitle(s), l.bar.x0, l.bar.y0-float64(8*k), 0, col.ink, col.halo, 1)
	c.rect(l.bar.x0-float64(1.2*k), l.bar.y0-float64(1.2*k), l.bar.x1+float64(1.2*k), l.bar.y1+float64(1.2*k), col.ink, 1)
	for y := int(l.bar.y0); y < int(math.Ceil(l.bar.y1)); y++ {
		t := (l.bar.y1 - float64(y) - 0.5) / (l.bar.y1 - l.bar.y0)
		color := r.frame.Layers.Table[1+int(float64(min(max(t, 0), 1)*254)+0.5)]
		c.rect(l.bar.x0, max(float64(y), l.bar.y0), l.bar.x1, min(float64(y+1), l.bar.y1), color, 1)
	}
	for _, t := range l.ticks {
		y := l.bar.y1 - float64((t-r.low)/(r.high-r.low)*(l.bar.y1-l.bar.y0))
		c.rect(l.bar.x1, y-float64(0.6*k), l.bar.x1+float64(4.5*k), y+float64(0.6*k), col.ink, 1)
		c.text(r.small, tickText(t, l.step), l.bar.x1+float64(7.5*k), y+float64(0.36*r.small.size), 0, col.ink, col.halo, 1)
	}
}
