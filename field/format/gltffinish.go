package format

import (
	"strings"

	"shearprint/field"
)

// finish makes the run: name, units, findings.
func (r *gltfReader) finish() (field.Raw, error) {
	raw := &r.raw
	if len(raw.Tris) == 0 {
		return *raw, r.fail("meshes", "export triangles", "there is not one triangle")
	}
	if r.skipped > 0 {
		note(raw, field.Note, "skipped-primitives", r.skipped, "", "%d primitives of points or lines were left out",
			r.skipped)
	}
	if r.bare > 0 {
		note(raw, field.Doubtful, "bare-primitives", r.bare, "", "%d primitives have no tau and were left out", r.bare)
	}
	if len(r.mapped) > 0 {
		note(raw, field.Note, "matched-names", len(r.mapped), "", "names were matched: %s", strings.Join(r.mapped, "; "))
	}
	if r.own == nil {
		applyUnits(raw, "", "", "", r.coef, r.plain)
		if raw.P != nil && r.pPlain {
			raw.Units.P = "Pa"
		}
		return *raw, nil
	}
	raw.Name = oneLine(r.own.Name)
	known := func(s *string) string {
		if s == nil {
			return ""
		}
		return *s
	}
	applyUnits(raw, known(r.own.Length), known(r.own.Tau), known(r.own.P), known(r.own.Tau) == "1", false)
	if r.own.Values == "face" {
		return *raw, r.valuesToFaces()
	}
	return *raw, nil
}

// valuesToFaces turns the points' values into those of the triangles, for files that WriteRawGLB made from face values.
func (r *gltfReader) valuesToFaces() error {
	raw := &r.raw
	if len(raw.Points) != 3*len(raw.Tris) {
		return r.fail("asset.extras", "export again", "it promises face values, but triangles share their points")
	}
	raw.FaceTau = perFace(raw, raw.Tau)
	raw.FaceP, raw.FaceCp = perFace(raw, raw.P), perFace(raw, raw.Cp)
	raw.Tau, raw.P, raw.Cp = nil, nil, nil
	return nil
}

func perFace[T any](raw *field.Raw, x []T) []T {
	if x == nil {
		return nil
	}
	out := make([]T, len(raw.Tris))
	for t, tri := range raw.Tris {
		out[t] = x[tri[0]]
	}
	return out
}
