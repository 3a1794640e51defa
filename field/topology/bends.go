package topology

import (
	"shearprint/field"
	"shearprint/field/r3"
)

// bends tells how the wall turns, by a quadratic fit to the vertices around each triangle: the normals at the vertices
// of an irregular mesh are off by what an edge turns, so that their differences converge to nothing.
type bends struct {
	around
	tri     int32     // of the last fit; -1 for none
	axes    [2]r3.Vec // in the triangle's plane
	curve   [3]float64
	samples [][5]float64
}

func newBends(f *field.Field) *bends { return &bends{around: *newAround(f), tri: -1} }

// along returns the derivative of the unit normal along the vector t in the plane of a triangle [unit of t per unit of
// length]; zero where creases leave too few vertices to tell.
func (b *bends) along(tri int32, t r3.Vec) r3.Vec {
	if tri != b.tri {
		b.fit(tri)
	}
	// The normal of the height z over the plane is (-dz/dx, -dz/dy, 1), nearly.
	x, y := t.Dot(b.axes[0]), t.Dot(b.axes[1])
	return b.axes[0].Scale(-float64(2*b.curve[0]*x)-float64(b.curve[1]*y)).
		AddScaled(-float64(b.curve[1]*x)-float64(2*b.curve[2]*y), b.axes[1])
}

// fit finds the second derivatives of the height of the surface over the triangle's plane.
func (b *bends) fit(tri int32) {
	f := b.f
	c := f.Corner(tri)
	n := c.Normal().Unit()
	origin, length := c.At([3]float64{1. / 3, 1. / 3, 1. / 3}), b.meanEdge(tri)
	b.tri, b.axes, b.curve = tri, tangentFrame(n), [3]float64{}
	b.gather(fitRings, tri)
	b.samples = b.samples[:0]
	for _, v := range b.vertices { // also those on creases, whose places are as good as others
		d := f.Points[v].Sub(origin).Scale(1 / length)
		b.samples = append(b.samples, [5]float64{d.Dot(b.axes[0]), d.Dot(b.axes[1]), 0, 0, d.Dot(n)})
	}
	if len(b.samples) < fewSamples {
		return
	}
	if q, ok := fit(b.samples, 1); ok {
		for k := range b.curve {
			b.curve[k] = q.z[3+k] / length
		}
	}
}
