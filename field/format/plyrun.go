package format

import (
	"fmt"
	"strings"

	"shearprint/field"
	"shearprint/field/r3"
)

func (r *plyReader) allocatePoints(n int) {
	r.raw.Points = make([]r3.Vec, n)
	if r.atPoint.tau[0] >= 0 {
		r.raw.Tau = make([]r3.Vec, n)
	}
	if r.atPoint.p >= 0 {
		r.raw.P = make([]float64, n)
	}
	if r.atPoint.cp >= 0 {
		r.raw.Cp = make([]float64, n)
	}
}

// addFace adds a polygon with its values, once for each of its triangles.
func (r *plyReader) addFace(i int, corners []int32, row []float64) {
	if r.index < 0 {
		return
	}
	n := fan(&r.raw, i, corners)
	if n == 0 {
		if r.thin == 0 {
			r.firstThin = i
		}
		r.thin++
	}
	for range n {
		if r.atFace.tau[0] >= 0 {
			r.raw.FaceTau = append(r.raw.FaceTau, vectorAt(row, r.atFace.tau))
		}
		if r.atFace.p >= 0 {
			r.raw.FaceP = append(r.raw.FaceP, row[r.atFace.p])
		}
		if r.atFace.cp >= 0 {
			r.raw.FaceCp = append(r.raw.FaceCp, row[r.atFace.cp])
		}
	}
}

// finish makes the run of what was read: findings, name and units.
func (r *plyReader) finish() (field.Raw, error) {
	raw := &r.raw
	if r.vertex.count > maxPoints {
		return *raw, r.fail("header", "split the run", "more than %d points", maxPoints)
	}
	if r.thin > 0 {
		note(raw, field.Repaired, "thin-polygons", r.thin, fmt.Sprintf("face %d", r.firstThin),
			"%d polygons have fewer than three corners and were left out", r.thin)
	}
	c := r.atPoint
	if r.atFace.tau[0] >= 0 {
		c = r.atFace
		if r.atPoint.tau[0] >= 0 {
			note(raw, field.Note, "face-values", 0, "", "tau is given per point and per face; the face values are used")
		}
	}
	r.atPoint.tell(raw)
	r.atFace.tell(raw)
	u := unitComments(r.comments)
	raw.Name = nameComment(r.comments)
	p := r.atPoint.p >= 0 && r.atPoint.name(r.atPoint.p) == "p" || r.atFace.p >= 0 && r.atFace.name(r.atFace.p) == "p"
	applyUnits(raw, u["x"], u["tau"], u["p"], c.coefficient, c.contractTau)
	if raw.Units.P == "" && p {
		raw.Units.P = "Pa"
	}
	return *raw, nil
}

// unitComments reads comments such as "units SI: x y z [m], tau [Pa], p [Pa gauge], cp [-]".
func unitComments(comments []string) map[string]string {
	units := map[string]string{}
	for _, c := range comments {
		if !strings.HasPrefix(strings.ToLower(c), "unit") {
			continue
		}
		for _, item := range strings.Split(c, "]") {
			names, unit, ok := strings.Cut(item, "[")
			if !ok {
				continue
			}
			for _, name := range strings.FieldsFunc(names, func(r rune) bool { return strings.ContainsRune(" ,;:", r) }) {
				units[name] = strings.TrimSpace(unit)
			}
		}
	}
	if units["tau"] == "" {
		units["tau"] = units["tau_x"]
	}
	return units
}

// nameComment reads a comment such as "name radome ; ...".
func nameComment(comments []string) string {
	for _, c := range comments {
		if rest, ok := strings.CutPrefix(c, "name "); ok {
			name, _, _ := strings.Cut(rest, ";")
			return oneLine(strings.TrimSpace(name))
		}
	}
	return ""
}
