package field

import (
	"math"
	"slices"

	"shearprint/field/r3"
)

// takeVectors brings tau into the vertices' charts and tangent planes.
//
// Point data is projected to each triangle around the vertex, turned into the chart there, and averaged with the corner
// angle times 1 + cos of the angle from the corner's bisector as weight: at a sharp edge the sheet into which the vector
// points decides, and the weight vanishes where a direction straight backwards would be ambiguous. Face data is averaged
// in the chart with the corner angles as weights.
func (f *Field) takeVectors(raw *Raw, r *repair) {
	f.Tau = make([]r3.Vec2, len(f.Points))
	f.Tau3 = make([]r3.Vec, len(f.Points))
	f.size = make([]float64, len(f.Points))
	f.angle = make([]float64, len(f.Points))
	Parallel(len(f.Points), func(from, to int) {
		for v := int32(from); v < int32(to); v++ {
			if raw.FaceTau != nil {
				f.Tau[v], f.Tau3[v] = f.meanOfFaces(raw, r, v)
			} else {
				f.Tau[v], f.Tau3[v] = f.intoChart(raw.Tau[r.point[v]], v)
			}
			f.size[v], f.angle[v] = f.Tau[v].Norm(), f.Tau[v].Angle()
		}
	})
	for _, s := range f.size {
		f.MaxTau = math.Max(f.MaxTau, s)
	}
}

func (f *Field) intoChart(tau r3.Vec, v int32) (r3.Vec2, r3.Vec) {
	var sum r3.Vec2
	weights := 0.0
	for h := range f.Fan(v) {
		d := f.Drop(h/3, tau)
		phi := d.Angle()
		corner := f.CornerAngle(h)
		_, c := r3.SinCos(phi - f.edgeAngle(h) - corner/2)
		w := float64(corner * (1 + c))
		sum = sum.Add(r3.Polar(float64(w*d.Norm()), f.chartAngleOf(h, phi)))
		weights += w
	}
	tangent := tau.Reject(f.Normals[v])
	if weights == 0 {
		return r3.Vec2{}, tangent
	}
	return sum.Scale(1 / weights), tangent
}

func (f *Field) meanOfFaces(raw *Raw, r *repair, v int32) (r3.Vec2, r3.Vec) {
	var sum r3.Vec2
	var sum3 r3.Vec
	weights := 0.0
	for h := range f.Fan(v) {
		tau := raw.FaceTau[r.origin[h/3]]
		d := f.Drop(h/3, tau)
		w := f.CornerAngle(h)
		sum = sum.Add(r3.Polar(float64(w*d.Norm()), f.chartAngleOf(h, d.Angle())))
		sum3 = sum3.AddScaled(w, f.Lift(h/3, d))
		weights += w
	}
	if weights == 0 {
		return r3.Vec2{}, r3.Vec{}
	}
	return sum.Scale(1 / weights), sum3.Scale(1 / weights).Reject(f.Normals[v])
}

// Redirected returns a field on the same mesh that has other vectors at the given vertices, in the polar form of their
// charts, and the rest, with MaxTau, as it was.
func (f *Field) Redirected(vertices []int32, polar func(v int32) (size, angle float64)) *Field {
	g := *f
	g.Tau, g.Tau3 = slices.Clone(f.Tau), slices.Clone(f.Tau3)
	g.size, g.angle = slices.Clone(f.size), slices.Clone(f.angle)
	for _, v := range vertices {
		g.size[v], g.angle[v] = polar(v)
		g.Tau[v] = r3.Polar(g.size[v], g.angle[v])
		var sum r3.Vec
		for h := range f.Fan(v) {
			d := f.Lift(h/3, r3.Polar(1, f.FlatAngle(h, g.angle[v])))
			sum = sum.AddScaled(f.CornerAngle(h), d)
		}
		g.Tau3[v] = sum.Reject(f.Normals[v]).Unit().Scale(g.size[v])
	}
	return &g
}

// scalar takes point values, or the mean of face values weighted by corner angle, to the vertices. A missing value is
// filled with the mean of its neighbours', and told; where more than half are missing the quantity is left out.
func (r *repair) scalar(name string, point, face []float64, m *Mesh) []float64 {
	if point == nil && face == nil {
		return nil
	}
	x := make([]float64, len(m.Points))
	for v := range int32(len(x)) {
		if face == nil {
			x[v] = point[r.point[v]]
			continue
		}
		sum, weights := 0.0, 0.0
		for h := range m.Fan(v) {
			if y := face[r.origin[h/3]]; y-y == 0 {
				w := m.CornerAngle(h)
				sum += float64(w * y)
				weights += w
			}
		}
		x[v] = sum / weights // NaN where no face has a value
	}
	return r.fill(name, x, m)
}

func (r *repair) fill(name string, x []float64, m *Mesh) []float64 {
	var missing []int32
	for v := range int32(len(x)) {
		if x[v]-x[v] != 0 {
			missing = append(missing, v)
			x[v] = math.NaN()
		}
	}
	if len(missing) == 0 {
		return x
	}
	total, where := len(missing), place(m.Points[missing[0]])
	if 2*total > len(x) {
		r.find(Doubtful, "dropped-"+name, total, where,
			"%s is missing at %d of %d vertices and was left out altogether", name, total, len(x))
		return nil
	}
	for len(missing) > 0 { // from the edges of each gap inward
		value := make([]float64, len(missing))
		for i, v := range missing {
			value[i] = m.meanAround(x, v)
		}
		var left []int32
		for i, v := range missing {
			x[v] = value[i]
			if value[i] != value[i] {
				left = append(left, v)
			}
		}
		if len(left) == len(missing) { // a part without any value
			for _, v := range left {
				x[v] = 0
			}
			break
		}
		missing = left
	}
	r.find(Doubtful, "filled-"+name, total, where,
		"%s was missing at %d vertices and was filled from their neighbours", name, total)
	return x
}

// meanAround returns the mean of the neighbours' values that are known; NaN if none is.
func (m *Mesh) meanAround(x []float64, v int32) float64 {
	sum, n := 0.0, 0
	for h := range m.Fan(v) {
		for _, w := range [2]int32{m.Tip(h), m.Tail(Prev(h))} {
			if x[w] == x[w] {
				sum += x[w]
				n++
			}
		}
	}
	return sum / float64(n)
}
