package topology

import (
	"fmt"

	"shearprint/field"
)

// residueLimit is how far the index of a triangle may be from a whole number before rounding is no explanation any
// more: the sum has about ten terms of the size of pi.
const residueLimit = 1e-9

// tellFindings tells what was assumed about the field, and what is doubtful about the points.
func (s *Skeleton) tellFindings() {
	s.tellSymmetry()
	s.tellZeros()
	count, where := 0, ""
	for _, p := range s.Points {
		if !p.Resolved {
			if count == 0 {
				where = p.ID
			}
			count++
		}
	}
	if count > 0 {
		s.tell(field.Doubtful, "unresolved-points", count, where,
			"%d of %d critical points are not resolved by this mesh; their index is right, their place and type are doubtful",
			count, len(s.Points))
	}
	if s.count.residue > residueLimit {
		s.tell(field.Doubtful, "index-residue", 0, "",
			"the index of a triangle is off a whole number by %.1e, more than rounding explains", s.count.residue)
	}
}

// tellSymmetry names the rims that were taken for planes of symmetry because tau turns round on them.
func (s *Skeleton) tellSymmetry() {
	for _, r := range s.count.rims {
		if r.Reversals == 0 {
			continue
		}
		s.tell(field.Note, "symmetry-rim", r.Reversals, fmt.Sprintf("rim %d", r.Rim),
			"tau runs along %.0f %% of rim %d, in a plane: it was taken for the plane of symmetry of a half model, and the %s "+
				"on it for %s", 100*r.Symmetric, r.Rim, plural(r.Reversals, "point"), plural(r.Reversals, "half point"))
	}
}

// tellZeros counts the vertices at which tau is exactly zero.
func (s *Skeleton) tellZeros() {
	zeros, where := 0, ""
	for v := range int32(len(s.Field.Points)) {
		if s.Field.Out[v] >= 0 && s.Field.IsZero(v) {
			if zeros == 0 {
				where = place(s.Field.Points[v])
			}
			zeros++
		}
	}
	if zeros > 0 {
		s.tell(field.Note, "zero-vertices", zeros, where,
			"tau is exactly zero at %d vertices; the triangles around connected ones were merged and have one index", zeros)
	}
}

func (s *Skeleton) tell(level field.Level, code string, count int, where, format string, args ...any) {
	s.Findings = append(s.Findings, field.Finding{
		Level: level, Code: code, Count: count, Where: where, Text: fmt.Sprintf(format, args...),
	})
}
