package format

import (
	"fmt"
	"math"
	"slices"

	"shearprint/field"
	"shearprint/field/r3"
)

// Distances of matching are measured against the local size of the surface: the mean edge at a vertex, the root of the
// area of a face.
const (
	matchWithin = 0.25 // a value farther than this from every vertex or face belongs to none
	leastMatch  = 0.5  // with fewer of the surface's elements matched, table and surface are not of one run
)

// attach gives the values their surface: every row goes to the nearest vertex or face, whichever the rows fit, if it is
// near enough. Elements without a row have no value: they become holes.
//
// It returns what file and surface say about the flow.
func attach(src source, raw *field.Raw, h hints, opt Options) (hints, error) {
	surface, told, err := readSurface(opt)
	if err != nil {
		return h, err
	}
	h = h.or(told)
	if len(raw.Points) == 0 {
		return h, src.fail("", "check the export", "there are no values to match to the surface")
	}
	if err := sameUnit(src, raw, &surface, opt); err != nil {
		return h, err
	}
	vertices, faces := vertexTargets(&surface), faceTargets(&surface)
	dv, df := typicalDistance(raw.Points, &vertices), typicalDistance(raw.Points, &faces)
	targets, what := &vertices, "vertices"
	if df < dv {
		targets, what = &faces, "faces"
	}
	m := matchRows(raw.Points, targets)
	code, level, way := "matched-surface", field.Note, "at"
	if m.share() < leastMatch {
		if loose := rowsOnTriangles(raw.Points, &surface); loose.share() >= leastMatch {
			surface.Face = nil // each triangle is a face of its own here
			triangles := faceTargets(&surface)
			m, targets, what = loose, &triangles, "faces"
			code, level, way = "matched-loosely", field.Doubtful, "nearest to, though not in the middle of,"
		}
	}
	if m.share() < leastMatch {
		return h, src.fail("", misfit(raw.Points, surface.Points),
			"only %d of the %d %s of the surface %s have a row of the table near them",
			m.matched, len(targets.place), what, opt.SurfaceName)
	}
	scatter(raw, &surface, m.row, what == "faces")
	note(raw, level, code, m.matched, "",
		"%d of %d rows are %s the %s of %s; the median distance is %.2g of the local size, the largest %.2g",
		m.used, len(m.rowUsed), way, what, baseName(opt.SurfaceName), medianOf(m.distances), slices.Max(m.distances))
	if holes := len(targets.place) - m.matched; holes > 0 {
		note(raw, field.Doubtful, "unmatched-surface", holes, pointPlace(targets.place[m.firstHole]),
			"%d of the %d %s of the surface have no row of the table and are holes", holes, len(targets.place), what)
	}
	if left := len(m.rowUsed) - m.used; left > 0 {
		note(raw, field.Doubtful, "unmatched-rows", left, "",
			"%d rows of the table are not near the surface, or not the nearest to "+
				"their place on it, and were left out", left)
	}
	compare(raw, &surface, h)
	return h, nil
}

// readSurface reads opt.Surface for its triangles; a missing vector is no error in it.
func readSurface(opt Options) (field.Raw, hints, error) {
	name := opt.SurfaceName
	if name == "" {
		name = "surface"
	}
	src := source{name}
	data, err := unpack(name, opt.Surface)
	if err != nil {
		return field.Raw{}, hints{}, err
	}
	s, err := read(name, data, Options{Files: opt.Files})
	if err != nil {
		return s, hints{}, err
	}
	if len(s.Tris) == 0 {
		return s, hints{}, src.fail("", "give a surface with triangles: STL, OBJ, PLY, glTF", "it has no triangles")
	}
	for t, tri := range s.Tris {
		for _, v := range tri {
			if v < 0 || int(v) >= len(s.Points) {
				return s, hints{}, src.fail(fmt.Sprintf("triangle %d", t), "export again", "it names point %d of %d", v,
					len(s.Points))
			}
		}
	}
	d := boxOf(s.Points).Diagonal()
	if !(d > 0) || math.IsInf(d, 0) {
		return s, hints{}, src.fail("", "export again", "the surface has no size, or numbers that are too large")
	}
	joinPoints(&s, coincident(s.Points, float64(weldFraction*d)))
	return s, hintsOf(data), nil
}

// sameUnit brings the table's positions to the surface's unit where both are known. --unit is the table's.
func sameUnit(src source, raw, surface *field.Raw, opt Options) error {
	own := raw.Units.Length
	if opt.Unit != "" {
		if _, ok := lengthUnit(opt.Unit); !ok {
			return src.fail("", "known are m, mm, cm, in, ft", "there is no unit of length %s (--unit)", quote(opt.Unit))
		}
		own = plainUnit(opt.Unit)
		if told := raw.Units.Length; told != "" && lengths[told] != lengths[own] {
			note(raw, field.Doubtful, "unit-overruled", 0, "", "the table says lengths are in %s; --unit %s was used", told, own)
		}
	}
	switch {
	case surface.Units.Length == "":
		surface.Units.Length = own
	case own != "" && lengths[own] != lengths[surface.Units.Length]:
		factor := lengths[own] / lengths[surface.Units.Length]
		for i, p := range raw.Points {
			raw.Points[i] = p.Scale(factor)
		}
		note(raw, field.Note, "converted-units", 0, "", "positions of the table were converted from %s to the surface's %s",
			own,
			surface.Units.Length)
	}
	return nil
}

// scatter replaces the table's points by the surface and its values by those of the matched rows.
func scatter(raw, surface *field.Raw, row []int32, faces bool) {
	tau, p, cp := raw.Tau, raw.P, raw.Cp
	n := len(surface.Points)
	at := func(i int) int32 { return row[i] }
	if faces {
		n = len(surface.Tris)
		at = func(i int) int32 { return row[faceOf(surface, i)] }
	}
	vectors := func(x []r3.Vec) []r3.Vec {
		if x == nil {
			return nil
		}
		out := make([]r3.Vec, n)
		for i := range out {
			if k := at(i); k >= 0 {
				out[i] = x[k]
			} else {
				out[i] = r3.Vec{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}
			}
		}
		return out
	}
	numbers := func(x []float64) []float64 {
		if x == nil {
			return nil
		}
		out := make([]float64, n)
		for i := range out {
			if k := at(i); k >= 0 {
				out[i] = x[k]
			} else {
				out[i] = math.NaN()
			}
		}
		return out
	}
	raw.Points, raw.Tris, raw.Face, raw.Units.Length = surface.Points, surface.Tris, surface.Face, surface.Units.Length
	raw.Tau, raw.P, raw.Cp = nil, nil, nil
	if faces {
		raw.FaceTau, raw.FaceP, raw.FaceCp = vectors(tau), numbers(p), numbers(cp)
	} else {
		raw.Tau, raw.P, raw.Cp = vectors(tau), numbers(p), numbers(cp)
	}
}
