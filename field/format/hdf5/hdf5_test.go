package hdf5_test

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"testing"

	"shearprint/field/format/hdf5"
)

const limit = 1 << 24

// written returns a file of the given version that the format's reference library wrote.
func written(t testing.TB, version string) []byte { return writtenBy(t, "write", version) }

// absent skips the test for want of a program; where all programs must be there it fails.
func absent(t testing.TB) func(format string, args ...any) {
	if os.Getenv("CI") != "" {
		return t.Fatalf
	}
	return t.Skipf
}

// writtenBy returns the file that a C program of testdata writes with the format's reference library.
func writtenBy(t testing.TB, source string, words ...string) []byte {
	t.Helper()
	if runtime.GOOS == "js" {
		t.Skip("the reference library's writer is a program of its own, which cannot be started from WebAssembly")
	}
	dir := t.TempDir()
	program, file := filepath.Join(dir, source), filepath.Join(dir, "file.h5")
	args := []string{"-I/usr/include/hdf5/serial", "-o", program, filepath.Join("testdata", source+".c")}
	if out, err := exec.Command("gcc", "-print-multiarch").Output(); err == nil {
		args = append(args, "-L/usr/lib/"+strings.TrimSpace(string(out))+"/hdf5/serial")
	}
	if out, err := exec.Command("cc", append(args, "-lhdf5")...).CombinedOutput(); err != nil {
		absent(t)("no C compiler with the HDF5 library (Debian: gcc libhdf5-dev): %v %s", err, out)
	}
	if out, err := exec.Command(program, append(words, file)...).CombinedOutput(); err != nil {
		t.Fatalf("%v %s", err, out)
	}
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

var versions = []string{"old", "v18", "latest"}

func group(t testing.TB, data []byte, name string) *hdf5.Object {
	t.Helper()
	f, err := hdf5.Open(data)
	if err != nil {
		t.Fatal(err)
	}
	root, err := f.Root()
	if err != nil {
		t.Fatal(err)
	}
	return open(t, root, name)
}

func open(t testing.TB, o *hdf5.Object, name string) *hdf5.Object {
	t.Helper()
	children, err := o.Children()
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range children {
		if c.Name == name {
			child, err := c.Open()
			if err != nil {
				t.Fatal(err)
			}
			return child
		}
	}
	t.Fatalf("%q has no child %q", o.Name, name)
	return nil
}

// What the reference library wrote comes back: numbers of all widths and orders, in every way of storing them.
func TestDatasets(t *testing.T) {
	for _, version := range versions {
		sets := group(t, written(t, version), "sets")
		children, err := sets.Children()
		if err != nil {
			t.Fatal(err)
		}
		read := 0
		for _, c := range children {
			if c.Name == "soft" {
				if _, err := c.Open(); !c.Soft || err == nil {
					t.Errorf("%s: the soft link was followed", version)
				}
				continue
			}
			o, err := c.Open()
			if err != nil {
				t.Fatal(err)
			}
			v, err := o.Dataset(limit)
			if err != nil {
				t.Errorf("%s, %s: %v", version, c.Name, err)
				continue
			}
			if fmt.Sprint(v.Dims) != "[37 23]" || v.Count() != 37*23 {
				t.Errorf("%s, %s: dimensions %v, %d elements", version, c.Name, v.Dims, v.Count())
			}
			for i := range v.Count() {
				if got := v.Float(i); got != float64(i-100) {
					t.Errorf("%s, %s: element %d is %g, want %d", version, c.Name, i, got, i-100)
					break
				}
			}
			read++
		}
		if read != 9 {
			t.Errorf("%s: %d data sets read, want 9", version, read)
		}
	}
}

func TestAttributesAndManyChildren(t *testing.T) {
	for _, version := range versions {
		data := written(t, version)
		sets := group(t, data, "sets")
		label, err := sets.Attribute("label")
		if err != nil || label == nil || !strings.HasPrefix(string(label.Bytes()), "a word\x00") {
			t.Errorf("%s: label %v, %v", version, label, err)
		}
		numbers, err := sets.Attribute("numbers")
		if err != nil || numbers == nil || numbers.Count() != 3 || numbers.Int(1) != -8 {
			t.Errorf("%s: numbers %v, %v", version, numbers, err)
		}
		for i := range 20 {
			v, err := sets.Attribute(fmt.Sprintf("number%02d", i))
			if err != nil || v == nil || v.Int(0) != int64(i) {
				t.Errorf("%s: attribute %d is %v, %v", version, i, v, err)
			}
		}
		if v, err := sets.Attribute("none"); v != nil || err != nil {
			t.Errorf("%s: an attribute that is not there: %v, %v", version, v, err)
		}
		children, err := group(t, data, "many").Children()
		if err != nil || len(children) != 2000 {
			t.Fatalf("%s: %d children, %v", version, len(children), err)
		}
		for i, c := range children {
			if want := fmt.Sprintf("a child with a rather long name, number %04d", i); c.Name != want {
				t.Fatalf("%s: child %d is %q", version, i, c.Name)
			}
		}
	}
}

// walk reads all that a file has, as far as it can be read, and returns how much that was.
func walk(data []byte) int {
	f, err := hdf5.Open(data)
	if err != nil {
		return 0
	}
	root, err := f.Root()
	if err != nil {
		return 0
	}
	count := 0
	var visit func(o *hdf5.Object, depth int)
	visit = func(o *hdf5.Object, depth int) {
		count++
		if depth > 8 || count > 20_000 {
			return
		}
		o.Attribute("label")
		if v, err := o.Dataset(1 << 16); err == nil && v.Count() > 0 && v.Kind != hdf5.Text {
			v.Float(v.Count() - 1)
		}
		children, _ := o.Children()
		for _, c := range children {
			if child, err := c.Open(); err == nil {
				visit(child, depth+1)
			}
		}
	}
	visit(root, 0)
	return count
}

// A file with any byte changed, or cut anywhere, is read or refused; it never makes the reader fall over or hang.
func TestSpoiltFiles(t *testing.T) {
	for _, version := range versions {
		data := written(t, version)
		if n := walk(data); n < 2000 {
			t.Fatalf("%s: only %d objects in the sound file", version, n)
		}
		for i := 8; i < min(len(data), 6000); i += 7 {
			for _, b := range []byte{0, 0xff, data[i] ^ 0x10} {
				spoilt := append([]byte(nil), data[:min(len(data), 60_000)]...)
				spoilt[i] = b
				walk(spoilt)
			}
		}
		for n := 0; n < len(data); n += len(data)/40 + 1 {
			walk(data[:n])
		}
	}
}

func TestNoHDF5(t *testing.T) {
	for _, data := range [][]byte{nil, []byte("ply\n"), []byte(hdf5.Signature), []byte(hdf5.Signature + "\x09")} {
		if _, err := hdf5.Open(data); err == nil {
			t.Errorf("%q was opened", data)
		}
	}
}

func FuzzHDF5(f *testing.F) {
	f.Add([]byte(hdf5.Signature))
	for _, name := range []string{"new.h5", "old.h5", "fixed.h5", "extensible.h5", "tree.h5"} {
		data, err := os.ReadFile(filepath.Join("testdata", name))
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	f.Fuzz(func(t *testing.T, data []byte) { walk(data) })
}
