package exact

import (
	"shearprint/field"
	"shearprint/field/r3"
)

// HowarthDavey holds the wall values f"(0) and g"(0) of exact three-dimensional attachment flow with outer velocities
// (a x, c a y).
type HowarthDavey struct{ C, F, G float64 }

// AttachmentTable lists wall values for several c = b/a. The limits c = 1 (Homann 1936) and c = 0 (Hiemenz 1911) are the
// published constants; the rest (Howarth 1951 for c > 0, Davey 1961 for c < 0) was recomputed by two independent methods
// that agree to 2e-9 or better. For c = -0.5 the outer flow is a saddle, yet the wall pattern is a node.
var AttachmentTable = []HowarthDavey{
	{1, 1.31193769388, 1.31193769388},
	{0.75, 1.28862891328, 1.16431646483},
	{0.5, 1.26686577454, 0.99811125074},
	{0.25, 1.24761191075, 0.80513726488},
	{-0.1, 1.22842715242, 0.45937368376},
	{-0.25, 1.22512904841, 0.26795005234},
	{-0.5, 1.23019502800, -0.11150066634},
	{-0.75, 1.24732233291, -0.48218533392},
}

// Rotor holds the wall values F'(0) and G'(0) of the flows over a disk (Karman 1921, Cochran 1934) and of a rotating
// fluid over a wall at rest (Boedewadt 1940).
type Rotor struct {
	Name, Sense string
	F, G        float64
}

// Rotors lists the two flows. The values are published benchmark constants (Karman; see also Rogers and Lance 1960) or
// were recomputed by collocation (Boedewadt) and agree with the six published digits.
var Rotors = []Rotor{
	{"karman-disk", "attachment", 0.5102326188673, -0.6159220143994},
	{"boedewadt-wall", "separation", -0.941970901171, 0.772885378254},
}

func unitDisk(triangles int) field.Raw { return Disk(1, triangles) }

// offset moves the critical point off the mesh's centre point, as it is in real data.
var offset = r3.Vec{X: 0.0313, Y: -0.0171}

func wallCases() []Case {
	var all []Case
	for _, h := range AttachmentTable {
		lx, ly := h.F, h.C*h.G
		pt := Point{Position: offset, Type: "node", Sense: "attachment", Index: 1}
		tangencies := 0
		if ly < 0 {
			pt.Type, pt.Index = "saddle", -1
			tangencies = -2
		}
		pt.Eigenvalues = [2]complex128{complex(max(lx, ly), 0), complex(min(lx, ly), 0)}
		all = append(all, Case{
			Name:   "attachment-" + name(h.C),
			Source: "Hiemenz 1911, Homann 1936, Howarth 1951, Davey 1961; values see AttachmentTable",
			Euler:  1, IndexSum: 1 + tangencies, BoundaryTerm: tangencies,
			Points: []Point{pt}, Surface: unitDisk,
			Tau: func(p r3.Vec) r3.Vec {
				d := p.Sub(offset)
				return r3.Vec{X: lx * d.X, Y: ly * d.Y}
			},
			P: func(p r3.Vec) float64 {
				d := p.Sub(offset)
				return -(d.X*d.X + h.C*h.C*d.Y*d.Y) / 2
			},
		})
	}
	for _, r := range Rotors {
		ev := [2]complex128{complex(r.F, max(r.G, -r.G)), complex(r.F, min(r.G, -r.G))}
		all = append(all, Case{
			Name: r.Name, Source: "Karman 1921, Cochran 1934, Boedewadt 1940; values see Rotors", Euler: 1, IndexSum: 1,
			Points:  []Point{{Position: offset, Type: "focus", Sense: r.Sense, Index: 1, Eigenvalues: ev}},
			Surface: unitDisk,
			Tau: func(p r3.Vec) r3.Vec {
				d := p.Sub(offset)
				return r3.Vec{X: r.F*d.X - r.G*d.Y, Y: r.G*d.X + r.F*d.Y}
			},
		})
	}
	return all
}

func name(c float64) string {
	sign := ""
	if c < 0 {
		sign, c = "minus-", -c
	}
	switch c {
	case 1:
		return sign + "1"
	case 0.75:
		return sign + "0.75"
	case 0.5:
		return sign + "0.5"
	case 0.25:
		return sign + "0.25"
	}
	return sign + "0.1"
}
