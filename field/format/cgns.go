package format

import (
	"errors"
	"fmt"
	"strings"

	"shearprint/field"
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

// cgnsReader reads the surfaces of a file.
type cgnsReader struct {
	source
	opt    Options
	raw    field.Raw
	budget int // bytes of data that may still be read
	nodes  int // nodes that may still be opened

	match    columns // of the first zone with values; its names are asked of the others
	atFaces  bool    // values belong to faces
	matched  bool
	cellDim  int
	skipped  []string // zones without values
	sections int
}

const (
	// cgnsBudget bounds the bytes of all arrays together: what the largest run that is accepted needs.
	cgnsBudget = 1 << 30
	// cgnsNodes bounds the nodes; a file of a thousand zones has some tens of thousands.
	cgnsNodes = 200_000
)

const cgnsRemedy = "check the file with the CGNS library's own tools"

// readCGNS reads the surface zones, and the surface sections of volume zones, of the first base that has any.
func readCGNS(name string, data []byte, opt Options) (field.Raw, error) {
	r := &cgnsReader{source: source{name}, opt: opt, budget: min(cgnsBudget, 64*len(data)+1<<20), nodes: cgnsNodes}
	file, err := hdf5.Open(data)
	if err != nil {
		return r.raw, r.broken("superblock", err)
	}
	object, err := file.Root()
	if err != nil {
		return r.raw, r.broken("root", err)
	}
	root, err := r.node(object)
	if err != nil {
		return r.raw, err
	}
	bases, err := r.labelled(root, "CGNSBase_t")
	if err != nil {
		return r.raw, err
	}
	if len(bases) == 0 {
		return r.raw, r.fail("", "open a CGNS file, or export the surface as PLY or CSV", "this HDF5 file has no CGNS base")
	}
	for _, base := range bases {
		if err := r.readBase(base); err != nil {
			return r.raw, err
		}
		if len(r.raw.Tris) > 0 {
			break
		}
	}
	return r.finish(len(bases))
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
	for _, a := range []struct {
		name string
		into *string
	}{{"label", &n.label}} {
		v, err := o.Attribute(a.name)
		if err != nil {
			return nil, r.broken(quote(o.Name), err)
		}
		if v != nil {
			*a.into = cgnsText(v.Bytes())
		}
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

func (r *cgnsReader) readBase(base *cgnsNode) error {
	dims, err := r.ints(base)
	if err != nil {
		return err
	}
	if len(dims) < 2 || dims[0] < 1 || dims[0] > 3 || dims[1] < 2 || dims[1] > 3 {
		return r.fail(quote(base.name), cgnsRemedy, "the base does not tell its dimensions")
	}
	r.cellDim = int(dims[0])
	if r.cellDim < 2 {
		return nil
	}
	if r.raw.Name == "" {
		r.raw.Name = base.name
	}
	zones, err := r.labelled(base, "Zone_t")
	if err != nil {
		return err
	}
	for _, z := range zones {
		if err := r.readZone(z); err != nil {
			return err
		}
	}
	return r.readUnits(base)
}

// cgnsLengths are the standard's names of units of length.
var cgnsLengths = map[string]string{
	"Meter": "m", "Centimeter": "cm", "Millimeter": "mm", "Foot": "ft", "Inch": "in",
}

// readUnits takes the units that the base tells for all its arrays.
func (r *cgnsReader) readUnits(base *cgnsNode) error {
	class, err := r.text(base, "DataClass")
	if err != nil {
		return err
	}
	n, err := r.child(base, "DimensionalUnits")
	if err != nil {
		return err
	}
	var words []string
	if n != nil {
		v, err := r.value(n)
		if err != nil {
			return err
		}
		const width = 32
		for b := v.Bytes(); len(b) >= width; b = b[width:] {
			words = append(words, cgnsText(b[:width]))
		}
	}
	length, stress := "", ""
	if len(words) >= 3 && (class == "" || class == "Dimensional") {
		length = cgnsLengths[words[1]]
		if words[0] == "Kilogram" && words[1] == "Meter" && words[2] == "Second" {
			stress = "Pa"
		}
		if length == "" && words[1] != "Null" && words[1] != "UserDefined" {
			note(&r.raw, field.Doubtful, "unknown-unit", 0, "", "the unit of length %s is not known; give --unit", quote(words[1]))
		}
	}
	r.raw.Units = field.Units{Length: length, Tau: stress, P: stress}
	return nil
}

func (r *cgnsReader) finish(bases int) (field.Raw, error) {
	raw := &r.raw
	if len(raw.Tris) == 0 {
		return *raw, r.fail("", "export the surface, with its solution, as a zone or section of its own",
			"no surface is in the file: no zone of triangles, quadrilaterals or polygons")
	}
	if !r.matched {
		if err := r.match.missing[0]; err != nil {
			return *raw, err
		}
		return *raw, nil // geometry only
	}
	if err := missingNames(r.match); err != nil {
		return *raw, err
	}
	if bases > 1 {
		note(raw, field.Note, "more-bases", bases-1, "", "the file has %d bases; %s was read", bases, quote(raw.Name))
	}
	if len(r.skipped) > 0 {
		note(raw, field.Doubtful, "zones-without-values", len(r.skipped), quote(r.skipped[0]),
			"%d zones have no wall shear stress and were left out", len(r.skipped))
	}
	if r.sections > 0 {
		note(raw, field.Doubtful, "winding", r.sections, "", "the surface is the boundary of a volume: which side of an open "+
			"surface the fluid is on is taken from the order of its corners")
	}
	r.match.tell(raw)
	units := raw.Units
	tau := units.Tau
	if r.match.coefficient {
		tau = ""
	}
	applyUnits(raw, units.Length, tau, units.P, r.match.coefficient, false)
	return *raw, nil
}
