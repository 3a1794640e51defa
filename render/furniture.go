package render

import (
	"slices"

	"shearprint/field/r3"
)

// Furniture is what stands in the corners of a picture: the legend of colours at the lower right, the key of marks and
// lines at the upper left, axes and scale bar at the lower left. Sizes are in points.
const (
	margin    = 16
	barWidth  = 13
	keyRow    = 18
	axesSize  = 24
	scaleGoal = 110 // the length that the scale bar comes close to
	panel     = 0.78
)

// layout holds the places of the furniture on the frame.
type layout struct {
	legend, key, scale area
	bar                area
	ticks              []float64
	step               float64
	rows               []keyEntry
	length             float64 // that the scale bar stands for
	bits               float64 // pixels of the scale bar
}

type keyEntry struct {
	text string
	mark *Mark
	line *Line
}

// furnitureAreas lays the furniture out and returns what it takes of the frame.
func (r *Renderer) furnitureAreas(s *Scene, c *canvas, pixels float64) []area {
	l := layout{}
	w, h := float64(c.w), float64(c.h)
	m := float64(margin * pixels)
	k := r.small.size / 12.5 // small frames have smaller furniture
	row := float64(r.small.size * 1.45)
	if q := s.Quantity.of(s.Field); q < Plain {
		height := min(max(h*0.42, 60*k), 260*k)
		l.ticks, l.step = ticks(r.low, r.high, int(height/(2.2*r.small.size)))
		wide := 0.0
		for _, t := range l.ticks {
			wide = max(wide, r.small.set(tickText(t, l.step)).advance)
		}
		title := r.legendTitle(s)
		wide = max(wide+float64(barWidth*k)+float64(12*k), r.small.set(title).advance)
		pad := float64(8 * k)
		l.legend = area{w - m - wide - float64(2*pad), h - m - height - row - float64(2*pad), w - m, h - m}
		l.bar = area{l.legend.x0 + pad, l.legend.y0 + pad + row, l.legend.x0 + pad + float64(barWidth*k), l.legend.y1 - pad}
	}
	if h > 300*pixels && w > 420*pixels {
		l.rows = r.keyEntries(s)
	}
	if len(l.rows) > 0 || s.Title != "" {
		wide := r.small.set(s.Title).advance
		for _, e := range l.rows {
			wide = max(wide, float64(40*k)+r.small.set(e.text).advance)
		}
		lines := float64(len(l.rows))
		if s.Title != "" {
			lines++
		}
		l.key = area{m, m, m + wide + float64(20*k), m + float64(lines*keyRow*k) + float64(10*k)}
	}
	unit := r.lens.Pixel(r.lens.distance)
	l.length = niceStep(scaleGoal * k * unit / 2)
	l.bits = l.length / unit
	l.scale = area{m, h - m - float64(2*row), m + max(l.bits, 3*axesSize*k), h - m}
	l.scale.y0 -= float64(2.6 * axesSize * k)
	r.layout = l
	return []area{l.legend, l.key, l.scale}
}

// keyEntries lists the kinds of marks and lines that the scene has, each once.
func (r *Renderer) keyEntries(s *Scene) []keyEntry {
	var rows []keyEntry
	shapes := [...]string{NodeMark: "node", FocusMark: "focus", SaddleMark: "saddle", DegenerateMark: "degenerate point"}
	senses := [...]string{NeutralSense: "", AttachmentSense: " of attachment", SeparationSense: " of separation"}
	seen := map[[2]uint8]bool{}
	for shape := range shapes {
		for _, sense := range [...]Sense{SeparationSense, AttachmentSense, NeutralSense} {
			for i := range s.Marks {
				m := &s.Marks[i]
				key := [2]uint8{uint8(shape), uint8(sense)}
				if m.Shape == Shape(shape) && m.Sense == sense && !seen[key] {
					seen[key] = true
					rows = append(rows, keyEntry{text: shapes[shape] + senses[sense],
						mark: &Mark{Shape: m.Shape, Sense: m.Sense}})
				}
			}
		}
	}
	lines := [...]string{AttachmentSense: "attachment line", SeparationSense: "separation line"}
	forms := [...]string{ClosedForm: "", HornForm: ", horn", OpenForm: ", open", CycleForm: ", closed orbit"}
	for _, sense := range [...]Sense{SeparationSense, AttachmentSense} {
		for form := range forms {
			key := Line{Sense: sense, Form: Form(form)}
			if slices.ContainsFunc(s.Lines, func(l Line) bool { return l.Sense == sense && l.Form == key.Form }) {
				rows = append(rows, keyEntry{text: lines[sense] + forms[form], line: &key})
			}
		}
	}
	if slices.ContainsFunc(s.Lines, func(l Line) bool { return l.Sense == NeutralSense }) {
		rows = append(rows, keyEntry{text: "separatrix, neither", line: &Line{Sense: NeutralSense}})
	}
	return rows
}

