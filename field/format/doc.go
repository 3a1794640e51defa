// Package format reads and writes runs: it tells a file's kind from its content, reads it with every count checked
// against the bytes that exist, and brings what it found (columns, units, sign, holes) to a field.Raw with findings.
//
// One file holds one concept: sniff.go has the table of kinds; a reader per kind returns what the file says and nothing
// else; load.go has the steps after reading (units, mirror, welding, sign) in their order; columns.go decides which
// column is what, for every kind alike.
//
// Readers never panic, whatever the bytes are, and answer a bad file with a *SyntaxError of one line.
package format

import "io/fs"

// Options says how a run is to be read. The zero value reads a run that explains itself.
type Options struct {
	Surface     []byte // geometry for a run that has none: a file of any kind that holds triangles
	SurfaceName string // its name, for messages

	// Tau, P and Cp name the columns, properties or attributes to use; "" lets the reader match the usual spellings. Tau
	// is a base name (NAME_x, NAMEX, NAME[i], NAME:0 and so on are tried) or three names with commas.
	Tau, P, Cp string

	Flip   bool   // turn tau: the file holds the stress on the fluid
	Mirror string // "x", "y", "z" or "y=VALUE" in the file's unit: complete a half model; "" leaves it
	Unit   string // unit of the file's lengths, "m", "mm", "cm", "in", "ft"; "" takes what the file tells

	// Files is the folder of the document, for formats that refer to further files beside it; nil refuses those. A folder
	// opened with os.Root does not let links lead out of it.
	Files fs.FS
}
