package format

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"shearprint/field"
	"shearprint/field/r3"
)

// Points that lie on the mirror plane. Exports in single precision put them off it by 1e-7 of the coordinates; solvers
// that move meshes, by more, but by little against the edges. The larger distance holds for points on the rim alone.
const (
	onPlaneFraction = 1e-6 // of the size
	rimFraction     = 0.05 // of the shortest edge of the rim at the point
)

// mirror completes a half model: the points are reflected, the vectors with them, and the points on the plane are one
// with their images.
func mirror(src source, raw *field.Raw, opt Options) error {
	if opt.Mirror == "" {
		return nil
	}
	axis, value, err := mirrorPlane(src, opt.Mirror)
	if err != nil {
		return err
	}
	size := boxOf(raw.Points).Diagonal()
	if size-size != 0 {
		return nil // numbers that Build refuses
	}
	m := mirroring{axis: axis, value: value}
	if err := m.findSeam(src, raw, rimDistances(raw, float64(onPlaneFraction*size))); err != nil {
		return err
	}
	m.dropFlat(raw)
	m.complete(raw)
	note(raw, field.Note, "mirrored", len(m.seam), "",
		"the run was completed at %c = %g; %d points on the plane are one with their "+
			"images", "xyz"[axis], value, len(m.seam))
	return nil
}

// mirrorPlane reads "y" or "y=0.3".
func mirrorPlane(src source, s string) (axis int, value float64, err error) {
	name, number, given := strings.Cut(s, "=")
	axis = strings.Index("xyz", strings.ToLower(strings.TrimSpace(name)))
	if given {
		value, err = strconv.ParseFloat(strings.TrimSpace(number), 64)
	}
	if len(strings.TrimSpace(name)) != 1 || axis < 0 || err != nil || value-value != 0 {
		return 0, 0, src.fail("", "write --mirror y or --mirror y=0.25", "there is no plane %s (--mirror)", quote(s))
	}
	return axis, value, nil
}

type mirroring struct {
	axis   int
	value  float64
	onSeam []bool
	seam   []int32 // points on the plane
}

func (m *mirroring) coordinate(v *r3.Vec) *float64 {
	return [3]*float64{&v.X, &v.Y, &v.Z}[m.axis]
}

// rimDistances returns, per point, how near to the plane it must be to lie on it.
func rimDistances(raw *field.Raw, least float64) []float64 {
	keys := make([]uint64, 0, 3*len(raw.Tris))
	for _, tri := range raw.Tris {
		for k := range 3 {
			a, b := tri[k], tri[(k+1)%3]
			keys = append(keys, uint64(min(a, b))<<32|uint64(max(a, b)))
		}
	}
	slices.Sort(keys)
	shortest := make([]float64, len(raw.Points))
	for i, key := range keys {
		if i > 0 && keys[i-1] == key || i+1 < len(keys) && keys[i+1] == key {
			continue // an edge inside
		}
		a, b := int32(key>>32), int32(uint32(key))
		d := float64(rimFraction * raw.Points[a].Sub(raw.Points[b]).Norm())
		for _, v := range [2]int32{a, b} {
			if shortest[v] == 0 || d < shortest[v] {
				shortest[v] = d
			}
		}
	}
	for v, d := range shortest {
		shortest[v] = math.Max(d, least)
	}
	return shortest
}

// findSeam puts the points near the plane on it, and refuses runs that do not end there.
func (m *mirroring) findSeam(src source, raw *field.Raw, tol []float64) error {
	m.onSeam = make([]bool, len(raw.Points))
	sides := [2]int{}
	nearest := math.Inf(1)
	for i := range raw.Points {
		p := &raw.Points[i]
		if !p.Finite() {
			continue
		}
		x := m.coordinate(p)
		d := *x - m.value
		switch {
		case math.Abs(d) <= tol[i]:
			*x = m.value
			m.onSeam[i] = true
			m.seam = append(m.seam, int32(i))
			continue
		case d > 0:
			sides[1]++
		default:
			sides[0]++
		}
		if math.Abs(d) < math.Abs(nearest) {
			nearest = d
		}
	}
	axis := "xyz"[m.axis]
	if sides[0] > 0 && sides[1] > 0 {
		return src.fail("", "give the plane where the half model ends, as --mirror y=VALUE",
			"the run lies on both sides of %c = %g: "+
				"%d and %d points", axis, m.value, sides[0], sides[1])
	}
	if len(m.seam) < 2 {
		return src.fail("", "give the plane where the half model ends, as --mirror y=VALUE",
			"the run does not reach the plane %c = %g; its nearest point has %c = %.6g", axis, m.value, axis, m.value+nearest)
	}
	return nil
}

