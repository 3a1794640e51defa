package format

import (
	"math"

	"shearprint/field/r3"
)

// cgnsValues are the columns of a zone: at its vertices, or at its faces in their order.
type cgnsValues struct {
	names   []string
	columns []func(i int) float64 // by face or vertex number; NaN where unknown
	atFaces bool
}

// values reads the solutions and boundary data of a zone. Face values win over vertex values.
func (r *cgnsReader) values(z *cgnsZone) (*cgnsValues, error) {
	vertex, face := &cgnsValues{}, &cgnsValues{atFaces: true}
	solutions, err := r.labelled(z.node, "FlowSolution_t")
	if err != nil {
		return nil, err
	}
	for _, s := range solutions {
		where, err := r.text(s, "GridLocation")
		if err != nil {
			return nil, err
		}
		switch {
		case where == "" || where == "Vertex":
			err = r.arrays(s, z, z.points(), nil, vertex)
		case (where == "CellCenter" || where == "FaceCenter") && !z.volume:
			err = r.arrays(s, z, z.cellCount(), z.cellIndex(), face)
		}
		if err != nil {
			return nil, err
		}
	}
	if err := r.boundary(z, face); err != nil {
		return nil, err
	}
	c := matchColumns(r.source, face.names, r.opt)
	if c.tau[0] >= 0 {
		return face, r.settle(c, true)
	}
	c = matchColumns(r.source, vertex.names, r.opt)
	if c.tau[0] >= 0 {
		return vertex, r.settle(c, false)
	}
	if !r.matched {
		r.match = c
	}
	return nil, nil
}

// settle keeps how the names of the first zone with values were understood; other zones must agree in what they are of.
func (r *cgnsReader) settle(c columns, atFaces bool) error {
	if r.matched && atFaces != r.atFaces {
		return r.fail("", "write all zones alike", "some zones have their values at vertices, others at faces")
	}
	r.match, r.atFaces, r.matched = c, atFaces, true
	return nil
}

// cellIndex returns, per face, its place in arrays over the zone's cells.
func (z *cgnsZone) cellIndex() []int {
	index := make([]int, len(z.faces))
	for i := range index {
		index[i] = i
	}
	return index
}

// arrays adds the arrays below a node as columns. index maps faces to elements of the arrays; nil for one to one.
func (r *cgnsReader) arrays(n *cgnsNode, z *cgnsZone, want int, index []int, into *cgnsValues) error {
	list, err := r.labelled(n, "DataArray_t")
	if err != nil {
		return err
	}
	for _, a := range list {
		v, err := r.numbers(a, want, z.place)
		if err != nil {
			return err
		}
		into.names = append(into.names, a.name)
		into.columns = append(into.columns, func(i int) float64 {
			if index != nil {
				i = index[i]
			}
			if i < 0 || i >= v.Count() {
				return math.NaN()
			}
			return v.Float(i)
		})
	}
	return nil
}

// cgnsColumns are the columns of a zone that hold tau, p and cp.
type cgnsColumns struct {
	tau   [3]func(i int) float64
	p, cp func(i int) float64
	has   [2]bool // the run has p and cp
}

// pick finds the run's columns among the zone's by name. One that is missing gives NaN.
func (r *cgnsReader) pick(v *cgnsValues) *cgnsColumns {
	none := func(int) float64 { return math.NaN() }
	column := func(col int) func(int) float64 {
		if col < 0 {
			return none
		}
		for k, name := range v.names {
			if name == r.match.name(col) {
				return v.columns[k]
			}
		}
		return none
	}
	c := &cgnsColumns{p: column(r.match.p), cp: column(r.match.cp), has: [2]bool{r.match.p >= 0, r.match.cp >= 0}}
	for k := range 3 {
		c.tau[k] = column(r.match.tau[k])
		if r.match.tau[k] < 0 { // a plane surface may leave the third component out
			c.tau[k] = func(int) float64 { return 0 }
		}
	}
	return c
}

func (c *cgnsColumns) append(i int, tau *[]r3.Vec, p, cp *[]float64) {
	*tau = append(*tau, r3.Vec{X: c.tau[0](i), Y: c.tau[1](i), Z: c.tau[2](i)})
	if c.has[0] {
		*p = append(*p, c.p(i))
	}
	if c.has[1] {
		*cp = append(*cp, c.cp(i))
	}
}
