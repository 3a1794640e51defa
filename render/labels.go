package render

// area is a rectangle on the frame that is taken.
type area struct{ x0, y0, x1, y1 float64 }

func (a area) meets(b area) bool { return a.x0 < b.x1 && b.x0 < a.x1 && a.y0 < b.y1 && b.y0 < a.y1 }

// places are the positions of a label around its mark, the best first: direction and anchor.
var places = [...]struct{ dx, dy float64 }{
	{1, -1}, {1, 1}, {-1, -1}, {-1, 1}, {1, 0}, {-1, 0}, {0, -1}, {0, 1},
	{2.2, -1.6}, {2.2, 1.6}, {-2.2, -1.6}, {-2.2, 1.6}, {0, -2.4}, {0, 2.4},
}

// label is a label that looks for a place.
type label struct {
	text string
	x, y float64 // of the mark
	weak bool
}

// placeLabels draws the labels where they cover neither one another nor a mark nor what is taken already. Earlier
// labels have the better choice; one that finds no place is left out, since a heap of labels tells nothing. It returns
// what is taken: the given areas, the marks, and the labels' places.
func (c *canvas) placeLabels(labels []label, taken []area, t *typist, col *colors, pixels float64) []area {
	for _, l := range labels {
		r := float64(markSize * pixels)
		taken = append(taken, area{l.x - r, l.y - r, l.x + r, l.y + r})
	}
	for _, l := range labels {
		w, h := t.set(l.text).advance, float64(t.size*0.74)
		gap := float64(1.25 * markSize * pixels)
		for _, p := range places {
			x, y := l.x+float64(p.dx*gap), l.y+float64(p.dy*gap) // the label's corner or side nearest to the mark
			a := area{x, y, x + w, y + h}
			switch {
			case p.dx < 0:
				a.x0, a.x1 = x-w, x
			case p.dx == 0:
				a.x0, a.x1 = x-w/2, x+w/2
			}
			switch {
			case p.dy < 0:
				a.y0, a.y1 = y-h, y
			case p.dy == 0:
				a.y0, a.y1 = y-h/2, y+h/2
			}
			if a.x0 < 2 || a.y0 < 2 || a.x1 > float64(c.w)-2 || a.y1 > float64(c.h)-2 || covered(a, taken) {
				continue
			}
			alpha := 1.0
			if l.weak {
				alpha = 0.75
			}
			c.text(t, l.text, a.x0, a.y1, 0, col.ink, col.halo, alpha)
			pad := float64(1.5 * pixels)
			taken = append(taken, area{a.x0 - pad, a.y0 - pad, a.x1 + pad, a.y1 + pad})
			break
		}
	}
	return taken
}

func covered(a area, taken []area) bool {
	for _, b := range taken {
		if a.meets(b) {
			return true
		}
	}
	return false
}
