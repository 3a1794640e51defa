package format

import (
	"errors"
	"fmt"
	"strings"

	"shearprint/field/format/hdf5"
)

// cgnsNode is a node of the tree of AIAA's CGNS standard in its HDF5 form: a group whose attributes are the node's
// label and type, and whose dataset " data" is its value.
type cgnsNode struct {
	object   *hdf5.Object
	name     string
	label    string
	children []hdf5.Child
	opened   []*cgnsNode // the children that are nodes, once somebody has asked for them
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

// labelled returns the children that have the label.
func (r *cgnsReader) labelled(n *cgnsNode, label string) ([]*cgnsNode, error) {
	if n.opened == nil {
		n.opened = make([]*cgnsNode, 0, len(n.children))
		for _, c := range n.children {
			if strings.HasPrefix(c.Name, " ") {
				continue
			}
			child, err := r.open(c)
			if err != nil {
				return nil, err
			}
			n.opened = append(n.opened, child)
		}
	}
	var out []*cgnsNode
	for _, c := range n.opened {
		if c.label == label {
			out = append(out, c)
		}
	}
	return out, nil
}

func (r *cgnsReader) open(c hdf5.Child) (*cgnsNode, error) {
	o, err := c.Open()
	if err != nil {
		return nil, r.broken(quote(c.Name), err)
	}
	return r.node(o)
}

// child returns the child of that name; nil if there is none.
func (r *cgnsReader) child(n *cgnsNode, name string) (*cgnsNode, error) {
	for _, c := range n.opened {
		if c.name == name {
			return c, nil
		}
	}
	for _, c := range n.children {
		if c.Name == name && n.opened == nil {
			return r.open(c)
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
		return v, r.spend(v.Count()*v.Size, quote(n.name))
	}
	return nil, nil
}

// spend counts bytes of data.
func (r *cgnsReader) spend(bytes int, place string) error {
	if r.budget -= bytes; r.budget < 0 {
		return r.fail(place, "export the part of interest", "the file has more data than can be held")
	}
	return nil
}

// ints reads integers; there are none where the node has no data.
func (r *cgnsReader) ints(n *cgnsNode) (cgnsInts, error) {
	v, err := r.value(n)
	if err != nil || v == nil {
		return cgnsInts{}, err
	}
	if v.Kind != hdf5.Integer {
		return cgnsInts{}, r.fail(quote(n.name), cgnsRemedy, "there should be integers here")
	}
	return cgnsInts{v}, nil
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
