package hdf5_test

import (
	"encoding/binary"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"shearprint/field/format/hdf5"
)

// chunkSets are the sets of testdata/chunks.c, one for every way in which the newest versions find chunks.
const chunkSets = 18

// checkChunks asks every set for every element, in the order of the chunks or not, packed or not; what was never written
// is nought.
func checkChunks(t *testing.T, data []byte) {
	t.Helper()
	for _, c := range childrenOf(t, data) {
		v := datasetOf(t, c)
		rows, columns := v.Dims[0], v.Dims[1]
		if strings.HasPrefix(c.Name, "half") {
			rows /= 2
		}
		for i := range v.Count() {
			want := float64(i - 100)
			if i/columns >= rows {
				want = 0
			}
			if got := v.Float(i); got != want {
				t.Errorf("%s: element %d is %g, want %g", c.Name, i, got, want)
				break
			}
		}
	}
}

// Stored files are of the same program as the written ones; they are read where no reference library is.
func TestStoredChunks(t *testing.T) {
	for _, name := range []string{"fixed.h5", "extensible.h5", "tree.h5"} {
		data, err := os.ReadFile(filepath.Join("testdata", name))
		if err != nil {
			t.Fatal(err)
		}
		if n := len(childrenOf(t, data)); n != 1 {
			t.Errorf("%s: %d data sets, want 1", name, n)
		}
		checkChunks(t, data)
	}
}

func TestChunks(t *testing.T) {
	data := writtenBy(t, "chunks", "all")
	checkChunks(t, data)
	if n := len(childrenOf(t, data)); n != chunkSets {
		t.Errorf("%d data sets, want %d", n, chunkSets)
	}
}

// The format's own tool reads the same numbers.
func TestChunksAgainstTheFormatsOwnTool(t *testing.T) {
	data := writtenBy(t, "chunks", "all")
	if _, err := exec.LookPath("h5dump"); err != nil {
		absent(t)("no h5dump (Debian: hdf5-tools): %v", err)
	}
	dir := t.TempDir()
	file, out := filepath.Join(dir, "file.h5"), filepath.Join(dir, "numbers")
	if err := os.WriteFile(file, data, 0o600); err != nil {
		t.Fatal(err)
	}
	for _, c := range childrenOf(t, data) {
		v := datasetOf(t, c)
		if text, err := exec.Command("h5dump", "-d", "/"+c.Name, "-b", "LE", "-o", out, file).CombinedOutput(); err != nil {
			t.Fatalf("%s: %v %s", c.Name, err, text)
		}
		numbers, err := os.ReadFile(out)
		if err != nil || len(numbers) != 8*v.Count() {
			t.Fatalf("%s: %v, %d bytes", c.Name, err, len(numbers))
		}
		for i := range v.Count() {
			if want := math.Float64frombits(binary.LittleEndian.Uint64(numbers[8*i:])); v.Float(i) != want {
				t.Errorf("%s: element %d is %g, h5dump says %g", c.Name, i, v.Float(i), want)
				break
			}
		}
	}
}

func childrenOf(t testing.TB, data []byte) []hdf5.Child {
	t.Helper()
	f, err := hdf5.Open(data)
	if err != nil {
		t.Fatal(err)
	}
	root, err := f.Root()
	if err != nil {
		t.Fatal(err)
	}
	children, err := root.Children()
	if err != nil {
		t.Fatal(err)
	}
	return children
}

func datasetOf(t testing.TB, c hdf5.Child) *hdf5.Value {
	t.Helper()
	o, err := c.Open()
	if err != nil {
		t.Fatalf("%s: %v", c.Name, err)
	}
	v, err := o.Dataset(1 << 24)
	if err != nil {
		t.Fatalf("%s: %v", c.Name, err)
	}
	return v
}

// Indices with any byte changed are read or refused, and never make the reader fall over or hang.
func TestSpoiltChunks(t *testing.T) {
	for name, signs := range map[string][]string{
		"fixed, packed":      {"OHDR", "FAHD", "FADB"},
		"half fixed, pages":  {"FAHD", "FADB"},
		"extensible, many":   {"OHDR", "EAHD", "EAIB", "EASB", "EADB"},
		"tree, deep, packed": {"OHDR", "BTHD", "BTIN", "BTLF"},
	} {
		data := writtenBy(t, "chunks", name)
		for _, sign := range signs {
			at := strings.LastIndex(string(data), sign)
			if at < 0 {
				t.Errorf("%s: no block %s in the file", name, sign)
				continue
			}
			for i := at; i < min(at+120, len(data)); i++ {
				was := data[i]
				for _, b := range []byte{0, 0xff, was + 1} {
					data[i] = b
					walk(data)
				}
				data[i] = was
			}
		}
	}
}
