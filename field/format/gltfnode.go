package format

import (
	"fmt"

	"shearprint/field/r3"
)

// pose is where a node stands: positions take the whole map, tau only its rotations (and mirrorings).
type pose struct {
	m    matrix
	move r3.Vec
	turn matrix
}

// placed is a primitive as a node places it.
type placed struct {
	pose
	place string // in words
	prim  *gltfPrimitive
	node  int
}

// walk collects the primitives of the scene, then reads them.
func (r *gltfReader) walk() error {
	roots, err := r.roots()
	if err != nil {
		return err
	}
	r.seen = make([]bool, len(r.doc.Nodes))
	start := pose{m: identity, turn: identity}
	for _, n := range roots {
		if err := r.visit(n, start, 0); err != nil {
			return err
		}
	}
	if len(r.doc.Nodes) == 0 { // a library of meshes that no node places
		for m := range r.doc.Meshes {
			if err := r.place(-1-m, m, start); err != nil {
				return err
			}
		}
	}
	return r.readPrimitives()
}

// roots returns the nodes of the scene; without scenes, those that are nobody's child.
func (r *gltfReader) roots() ([]int, error) {
	if len(r.doc.Scenes) > 0 {
		s := 0
		if r.doc.Scene != nil {
			s = *r.doc.Scene
		}
		if s < 0 || s >= len(r.doc.Scenes) {
			return nil, r.fail("scene", "export again", "scene %d of %d", s, len(r.doc.Scenes))
		}
		return r.doc.Scenes[s].Nodes, nil
	}
	child := make([]bool, len(r.doc.Nodes))
	for _, n := range r.doc.Nodes {
		for _, c := range n.Children {
			if c >= 0 && c < len(child) {
				child[c] = true
			}
		}
	}
	var roots []int
	for i := range child {
		if !child[i] {
			roots = append(roots, i)
		}
	}
	return roots, nil
}

// maxDepth of the tree of nodes keeps the recursion within any stack.
const maxDepth = 1000

func (r *gltfReader) visit(i int, above pose, depth int) error {
	place := fmt.Sprintf("node %d", i)
	switch {
	case i < 0 || i >= len(r.doc.Nodes):
		return r.fail(place, "export again", "there are only %d nodes", len(r.doc.Nodes))
	case r.seen[i]:
		return r.fail(place, "export again", "it hangs in the tree twice")
	case depth > maxDepth:
		return r.fail(place, "export with fewer levels", "the tree of nodes is more than %d deep", maxDepth)
	}
	r.seen[i] = true
	n := &r.doc.Nodes[i]
	own, err := r.nodePose(n, place)
	if err != nil {
		return err
	}
	p := above
	if own != (pose{m: identity, turn: identity}) {
		p = pose{
			m:    above.m.times(own.m),
			move: above.m.apply(own.move).Add(above.move),
			turn: above.turn.times(own.turn),
		}
	}
	if n.Mesh != nil {
		m := *n.Mesh
		if m < 0 || m >= len(r.doc.Meshes) {
			return r.fail(place, "export again", "mesh %d of %d", m, len(r.doc.Meshes))
		}
		if n.Skin != nil {
			return r.fail(place, "export the surface without bones", "its mesh is bent by a skin")
		}
		if err := r.place(i, m, p); err != nil {
			return err
		}
	}
	for _, c := range n.Children {
		if err := r.visit(c, p, depth+1); err != nil {
			return err
		}
	}
	return nil
}

// place notes the primitives of mesh m where a node puts them.
func (r *gltfReader) place(node, m int, p pose) error {
	mesh := &r.doc.Meshes[m]
	if len(r.places)+len(mesh.Primitives) > maxObjects {
		return r.fail(fmt.Sprintf("mesh %d", m), "export each mesh once", "repeated meshes make more than %d primitives",
			maxObjects)
	}
	for k := range mesh.Primitives {
		where := fmt.Sprintf("mesh %d primitive %d", m, k)
		r.places = append(r.places, placed{p, where, &mesh.Primitives[k], node})
	}
	return nil
}

// nodePose reads a node's own map, given as a matrix or as translation, rotation and scale.
func (r *gltfReader) nodePose(n *gltfNode, place string) (pose, error) {
	p := pose{m: identity, turn: identity}
	bad := func(what string) (pose, error) { return p, r.fail(place, "export again", "%s", what) }
	vec := func(x []float64) r3.Vec { return r3.Vec{X: x[0], Y: x[1], Z: x[2]} }
	for _, part := range []struct {
		x    []float64
		want int
		name string
	}{{n.Matrix, 16, "matrix"}, {n.Translation, 3, "translation"}, {n.Rotation, 4, "rotation"}, {n.Scale, 3, "scale"}} {
		if len(part.x) != 0 && len(part.x) != part.want {
			return bad(fmt.Sprintf("its %s has %d numbers, not %d", part.name, len(part.x), part.want))
		}
	}
	if len(n.Matrix) == 16 {
		p.m = matrix{vec(n.Matrix[0:]), vec(n.Matrix[4:]), vec(n.Matrix[8:])}
		p.move = vec(n.Matrix[12:])
		if p.m.singular() {
			return bad("its matrix squashes the surface flat")
		}
		if p.m != identity {
			p.turn = p.m.orthogonal()
		}
		return p, nil
	}
	if len(n.Translation) == 3 {
		p.move = vec(n.Translation)
	}
	if q := n.Rotation; len(q) == 4 && (q[0] != 0 || q[1] != 0 || q[2] != 0) {
		rot, ok := rotationOf(q[0], q[1], q[2], q[3])
		if !ok {
			return bad("its rotation is no quaternion")
		}
		p.m, p.turn = rot, rot
	}
	if len(n.Scale) == 3 {
		for k, s := range n.Scale {
			p.m[k] = p.m[k].Scale(s)
			if s < 0 { // a mirrored copy: its flow is mirrored too
				p.turn[k] = p.turn[k].Scale(-1)
			}
		}
		if p.m.singular() {
			return bad("its scale squashes the surface flat")
		}
	}
	return p, nil
}