// furniture draws what furnitureAreas has laid out.
func (r *Renderer) furniture(s *Scene, c *canvas, col *colors, pixels float64) {
	l := &r.layout
	k := r.small.size / 12.5
	if l.legend.x1 > 0 {
		r.drawLegend(s, c, col, k)
	}
	if l.key.x1 > 0 {
		c.rect(l.key.x0, l.key.y0, l.key.x1, l.key.y1, col.halo, panel)
		y := l.key.y0 + float64(5*k)
		if s.Title != "" {
			c.text(r.small, s.Title, l.key.x0+float64(10*k), y+float64(13*k), 0, col.ink, col.halo, 1)
			y += float64(keyRow * k)
		}
		for _, e := range l.rows {
			middle := y + keyRow*k/2
			if e.mark != nil {
				c.mark(e.mark, l.key.x0+float64(22*k), middle, 1, col, 0.82*k)
			} else {
				c.line([]vertex{{l.key.x0 + float64(7*k), middle, 1, 1}, {l.key.x0 + float64(37*k), middle, 1, 1}}, e.line, col, k)
			}
			c.text(r.small, e.text, l.key.x0+float64(44*k), middle+float64(4.4*k), 0, col.ink, col.halo, 1)
			y += float64(keyRow * k)
		}
	}
	r.drawScale(s, c, col, k)
	r.drawAxes(c, col, k)
}

func (r *Renderer) drawScale(s *Scene, c *canvas, col *colors, k float64) {
	l := &r.layout
	x0, y := l.scale.x0, l.scale.y1-float64(3*k)
	c.rect(x0-float64(1.5*k), y-float64(3.5*k), x0+l.bits+float64(1.5*k), y+float64(3.5*k), col.halo, 0.8)
	c.rect(x0, y-float64(1.2*k), x0+l.bits, y+float64(1.2*k), col.ink, 1)
	for _, x := range [2]float64{x0, x0 + l.bits} {
		c.rect(x-float64(0.7*k), y-float64(4*k), x+float64(0.7*k), y+float64(2*k), col.ink, 1)
	}
	text := tickText(l.length, l.length)
	if u := s.Field.Units.Length; u != "" {
		text += " " + u
	}
	c.text(r.small, text, x0+l.bits/2, y-float64(7*k), 0.5, col.ink, col.halo, 1)
}

func (r *Renderer) drawAxes(c *canvas, col *colors, k float64) {
	l := &r.layout
	x, y := l.scale.x0+float64(1.3*axesSize*k), l.scale.y0+float64(1.25*axesSize*k)
	axes := [3]struct {
		name string
		way  r3.Vec
	}{{"x", r3.Vec{X: 1}}, {"y", r3.Vec{Y: 1}}, {"z", r3.Vec{Z: 1}}}
	drawn := [3]bool{}
	for range axes { // those that point away first
		far := -1
		for i, a := range axes {
			if !drawn[i] && (far < 0 || a.way.Dot(r.lens.forward) > axes[far].way.Dot(r.lens.forward)) {
				far = i
			}
		}
		drawn[far] = true
		a := axes[far]
		dx, dy := float64(a.way.Dot(r.lens.right)*axesSize*k), float64(-a.way.Dot(r.lens.up)*axesSize*k)
		arrow := []vertex{{x, y, 1, 1.6 * k}, {x + dx, y + dy, 1, 1.6 * k}}
		c.strokes([][]vertex{arrow}, 1.2*k, col.halo, 0.8)
		c.strokes([][]vertex{arrow}, 0, col.ink, 1)
		if length := round(dx, dy); length > 0.25*axesSize*k {
			s := 1 + 8*k/length
			c.text(r.small, a.name, x+float64(dx*s), y+float64(dy*s)+float64(4*k), 0.5, col.ink, col.halo, 1)
		}
	}
}
