package format

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"shearprint/field"
	"shearprint/field/r3"
)

// hints is what a file says about the flow beside its numbers; zero where it says nothing.
type hints struct {
	stream  r3.Vec  // direction of the free stream
	density float64 // kg/m3
}

// or fills what h lacks from o.
func (h hints) or(o hints) hints {
	if h.stream == (r3.Vec{}) {
		h.stream = o.stream
	}
	if h.density == 0 {
		h.density = o.density
	}
	return h
}

// hintsOf reads the comments of a PLY file, such as "direction 0.94 0.03 0.34" and "density 1025 kg/m3".
func hintsOf(data []byte) hints {
	var h hints
	p := &plyHeader{}
	if !isPLY(data) || p.parse(data) != nil {
		return h
	}
	for _, c := range p.comments {
		if x, ok := numbersAfter(c, "direction", 3); ok {
			h.stream = r3.Vec{X: x[0], Y: x[1], Z: x[2]}
		}
		if x, ok := numbersAfter(c, "density", 1); ok {
			h.density = x[0]
		}
	}
	return h
}

// numbersAfter reads n numbers after a word.
func numbersAfter(s, word string, n int) ([]float64, bool) {
	_, rest, ok := strings.Cut(s, word+" ")
	words := strings.Fields(rest)
	if !ok || len(words) < n {
		return nil, false
	}
	x := make([]float64, n)
	for k := range x {
		v, err := strconv.ParseFloat(words[k], 64)
		if err != nil || v-v != 0 {
			return nil, false
		}
		x[k] = v
	}
	return x, true
}

// Agreement of a table with the values that its surface carries itself.
const (
	sameField = 0.8 // correlation from which both are one field up to a factor
	// relative difference of a factor from 1 or from the density; vertex means of face values differ by 0.3 %
	sameScale = 0.05
)

// compare holds tau and p of a matched table against those that the surface file carries itself, and tells sign and
// scale: a solver's kinematic table beside the run made from it explains itself so.
func compare(raw, surface *field.Raw, h hints) {
	if surface.Tau == nil && surface.FaceTau == nil {
		return
	}
	if raw.Tau == nil && raw.FaceTau == nil {
		return
	}
	var xy, xx, yy float64
	for t := range raw.Tris {
		a, b := tauOf(raw, t), tauOf(surface, t)
		if a.Finite() && b.Finite() {
			xy += a.Dot(b)
			xx += a.Dot(a)
			yy += b.Dot(b)
		}
	}
	corr := xy / math.Sqrt(float64(xx*yy))
	if !(math.Abs(corr) > sameField) {
		note(raw, field.Doubtful, "other-field", 0, "",
			"the surface file has tau of its own, of which the table's is another "+
				"(correlation %.2f); the table's is used", corr)
		return
	}
	if corr < 0 {
		note(raw, field.Doubtful, "opposite-surface", 0, "",
			"tau is opposite to the one in the surface file: --flip turns it")
	}
	scale := math.Abs(yy / xy)
	offOne, offDensity := math.Abs(scale-1), math.Inf(1)
	if h.density > 0 {
		offDensity = math.Abs(scale/h.density - 1)
	}
	switch {
	case math.Min(offOne, offDensity) > sameScale:
		note(raw, field.Doubtful, "scaled-tau", 0, "",
			"tau in the surface file is %.4g times larger; the table's numbers are kept", scale)
	case offDensity < offOne:
		raw.Units.Tau = "m2/s2"
		if raw.P != nil || raw.FaceP != nil {
			raw.Units.P = "m2/s2"
		}
		raw.Findings = slices.DeleteFunc(raw.Findings, func(f field.Finding) bool { return f.Code == "assumed-tau-unit" })
		note(raw, field.Doubtful, "kinematic-tau", 0, "",
			"tau is kinematic (m2/s2): the one in the surface file is %.4g times larger, and "+
				"the density is %g kg/m3; the table's numbers are kept, multiply by the density for Pa", scale, h.density)
	}
}
