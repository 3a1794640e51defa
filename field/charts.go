package field

import (
	"iter"
	"math"

	"shearprint/field/r3"
)

// Fan runs over the half-edges that leave vertex v, counter-clockwise, beginning with Out[v].
func (m *Mesh) Fan(v int32) iter.Seq[int32] {
	return func(yield func(int32) bool) {
		first := m.Out[v]
		for h := first; h >= 0; {
			if !yield(h) {
				return
			}
			h = m.Twin[Prev(h)]
			if h == first {
				return
			}
		}
	}
}

// OnRim tells whether vertex v lies on a rim.
func (m *Mesh) OnRim(v int32) bool { return m.Out[v] >= 0 && m.Twin[m.Out[v]] < 0 }

// trueCorner returns the angle in space between half-edge h and the one that arrives at its tail.
func (m *Mesh) trueCorner(h int32) float64 {
	c := m.Corner(h / 3)
	k := h % 3
	a, b := c[(k+1)%3].Sub(c[k]), c[(k+2)%3].Sub(c[k])
	return r3.Atan2(a.Cross(b).Norm(), a.Dot(b))
}

// makeCharts lays the corner angles around every vertex one after the other, scaled to 2 pi inside and unscaled on a
// rim.
func (m *Mesh) makeCharts() {
	m.polar = make([]float64, len(m.Twin))
	m.scale = make([]float64, len(m.Points))
	m.total = make([]float64, len(m.Points))
	Parallel(len(m.Points), func(from, to int) {
		for v := int32(from); v < int32(to); v++ {
			m.makeChart(v)
		}
	})
}

func (m *Mesh) makeChart(v int32) {
	m.scale[v] = 1
	sum := 0.0
	for h := range m.Fan(v) {
		m.polar[h] = sum
		sum += m.trueCorner(h)
	}
	m.total[v] = sum
	if m.Out[v] < 0 || m.OnRim(v) || sum == 0 {
		return
	}
	m.scale[v] = 2 * math.Pi / sum
	m.total[v] = 2 * math.Pi
	for h := range m.Fan(v) {
		m.polar[h] *= m.scale[v]
	}
}

// ChartAngle returns the angle of half-edge h in the polar chart of its tail, in [0, Total).
func (m *Mesh) ChartAngle(h int32) float64 { return m.polar[h] }

// Total returns the angle of vertex v's whole chart: 2 pi inside, the sum of its corner angles on a rim.
func (m *Mesh) Total(v int32) float64 { return m.total[v] }

// ChartWidth returns the angle that the corner at the tail of h takes in the tail's chart.
func (m *Mesh) ChartWidth(h int32) float64 {
	next := m.Twin[Prev(h)]
	v := m.Tail(h)
	if next < 0 || next == m.Out[v] {
		return m.total[v] - m.polar[h]
	}
	return m.polar[next] - m.polar[h]
}

// CornerAngle returns the angle in space of the corner at the tail of h.
func (m *Mesh) CornerAngle(h int32) float64 { return m.ChartWidth(h) / m.scale[m.Tail(h)] }

// Transport returns the angle to add to a chart angle at the tail of h to have the parallel direction in the chart at
// its tip. The transport of the twin is the opposite, up to a multiple of 2 pi and rounding.
func (m *Mesh) Transport(h int32) float64 {
	n := Next(h)
	return (m.polar[n] + m.ChartWidth(n)) + math.Pi - m.polar[h]
}

// Curvature returns what parallel transport counter-clockwise around triangle t turns a vector by: the sum of its
// corners' chart widths less pi. Summed over a closed part it is 2 pi times the Euler characteristic.
func (m *Mesh) Curvature(t int32) float64 {
	return (m.ChartWidth(3*t) + m.ChartWidth(3*t+1) + m.ChartWidth(3*t+2)) - math.Pi
}

// FlatAngle takes a direction from the chart of the tail of h to the flat frame of h's triangle. Directions are measured
// from the corner's bisector, so that those along the two edges stay along them.
func (m *Mesh) FlatAngle(h int32, phi float64) float64 {
	w := m.ChartWidth(h)
	v := m.Tail(h)
	d := r3.Wrap(phi-(m.polar[h]+w/2)) / m.scale[v]
	return m.edgeAngle(h) + w/(2*m.scale[v]) + d
}

// chartAngleOf is the inverse of FlatAngle.
func (m *Mesh) chartAngleOf(h int32, flat float64) float64 {
	w := m.ChartWidth(h)
	s := m.scale[m.Tail(h)]
	d := r3.Wrap(flat - m.edgeAngle(h) - w/(2*s))
	return m.polar[h] + w/2 + float64(d*s)
}

// edgeAngle returns the direction of half-edge h in the flat frame of its triangle, from the triangle's angles.
func (m *Mesh) edgeAngle(h int32) float64 {
	switch t := h / 3; h % 3 {
	case 1:
		return math.Pi - m.CornerAngle(3*t+1)
	case 2:
		return math.Pi + m.CornerAngle(3*t)
	}
	return 0
}
