package format

import (
	"math"
	"slices"

	"shearprint/field/r3"
)

// attributes are the accessors of a primitive that matter; -1 where there is none. tau is one vector attribute, or
// three scalar ones.
type attributes struct {
	position int
	tau      [3]int
	vector   bool // tau[0] is a vector
	p, cp    int
}

// pointKey tells primitives that share their points.
type pointKey struct {
	node int
	attributes
}

// Amplification of a file by placing one mesh many times, or many primitives over one set of points, is bounded.
func (r *gltfReader) maxElements() int { return max(2<<20, r.size) }

func (r *gltfReader) readPrimitives() error {
	found := make([]attributes, len(r.places))
	anyTau, anyP, anyCp := false, false, false
	var missing error
	named := false
	known := map[*gltfPrimitive]attributes{} // primitives that several nodes place are matched once
	for i, p := range r.places {
		a, ok := known[p.prim]
		var miss error
		if !ok {
			a, miss = r.match(p)
			known[p.prim] = a
		}
		if miss == nil {
			named = true
		} else if missing == nil {
			missing = miss
		}
		found[i] = a
		anyTau, anyP, anyCp = anyTau || a.tau[0] >= 0, anyP || a.p >= 0, anyCp || a.cp >= 0
	}
	if missing != nil && !named {
		return missing
	}
	if anyTau {
		r.raw.Tau = []r3.Vec{}
	}
	if anyP {
		r.raw.P = []float64{}
	}
	if anyCp {
		r.raw.Cp = []float64{}
	}
	bases := map[pointKey][2]int{} // where the points begin and end
	for i, p := range r.places {
		if m := p.prim.Mode; m != nil && (*m < 4 || *m > 6) {
			r.skipped++
			continue
		}
		if anyTau && found[i].tau[0] < 0 {
			r.bare++
			continue
		}
		key := pointKey{p.node, found[i]}
		base, ok := bases[key]
		if !ok {
			base[0] = len(r.raw.Points)
			if err := r.addPoints(p, found[i]); err != nil {
				return err
			}
			base[1] = len(r.raw.Points)
			bases[key] = base
		}
		if err := r.addTriangles(p, base[0], base[1]); err != nil {
			return err
		}
	}
	return nil
}

// match finds the attributes by their names. The error says which name of the user's is not there.
func (r *gltfReader) match(p placed) (attributes, error) {
	a := attributes{position: -1, tau: [3]int{-1, -1, -1}, p: -1, cp: -1}
	var names []string
	for name := range p.prim.Attributes {
		names = append(names, name)
	}
	slices.Sort(names)
	if i, ok := p.prim.Attributes["POSITION"]; ok {
		a.position = i
	}
	index := func(col int) int {
		if col < 0 {
			return -1
		}
		return p.prim.Attributes[names[col]]
	}
	opt := r.opt
	wanted := [][]string{tauNames, cfNames}
	if opt.Tau != "" {
		wanted = [][]string{{normal(opt.Tau)}}
	}
	vectors := map[string]string{} // reduced name to name
	for _, name := range names {
		if i := p.prim.Attributes[name]; i >= 0 && i < len(r.doc.Accessors) && r.doc.Accessors[i].Type == "VEC3" {
			vectors[normal(name)] = name
		}
	}
	for k, list := range wanted {
		for _, base := range list {
			if name, ok := vectors[base]; ok && a.tau[0] < 0 {
				a.tau[0], a.vector = p.prim.Attributes[name], true
				r.took("tau", name, k == 1, name == "_TAU")
				opt.Tau = ""
			}
		}
	}
	c := matchColumns(source{r.name}, names, opt)
	if !a.vector && c.tau[0] >= 0 {
		for k := range 3 {
			a.tau[k] = index(c.tau[k])
		}
		r.took("tau", c.name(c.tau[0]), c.coefficient, c.contractTau)
	}
	a.p, a.cp = index(c.p), index(c.cp)
	r.pPlain = r.pPlain || c.p >= 0 && c.name(c.p) == "_P"
	return a, missingNames(c)
}

// took remembers what tau was read from, for the findings.
func (r *gltfReader) took(what, name string, coefficient, plain bool) {
	say := what + " from " + name
	if plain || slices.Contains(r.mapped, say) {
		r.plain = r.plain || plain
		return
	}
	r.coef = r.coef || coefficient
	r.mapped = append(r.mapped, say)
}

