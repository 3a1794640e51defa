package format

import (
	"math"
	"slices"

	"shearprint/field"
	"shearprint/field/r3"
)

// add joins the zone to the run. The columns say which of its values are what; v is nil where it has none.
func (r *cgnsReader) add(z *cgnsZone, v *cgnsValues, c columns) error {
	raw := &r.raw
	if v == nil {
		r.skipped = append(r.skipped, z.node.name)
		if r.matched {
			return nil
		}
		r.match = c
	}
	if v != nil && r.atFaces && z.volume {
		r.outside += z.onlyFaces(v.arrays[c.tau[0]])
	}
	if z.volume {
		r.volumes++
	}
	if len(raw.Tris)+z.triangles() > maxTriangles { // which bounds the points that they have
		return r.tooLarge(z)
	}
	first := int32(len(raw.Points))
	if err := r.spend(pointBytes*z.points(), z.place); err != nil {
		return err
	}
	count := z.compact()
	if err := r.coordinates(z, count); err != nil {
		return err
	}
	if v != nil {
		if err := r.addValues(z, count, v, c); err != nil {
			return err
		}
	}
	raw.Tris = slices.Grow(raw.Tris, z.triangles())
	number := 0
	if len(raw.Tris) > 0 {
		number = faceOf(raw, len(raw.Tris)-1) + 1
	}
	var moved []int32
	for i := range z.ends {
		moved = moved[:0]
		for _, p := range z.corners[z.start(i):z.ends[i]] {
			moved = append(moved, first+p)
		}
		fan(raw, number+i, moved)
	}
	r.zones++
	return nil
}

// addValues reads tau, p and cp of the zone. Pressures that the first zone lacks are not kept.
func (r *cgnsReader) addValues(z *cgnsZone, points int, v *cgnsValues, c columns) error {
	raw := &r.raw
	n, tau, p, cp := points, &raw.Tau, &raw.P, &raw.Cp
	if r.atFaces {
		n, tau, p, cp = z.triangles(), &raw.FaceTau, &raw.FaceP, &raw.FaceCp
	}
	start := len(*tau)
	*tau = slices.Grow(*tau, n)[:start+n]
	here := (*tau)[start:]
	for i := range here {
		here[i] = r3.Vec{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}
	}
	for k, set := range [3]func(i int, x float64){
		func(i int, x float64) { here[i].X = x },
		func(i int, x float64) { here[i].Y = x },
		func(i int, x float64) { here[i].Z = x },
	} {
		if c.tau[k] < 0 { // a plane surface may leave the third component out
			for i := range here {
				set(i, 0)
			}
		} else if err := r.fill(z, v, c.tau[k], set); err != nil {
			return err
		}
	}
	for k, s := range [2]struct {
		col, first int
		all        *[]float64
	}{{c.p, r.match.p, p}, {c.cp, r.match.cp, cp}} {
		if s.col < 0 || s.first < 0 {
			r.partial[k] = r.partial[k] || (s.col < 0) != (s.first < 0)
			continue
		}
		x := make([]float64, n)
		for i := range x {
			x[i] = math.NaN()
		}
		if err := r.fill(z, v, s.col, func(i int, value float64) { x[i] = value }); err != nil {
			return err
		}
		*s.all = append(*s.all, x...)
	}
	return nil
}

// dropPartial leaves out pressures that only some of the zones have.
func (r *cgnsReader) dropPartial() {
	raw := &r.raw
	for k, c := range [2]struct {
		name          string
		points, faces *[]float64
	}{{"pressure", &raw.P, &raw.FaceP}, {"pressure coefficient", &raw.Cp, &raw.FaceCp}} {
		if r.partial[k] {
			*c.points, *c.faces = nil, nil
			note(raw, field.Doubtful, "partial-pressure", 0, "", "only some of the zones have the %s; it was left out", c.name)
		}
	}
}

// tellZones says what was left out or doubted of the zones.
func (r *cgnsReader) tellZones() {
	raw := &r.raw
	if len(r.skipped) > 0 {
		note(raw, field.Doubtful, "zones-without-values", len(r.skipped), quote(r.skipped[0]),
			"%d zones have no wall shear stress and were left out", len(r.skipped))
	}
	if r.outside > 0 {
		note(raw, field.Note, "faces-without-values", r.outside, "",
			"%d boundary faces are in no condition with wall shear stress and were left out", r.outside)
	}
	if r.repeated != "" {
		note(raw, field.Doubtful, "several-solutions", 0, "",
			"there are several solutions with %s, such as steps in time; the last is used", quote(r.repeated))
	}
	if r.volumes > 0 {
		note(raw, field.Doubtful, "winding", r.volumes, "", "the surface is the boundary of a volume: which side of an open "+
			"surface the fluid is on is taken from the order of its corners")
	}
}
