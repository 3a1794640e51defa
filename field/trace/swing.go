package trace

import (
	"math"

	"shearprint/field/r3"
)

// Swing says how tau turns inside a triangle for which the vectors at its corners do not tell: because it turns by more than
// half a turn along an edge, where interpolated vectors go the shorter way round, or because the flatness of the triangle makes
// them go another way round than along the curved surface. The direction then comes from angles.
type Swing struct {
	Angle [3]float64 // of tau at the corners in the flat frame [rad]; their differences tell the way round
	// Turn is how tau turns along each edge, that from corner k to corner k+1 being the k-th, against parallel transport
	// [rad]. From half a turn on it does so evenly; below, as the interpolated vectors do, so that it goes on in the neighbour.
	Turn [3]float64
}

// SharpTurn is the largest turn along an edge that is followed as interpolated vectors make it [rad]: near half a turn they turn
// round at once, and a curve along such a place would take steps without number. The triangles beside such an edge should
// both swing.
const SharpTurn = math.Pi - 0.3

// wide tells whether tau turns evenly along edge k.
func (s *Swing) wide(k int32) bool { return math.Abs(s.Turn[k]) >= math.Pi }

// at returns the direction at barycentric weights b, for vectors of the given sizes at the corners: the angle, linear
// between the corners, plus what interpolated vectors differ by along the edges that are not wide, fading towards the
// opposite corner.
func (s *Swing) at(b [3]float64, size [3]float64) float64 {
	angle := 0.0
	for k := range 3 {
		angle += float64(b[k] * s.Angle[k])
	}
	for k := range int32(3) {
		n := (k + 1) % 3
		p, q := math.Max(b[k], 0), math.Max(b[n], 0) // beyond an edge as on it
		if s.wide(k) || p == 0 || q == 0 {
			continue
		}
		share := q / (p + q)
		turn := math.Min(SharpTurn, math.Max(-SharpTurn, s.Turn[k]))
		v := r3.Vec2{X: float64((1 - share) * size[k])}.Add(r3.Polar(float64(share*size[n]), turn))
		angle += float64((p + q) * (v.Angle() - float64(share*turn)))
	}
	return angle
}
