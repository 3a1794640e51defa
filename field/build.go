package field

import (
	"errors"
	"fmt"

	"shearprint/field/r3"
)

// Largest magnitudes that computations here can square without overflow.
const (
	maxCoordinate = 1e100
	maxValue      = 1e100
)

// Build repairs the raw surface, gives it its intrinsic geometry and takes its vectors into the tangent planes. What it
// mended or doubts is added to the findings. Face values win over point values where both exist: at a sharp edge only
// they belong to one side.
//
// The error says what makes the data unusable: no triangles, no wall shear stress, numbers out of range.
func Build(raw Raw) (*Field, error) {
	if err := raw.check(); err != nil {
		return nil, err
	}
	r := newRepair(&raw)
	r.dropHoles()
	r.collapseSlivers()
	r.dropDoubles()
	if len(r.tris) == 0 {
		return nil, errors.New("no usable triangle is left: every one is degenerate, doubled or without a value of tau")
	}
	r.join()
	r.orient()
	r.splitFans()
	m := newMesh(r)
	r.turnInsideOut(m)
	f := &Field{Mesh: m, Name: raw.Name, Units: raw.Units}
	f.takeVectors(&raw, r)
	f.P = r.scalar("p", raw.P, raw.FaceP, m)
	f.Cp = r.scalar("cp", raw.Cp, raw.FaceCp, m)
	f.Findings = append(append([]Finding{}, raw.Findings...), r.findings...)
	return f, nil
}

func (raw *Raw) check() error {
	for _, c := range []struct {
		what string
		got  int
		want int
	}{
		{"tau per point", len(raw.Tau), len(raw.Points)}, {"p per point", len(raw.P), len(raw.Points)},
		{"cp per point", len(raw.Cp), len(raw.Points)}, {"tau per face", len(raw.FaceTau), len(raw.Tris)},
		{"p per face", len(raw.FaceP), len(raw.Tris)}, {"cp per face", len(raw.FaceCp), len(raw.Tris)},
		{"face numbers", len(raw.Face), len(raw.Tris)},
	} {
		if c.got != 0 && c.got != c.want {
			return fmt.Errorf("%s: %d values for %d elements", c.what, c.got, c.want)
		}
	}
	if len(raw.Tris) == 0 {
		return errors.New("the surface has no triangles")
	}
	if len(raw.Tau) == 0 && len(raw.FaceTau) == 0 {
		return errors.New("the run has no wall shear stress")
	}
	for i, t := range raw.Tris {
		for _, v := range t {
			if v < 0 || int(v) >= len(raw.Points) {
				return fmt.Errorf("triangle %d names point %d, but there are %d points", i, v, len(raw.Points))
			}
		}
	}
	return raw.checkRange()
}

func (raw *Raw) checkRange() error {
	big := func(v r3.Vec, limit float64) bool {
		return v.X > limit || v.X < -limit || v.Y > limit || v.Y < -limit || v.Z > limit || v.Z < -limit
	}
	for i, p := range raw.Points {
		if p.Finite() && big(p, maxCoordinate) {
			return fmt.Errorf("point %d has a coordinate beyond %g", i, maxCoordinate)
		}
	}
	for _, list := range [][]r3.Vec{raw.Tau, raw.FaceTau} {
		for i, v := range list {
			if v.Finite() && big(v, maxValue) {
				return fmt.Errorf("value %d of tau is beyond %g", i, maxValue)
			}
		}
	}
	for _, list := range [][]float64{raw.P, raw.FaceP, raw.Cp, raw.FaceCp} {
		for i, x := range list {
			if x-x == 0 && (x > maxValue || x < -maxValue) {
				return fmt.Errorf("value %d of the pressure is beyond %g", i, maxValue)
			}
		}
	}
	return nil
}
