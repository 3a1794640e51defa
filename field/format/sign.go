package format

import (
	"math"

	"shearprint/field"
	"shearprint/field/r3"
)

// normalRefused and normalDoubtful bound the share of the vectors that points out of the surface, weighted by area and
// size. Converged solutions have 0.01 and vertex means at creases 0.1; vectors without any relation to the surface have
// a half; forces with the pressure in them, nearly all.
const (
	normalDoubtful = 0.15
	normalRefused  = 0.9
)

// normalContent measures how much of tau is not tangential, tells it, and refuses vectors that are no wall shear
// stress.
func normalContent(src source, raw *field.Raw, _ Options) error {
	normal, all := 0.0, 0.0
	for t, tri := range raw.Tris {
		n := r3.Tri{raw.Points[tri[0]], raw.Points[tri[1]], raw.Points[tri[2]]}.Normal()
		area, unit := n.Norm(), n.Unit()
		each := func(v r3.Vec, w float64) {
			if v.Finite() && area-area == 0 {
				normal += float64(w * area * math.Abs(v.Dot(unit)))
				all += float64(w * area * v.Norm())
			}
		}
		if raw.FaceTau != nil {
			each(raw.FaceTau[t], 1)
			continue
		}
		for _, v := range tri {
			each(raw.Tau[v], 1./3)
		}
	}
	if all == 0 || all-all != 0 {
		return nil
	}
	share := normal / all
	switch {
	case share > normalRefused:
		return src.fail("", "name the wall shear stress with --tau; check that its axes are those of the positions",
			"%.0f %% of the vectors' size points out of the surface: this is no wall shear stress (a force with the "+
				"pressure in it, "+
				"a velocity away from the wall, or other axes?)", 100*share)
	case share > normalDoubtful:
		note(raw, field.Doubtful, "normal-content", 0, "",
			"%.2g %% of the vectors' size points out of the surface; it was projected "+
				"away", 100*share)
	case share > 0:
		note(raw, field.Note, "normal-content", 0, "",
			"%.2g %% of the vectors' size points out of the surface; it was projected away",
			100*share)
	}
	return nil
}

// signLevel is the mean cosine beyond which a sign is told. With the right sign the real runs of the tests have 0.92 to
// 0.99 where the pressure is highest and 0.44 to 0.88 along the stream.
const signLevel = 0.15

// tellSign looks whether tau points along the flow or is the stress on the fluid. It tells; --flip alone applies.
//
// Two things are known. Where the pressure is highest, the flow comes to the surface and leaves in all directions: tau
// points down the pressure gradient there. And over a whole surface, more of tau points with the stream than against
// it, where the file tells the stream's direction.
func tellSign(raw *field.Raw, stream r3.Vec) {
	byPressure, okP := cosAtHighPressure(raw)
	byStream, okS := cosToStream(raw, stream)
	sum := 0.0
	why := ""
	if okP {
		sum += byPressure
		why = "where the pressure is highest"
	}
	if okS {
		sum += byStream
		if why != "" {
			why += " and "
		}
		why += "along the stream"
	}
	switch {
	case !okP && !okS:
		note(raw, field.Note, "sign-unknown", 0, "", "nothing in the run tells the sign of tau")
	case sum < -signLevel:
		note(raw, field.Doubtful, "sign", 0, "", "tau points against the flow (%s): it looks like the stress of the wall "+
			"on the fluid; --flip turns it", why)
	case sum > signLevel:
		note(raw, field.Note, "sign", 0, "", "tau points along the flow (%s)", why)
	default:
		note(raw, field.Note, "sign-unknown", 0, "", "the sign of tau cannot be told from the run")
	}
}

// highPressure is the share of the pressure's range, counted from its maximum, that is near a stagnation point. On
// the hut the mean falls from 0.92 at this share to 0.08 at twice it: deep suction stretches the range.
const highPressure = 0.15

// uniform is the relative variation below which a pressure is one number with rounding errors.
const uniform = 1e-9

// cosAtHighPressure returns the mean cosine between tau and the falling pressure, weighted by area, where the
// pressure is highest. ok is false without pressure or variation.
func cosAtHighPressure(raw *field.Raw) (mean float64, ok bool) {
	p := pointPressure(raw)
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, x := range p {
		if x-x == 0 {
			lo, hi = math.Min(lo, x), math.Max(hi, x)
		}
	}
	if !(hi-lo > float64(uniform*math.Max(math.Abs(hi), math.Abs(lo)))) {
		return 0, false
	}
	level := hi - float64(highPressure*(hi-lo))
	sum, weights := 0.0, 0.0
	for t, tri := range raw.Tris {
		a, b, c := p[tri[0]], p[tri[1]], p[tri[2]]
		if !(a > level && b > level && c > level) {
			continue
		}
		corner := r3.Tri{raw.Points[tri[0]], raw.Points[tri[1]], raw.Points[tri[2]]}
		n := corner.Normal()
		unit := n.Unit()
		// The gradient of the linear pressure: n x edge opposite each corner, up to a positive factor.
		g := unit.Cross(corner[2].Sub(corner[1])).Scale(a).
			AddScaled(b, unit.Cross(corner[0].Sub(corner[2]))).
			AddScaled(c, unit.Cross(corner[1].Sub(corner[0])))
		if tau, w := tauOf(raw, t), n.Norm(); w-w == 0 && tau.Finite() {
			sum -= float64(w * tau.Reject(unit).Unit().Dot(g.Unit()))
			weights += w
		}
	}
	if weights == 0 {
		return 0, false
	}
	return sum / weights, true
}

func pointPressure(raw *field.Raw) []float64 {
	for _, q := range []struct{ point, face []float64 }{{raw.P, raw.FaceP}, {raw.Cp, raw.FaceCp}} {
		switch {
		case q.point != nil:
			return q.point
		case q.face != nil:
			return pointMeans(raw, q.face)
		}
	}
	return nil
}

// tauOf returns tau of triangle t: its own, or the mean of its corners'.
func tauOf(raw *field.Raw, t int) r3.Vec {
	if raw.FaceTau != nil {
		return raw.FaceTau[t]
	}
	tri := raw.Tris[t]
	return raw.Tau[tri[0]].Add(raw.Tau[tri[1]]).Add(raw.Tau[tri[2]]).Scale(1. / 3)
}

// cosToStream returns the mean cosine between tau and the free stream over the surface.
func cosToStream(raw *field.Raw, stream r3.Vec) (mean float64, ok bool) {
	u := stream.Unit()
	if u == (r3.Vec{}) {
		return 0, false
	}
	sum, weights := 0.0, 0.0
	for t, tri := range raw.Tris {
		w := r3.Tri{raw.Points[tri[0]], raw.Points[tri[1]], raw.Points[tri[2]]}.Area()
		if tau := tauOf(raw, t); w-w == 0 && tau.Finite() {
			sum += float64(w * tau.Unit().Dot(u))
			weights += w
		}
	}
	if weights == 0 {
		return 0, false
	}
	return sum / weights, true
}
