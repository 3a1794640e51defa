package format

import (
	"errors"
	"fmt"
	"strings"

	"shearprint/field/format/hdf5"
)

// cgnsNode is a node of the tree of AIAA's CGNS standard in its HDF5 form: a group whose attributes are the node's label
// and type, and whose dataset " data" is its value.
type cgnsNode struct {
	object   *hdf5.Object
	name     string
	label    string
	children []hdf5.Child
}

// broken tells an error of the file below CGNS.
func (r *cgnsReader) broken(what string, err error) error {
	var h *hdf5.Error
	place := what
	if errors.As(err, &h) && h.Byte >= 0 {
		place = fmt.Sprintf("%s, byte %d", what, h.Byte)
		err = errors.New(h.What)
	}
	return r.fail(place, cgnsRemedy, "%v", err)
}

// node reads the label and the children of an object.
func (r *cgnsReader) node(o *hdf5.Object) (*cgnsNode, error) {
	if r.nodes--; r.nodes < 0 {
		return nil, r.fail("", cgnsRemedy, "the file has more than %d nodes", cgnsNodes)
	}
	n := &cgnsNode{object: o, name: o.Name}
	label, err := o.Attribute("label")
	if err != nil {
		return nil, r.broken(quote(o.Name), err)
	}
	if label != nil {
		n.label = cgnsText(label.Bytes())
	}
	kind, err := o.Attribute("type")
	if err != nil {
		return nil, r.broken(quote(o.Name), err)
	}
	if kind != nil && cgnsText(kind.Bytes()) == "LK" {
		return nil, r.fail(quote(o.Name), "store the data in one file: the CGNS library's tools can resolve links",
			"the node is a link to another file or place, which is not followed")
	}
	n.children, err = o.Children()
	if err != nil {
		return nil, r.broken(quote(o.Name), err)
	}
	return n, nil
}

// cgnsText returns text without the zero or the blanks at its end.
func cgnsText(b []byte) string {
	s, _, _ := strings.Cut(string(b), "\x00")
	return strings.TrimRight(s, " ")
}

// labelled opens the children that have one of the labels.
func (r *cgnsReader) labelled(n *cgnsNode, labels ...string) ([]*cgnsNode, error) {
	var out []*cgnsNode
	for _, c := range n.children {
		if strings.HasPrefix(c.Name, " ") {
			continue
		}
		o, err := c.Open()
		if err != nil {
			return nil, r.broken(quote(c.Name), err)
		}
		child, err := r.node(o)
		if err != nil {
			return nil, err
		}
		for _, l := range labels {
			if child.label == l {
				out = append(out, child)
			}
		}
	}
	return out, nil
}

// child opens the child of that name; nil if there is none.
func (r *cgnsReader) child(n *cgnsNode, name string) (*cgnsNode, error) {
	for _, c := range n.children {
		if c.Name == name {
			o, err := c.Open()
			if err != nil {
				return nil, r.broken(quote(name), err)
			}
			return r.node(o)
		}
	}
	return nil, nil
}

// value reads a node's data; nil if it has none.
func (r *cgnsReader) value(n *cgnsNode) (*hdf5.Value, error) {
	for _, c := range n.children {
		if c.Name != " data" {
			continue
		}
		o, err := c.Open()
		if err != nil {
			return nil, r.broken(quote(n.name), err)
		}
		v, err := o.Dataset(r.budget)
		if err != nil {
			return nil, r.broken(quote(n.name), err)
		}
		r.budget -= v.Count() * v.Size
		return v, nil
	}
	return nil, nil
}

// ints reads integers.
func (r *cgnsReader) ints(n *cgnsNode) ([]int64, error) {
	v, err := r.value(n)
	if err != nil || v == nil {
		return nil, err
	}
	if v.Kind != hdf5.Integer {
		return nil, r.fail(quote(n.name), cgnsRemedy, "there should be integers here")
	}
	out := make([]int64, v.Count())
	for i := range out {
		out[i] = v.Int(i)
	}
	return out, nil
}

// text reads the text of the named child; "" if there is none.
func (r *cgnsReader) text(n *cgnsNode, name string) (string, error) {
	c, err := r.child(n, name)
	if err != nil || c == nil {
		return "", err
	}
	v, err := r.value(c)
	if err != nil || v == nil {
		return "", err
	}
	return cgnsText(v.Bytes()), nil
}
