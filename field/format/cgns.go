package format

import (
	"strings"

	"shearprint/field"
	"shearprint/field/format/hdf5"
)

// cgnsReader reads the surfaces of a file.
type cgnsReader struct {
	source
	opt    Options
	raw    field.Raw
	budget int // bytes of data that may still be read
	nodes  int // nodes that may still be opened

	match    columns // of the first zone with values
	atFaces  bool    // values belong to faces
	matched  bool    // some zone had values
	partial  [2]bool // some zones have p, and cp, and others do not
	cellDim  int
	zones    int      // that were joined
	volumes  int      // zones of cells whose boundary was taken
	skipped  []string // zones without values
	outside  int      // faces of volumes in no condition with values
	repeated string   // an array of which a zone has several
}

const (
	// cgnsBudget bounds the bytes of all arrays that are read together, and of the points: what the largest run that is
	// accepted needs.
	cgnsBudget = 768 << 20
	// pointBytes are what a point's number, or a corner's, takes, before it is known that the file has its coordinates.
	pointBytes = 4
	// elementBytes are charged for an element of a condition, which costs time rather than memory: a range names many
	// in few bytes.
	elementBytes = 16
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

func (r *cgnsReader) readBase(base *cgnsNode) error {
	dims, err := r.ints(base)
	if err != nil {
		return err
	}
	if dims.len() < 2 || dims.at(0) < 1 || dims.at(0) > 3 || dims.at(1) < 2 || dims.at(1) > 3 {
		return r.fail(quote(base.name), cgnsRemedy, "the base does not tell its dimensions")
	}
	r.cellDim = int(dims.at(0))
	if r.cellDim < 2 {
		return nil
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
	if r.zones > 1 {
		note(&r.raw, field.Note, "joined-zones", r.zones, "", "%d zones were read as one run", r.zones)
	}
	if err := r.tellSteps(base); err != nil {
		return err
	}
	return r.readUnits(base)
}

// tellSteps says where a base holds several time steps, whose zones or solutions would lie on top of one another.
func (r *cgnsReader) tellSteps(base *cgnsNode) error {
	list, err := r.labelled(base, "BaseIterativeData_t")
	if err != nil || len(list) == 0 {
		return err
	}
	steps, err := r.ints(list[0])
	if err == nil && steps.len() > 0 && steps.at(0) > 1 {
		note(&r.raw, field.Doubtful, "time-steps", int(min(steps.at(0), maxTriangles)), "",
			"the file holds several time steps; the last solution of each zone counts, "+
				"and zones of other steps lie on top: export one step by itself")
	}
	return err
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
		for v != nil && len(v.Bytes()) >= width*(len(words)+1) {
			words = append(words, cgnsText(v.Bytes()[width*len(words):width*(len(words)+1)]))
		}
	}
	length, stress := "", ""
	if len(words) >= 3 && (class == "" || class == "Dimensional") {
		length = cgnsLengths[words[1]]
		if words[0] == "Kilogram" && words[1] == "Meter" && words[2] == "Second" {
			stress = "Pa"
		}
		if length == "" && words[1] != "Null" && words[1] != "UserDefined" {
			note(&r.raw, field.Doubtful, "unknown-unit", 0, "", "the unit of length %s is not known; give --unit",
				quote(words[1]))
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
		note(raw, field.Note, "more-bases", bases-1, "", "the file has %d bases; the first with a surface was read", bases)
	}
	r.tellZones()
	r.dropPartial()
	r.match.tell(raw)
	units := raw.Units
	tau := units.Tau
	if r.match.coefficient {
		tau = ""
	}
	applyUnits(raw, units.Length, tau, units.P, r.match.coefficient, false)
	return *raw, nil
}

// isADF tells the older form of CGNS files.
func isADF(data []byte) bool {
	return strings.Contains(string(data[:min(len(data), 64)]), "ADF Database Version")
}

// readADF refuses the older form.
func readADF(name string, _ []byte, _ Options) (field.Raw, error) {
	return field.Raw{}, source{name}.fail("", "convert it to the HDF5 form with the CGNS library's own conversion tool",
		"this is CGNS in the older ADF form")
}