// addPoints adds the points of a primitive with their values.
func (r *gltfReader) addPoints(p placed, at attributes) error {
	if at.position < 0 {
		return r.fail(p.place, "export again", "it has no POSITION")
	}
	pos, err := r.accessor(at.position, "POSITION")
	if err != nil {
		return err
	}
	if pos.width != 3 {
		return r.fail(p.place, "export again", "POSITION has %d components", pos.width)
	}
	base, n := len(r.raw.Points), pos.count
	if n > r.maxElements()-base {
		return r.fail(p.place, "export each mesh once", "repeated meshes grow to more than %d points", r.maxElements())
	}
	r.raw.Points = grow(r.raw.Points, n)
	readVectors(r.raw.Points[base:], [3]accessor{pos, pos, pos}, true)
	if p.m != identity || p.move != (r3.Vec{}) {
		for i, v := range r.raw.Points[base:] {
			r.raw.Points[base+i] = p.m.apply(v).Add(p.move)
		}
	}
	if r.raw.Tau != nil {
		r.raw.Tau = grow(r.raw.Tau, n)
		if err := r.addTau(p, at, r.raw.Tau[base:]); err != nil {
			return err
		}
	}
	if r.raw.P, err = r.addScalar(p, at.p, "p", r.raw.P, n); err != nil {
		return err
	}
	r.raw.Cp, err = r.addScalar(p, at.cp, "cp", r.raw.Cp, n)
	return err
}

// grow appends n zeros; the first time exactly, so that a run of one primitive takes no more than it needs.
func grow[T any](s []T, n int) []T {
	if len(s) == 0 {
		return make([]T, n)
	}
	return append(s, make([]T, n)...)
}

// readVectors reads the three components: of one vector attribute, or each from its own scalar one.
func readVectors(v []r3.Vec, a [3]accessor, vector bool) {
	if vector && a[0].plainFloats() {
		d, stride := a[0].data, a[0].stride
		for i := range v {
			e := d[i*stride : i*stride+12]
			v[i] = r3.Vec{
				X: float64(math.Float32frombits(little.Uint32(e))),
				Y: float64(math.Float32frombits(little.Uint32(e[4:]))),
				Z: float64(math.Float32frombits(little.Uint32(e[8:]))),
			}
		}
		return
	}
	c := [3]int{}
	if vector {
		c = [3]int{0, 1, 2}
	}
	a[0].column(c[0], func(i int, x float64) { v[i].X = x })
	a[1].column(c[1], func(i int, x float64) { v[i].Y = x })
	a[2].column(c[2], func(i int, x float64) { v[i].Z = x })
}

func (r *gltfReader) addTau(p placed, at attributes, tau []r3.Vec) error {
	var a [3]accessor
	for k := range a {
		i := at.tau[k]
		if at.vector {
			i = at.tau[0]
		}
		if i < 0 {
			continue // a component that the file has not: zero
		}
		var err error
		if a[k], err = r.accessor(i, "tau"); err != nil {
			return err
		}
		if a[k].count != len(tau) || at.vector && a[k].width != 3 || !at.vector && a[k].width != 1 {
			return r.fail(p.place, "export again", "tau has %d elements of %d components for %d points", a[k].count,
				a[k].width, len(tau))
		}
	}
	readVectors(tau, a, at.vector)
	if p.turn != identity {
		for i, v := range tau {
			tau[i] = p.turn.apply(v)
		}
	}
	return nil
}

// addScalar appends the values of a scalar attribute; NaN where this primitive has none but others have.
func (r *gltfReader) addScalar(p placed, index int, what string, x []float64, n int) ([]float64, error) {
	if x == nil {
		return nil, nil
	}
	base := len(x)
	x = grow(x, n)
	if index < 0 {
		for i := base; i < len(x); i++ {
			x[i] = math.NaN()
		}
		return x, nil
	}
	a, err := r.accessor(index, what)
	if err != nil {
		return nil, err
	}
	if a.count != n || a.width != 1 {
		return nil, r.fail(p.place, "export again", "%s has %d elements of %d components for %d points", what, a.count,
			a.width, n)
	}
	a.column(0, func(i int, v float64) { x[base+i] = v })
	return x, nil
}
