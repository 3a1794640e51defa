package format

import (
	"bytes"
	"encoding/binary"

	"shearprint/field"
	"shearprint/field/format/hdf5"
)

// kind is one row of the table of formats: what it is called, how its first bytes tell it, and its reader.
type kind struct {
	name string
	is   func(data []byte) bool
	read func(name string, data []byte, opt Options) (field.Raw, error)
}

// kinds is asked from top to bottom: unmistakable signatures first, text by its look last. A table takes what is left.
func kinds() []kind {
	return []kind{
		{"PLY", isPLY, readPLY},
		{"GLB", starts("glTF"), readGLB},
		{"glTF", isGLTF, readGLTF},
		{"STL", isBinarySTL, readBinarySTL},
		{"STL", isTextSTL, readTextSTL},
		{"STL", looksCutSTL, readBinarySTL},
		{"CGNS", starts(hdf5.Signature), readCGNS},
		{"CGNS", isADF, readADF},
		{"OBJ", isOBJ, readOBJ},
		{"table", func([]byte) bool { return true }, readTable},
	}
}

// refusal is a kind that is recognised only to say what to do with it.
type refusal struct {
	signature string
	what      string
	remedy    string
}

var refusals = []refusal{
	{"PK\x03\x04", "this is a ZIP archive (spreadsheet files are such)", "unpack it, or export the sheet as CSV"},
	{"\xd0\xcf\x11\xe0", "this is a spreadsheet or document in a binary office format", "export the sheet as CSV"},
	{"BZh", "this is packed with bzip2", "unpack it, or pack it with gzip"},
	{"\xfd7zXZ", "this is packed with xz", "unpack it, or pack it with gzip"},
	{"\x28\xb5\x2f\xfd", "this is packed with zstd", "unpack it, or pack it with gzip"},
	{"%PDF-", "this is a PDF document", "open the data that it was made from"},
	{"\x89PNG", "this is a picture", "open the data that it was made from"},
	{"\xff\xd8\xff", "this is a picture", "open the data that it was made from"},
}

// read tells the kind of the unpacked data and reads it.
func read(name string, data []byte, opt Options) (field.Raw, error) {
	src := source{name}
	if len(bytes.TrimSpace(data)) == 0 {
		return field.Raw{}, src.fail("", "check how it was written", "the file is empty")
	}
	for _, r := range refusals {
		if bytes.HasPrefix(data, []byte(r.signature)) {
			return field.Raw{}, src.fail("", r.remedy, "%s", r.what)
		}
	}
	all := kinds()
	k := 0
	for !all[k].is(data) {
		k++ // the last takes everything
	}
	return all[k].read(name, data, opt)
}

func starts(signature string) func([]byte) bool {
	return func(data []byte) bool { return bytes.HasPrefix(data, []byte(signature)) }
}

func isPLY(data []byte) bool {
	return bytes.HasPrefix(data, []byte("ply\n")) || bytes.HasPrefix(data, []byte("ply\r")) ||
		bytes.HasPrefix(data, []byte("ply "))
}

// isGLTF takes any JSON for glTF: no other kind that is read begins with a brace.
func isGLTF(data []byte) bool {
	return bytes.HasPrefix(bytes.TrimLeft(bytes.TrimPrefix(data, []byte("\xef\xbb\xbf")), " \t\r\n"), []byte("{"))
}

var little = binary.LittleEndian
