package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"shearprint/field"
	"shearprint/field/format"
)

// maxFile is the size of the largest file that is read: a surface of ten million triangles in double precision.
const maxFile = 1 << 30

// runFlags are the options of every command that takes a RUN.
type runFlags struct {
	surface, tau, p, cp string
	flip                bool
	mirror, unit        string
	quiet               bool
}

func (r *runFlags) add(cmd *cobra.Command) {
	f := cmd.Flags()
	f.SortFlags = false
	f.StringVar(&r.surface, "surface", "", "`FILE` with the geometry, for a table that has none")
	f.StringVar(&r.tau, "tau", "", "`NAME` of the wall shear stress: a base name, or three names with commas")
	f.StringVar(&r.p, "p", "", "`NAME` of the pressure")
	f.StringVar(&r.cp, "cp", "", "`NAME` of the pressure coefficient")
	f.BoolVar(&r.flip, "flip", false, "turn tau's sign: some solvers write the stress on the fluid")
	f.StringVar(&r.mirror, "mirror", "", "complete a half model: x, y or z, or `PLANE` as y=0.5")
	f.StringVar(&r.unit, "unit", "", "`UNIT` of the file's lengths: m, mm, cm, in, ft")
	f.BoolVar(&r.quiet, "quiet", false, "tell nothing but results and errors")
}

// units that --unit knows.
var units = []string{"m", "mm", "cm", "in", "ft"}

// check refuses words that make no sense, before any file is read.
func (r *runFlags) check() error {
	if r.unit != "" && !slices.Contains(units, r.unit) {
		return usagef("--unit %s: there is no such unit; give one of %s", r.unit, strings.Join(units, ", "))
	}
	if r.mirror == "" {
		return nil
	}
	axis, value, given := strings.Cut(r.mirror, "=")
	_, err := strconv.ParseFloat(value, 64)
	if !slices.Contains([]string{"x", "y", "z"}, axis) || given && err != nil {
		return usagef("--mirror %s: that is no plane; give x, y or z, or a plane as y=0.5", r.mirror)
	}
	return nil
}

// load reads a run and tells what was found about it, unless the command tells that itself.
func (a *app) load(path string, r *runFlags, tell bool) (*field.Field, error) {
	data, opt, err := r.read(path)
	if err != nil {
		return nil, err
	}
	f, err := format.Load(path, data, opt)
	if err != nil {
		return nil, err
	}
	if tell {
		a.tell(path, f, r)
	}
	return f, nil
}

// tell keeps what was found about a run, each finding in a line, for the end of a command that succeeds: an error is one
// line and stands alone.
func (a *app) tell(path string, f *field.Field, r *runFlags) {
	if r.quiet {
		return
	}
	for _, finding := range f.Findings {
		where := ""
		if finding.Where != "" {
			where = " (first: " + finding.Where + ")"
		}
		a.findings = append(a.findings, fmt.Sprintf("%s: %s: %s%s", path, finding.Level, finding.Text, where))
	}
}

// read returns the file's bytes and how to read them.
func (r *runFlags) read(path string) ([]byte, format.Options, error) {
	opt := format.Options{Tau: r.tau, P: r.p, Cp: r.cp, Flip: r.flip, Mirror: r.mirror, Unit: r.unit}
	if err := r.check(); err != nil {
		return nil, opt, err
	}
	data, err := readFile(path)
	if err != nil {
		return nil, opt, err
	}
	if r.surface != "" {
		opt.SurfaceName = r.surface
		if opt.Surface, err = readFile(r.surface); err != nil {
			return nil, opt, err
		}
	}
	root, err := os.OpenRoot(filepath.Dir(path))
	if err != nil {
		return nil, opt, fileError(path, err)
	}
	opt.Files = root.FS()
	return data, opt, nil
}

// readFile reads a whole file, up to maxFile.
func readFile(path string) ([]byte, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, fileError(path, err)
	}
	defer file.Close()
	info, err := file.Stat()
	switch {
	case err != nil:
		return nil, fileError(path, err)
	case info.IsDir():
		return nil, fmt.Errorf("%s: that is a folder; name a file in it", path)
	case info.Mode()&fs.ModeDevice != 0:
		return nil, fmt.Errorf("%s: that is a device; name a file", path)
	case info.Size() > maxFile:
		return nil, fmt.Errorf("%s: the file is larger than 1 GiB; cut the surface out of it first", path)
	}
	data := make([]byte, 0, info.Size()+1)
	for {
		n, err := file.Read(data[len(data):cap(data)])
		data = data[:len(data)+n]
		switch {
		case errors.Is(err, io.EOF):
			return data, nil
		case err != nil:
			return nil, fileError(path, err)
		case len(data) > maxFile:
			return nil, fmt.Errorf("%s: more than 1 GiB comes out of it; cut the surface out of it first", path)
		case len(data) == cap(data):
			data = append(data, 0)[:len(data)]
		}
	}
}

// fileError says in one line what the system says of a file.
func fileError(path string, err error) error {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("%s: there is no such file; check the path", path)
	case errors.Is(err, fs.ErrPermission):
		return fmt.Errorf("%s: the system does not let it be read; check the permissions", path)
	}
	var pe *fs.PathError
	if errors.As(err, &pe) {
		err = pe.Err
	}
	return fmt.Errorf("%s: %w", path, err)
}