// dropFlat drops triangles that lie in the plane: a symmetry plane that was exported with the wall.
func (m *mirroring) dropFlat(raw *field.Raw) {
	flat := func(t [3]int32) bool { return m.onSeam[t[0]] && m.onSeam[t[1]] && m.onSeam[t[2]] }
	n := 0
	for t, tri := range raw.Tris {
		if flat(tri) {
			continue
		}
		raw.Tris[n] = tri
		moveFace(raw, n, t)
		n++
	}
	if n == len(raw.Tris) {
		return
	}
	note(raw, field.Repaired, "dropped-symmetry-plane", len(raw.Tris)-n, "",
		"%d triangles lay in the mirror plane and were dropped",
		len(raw.Tris)-n)
	cutFaces(raw, n)
}

func moveFace(raw *field.Raw, n, t int) {
	if raw.Face != nil {
		raw.Face[n] = raw.Face[t]
	}
	if raw.FaceTau != nil {
		raw.FaceTau[n] = raw.FaceTau[t]
	}
	if raw.FaceP != nil {
		raw.FaceP[n] = raw.FaceP[t]
	}
	if raw.FaceCp != nil {
		raw.FaceCp[n] = raw.FaceCp[t]
	}
}

func cutFaces(raw *field.Raw, n int) {
	raw.Tris = raw.Tris[:n]
	if raw.Face != nil {
		raw.Face = raw.Face[:n]
	}
	if raw.FaceTau != nil {
		raw.FaceTau = raw.FaceTau[:n]
	}
	if raw.FaceP != nil {
		raw.FaceP = raw.FaceP[:n]
	}
	if raw.FaceCp != nil {
		raw.FaceCp = raw.FaceCp[:n]
	}
}

// complete adds the images.
func (m *mirroring) complete(raw *field.Raw) {
	number := make([]int32, len(raw.Points))
	for i := range number {
		if m.onSeam[i] {
			number[i] = int32(i)
			if raw.Tau != nil { // the mean with its image has no part across the plane
				*m.coordinate(&raw.Tau[i]) = 0
			}
			continue
		}
		number[i] = int32(len(raw.Points))
		raw.Points = append(raw.Points, m.image(raw.Points[i], 2*m.value))
		if raw.Tau != nil {
			raw.Tau = append(raw.Tau, m.image(raw.Tau[i], 0))
		}
		if raw.P != nil {
			raw.P = append(raw.P, raw.P[i])
		}
		if raw.Cp != nil {
			raw.Cp = append(raw.Cp, raw.Cp[i])
		}
	}
	faces := int32(faceCount(raw))
	for t, tri := range raw.Tris { // the triangles there were; those added are not visited
		raw.Tris = append(raw.Tris, [3]int32{number[tri[0]], number[tri[2]], number[tri[1]]})
		if raw.Face != nil {
			raw.Face = append(raw.Face, raw.Face[t]+faces)
		}
		if raw.FaceTau != nil {
			raw.FaceTau = append(raw.FaceTau, m.image(raw.FaceTau[t], 0))
		}
		if raw.FaceP != nil {
			raw.FaceP = append(raw.FaceP, raw.FaceP[t])
		}
		if raw.FaceCp != nil {
			raw.FaceCp = append(raw.FaceCp, raw.FaceCp[t])
		}
	}
}

// image reflects a point (twice = 2 value) or a vector (twice = 0).
func (m *mirroring) image(v r3.Vec, twice float64) r3.Vec {
	x := m.coordinate(&v)
	*x = twice - *x
	return v
}
