package main

import (
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"shearprint/field"
	"shearprint/field/format"
)

// writers are the forms that convert writes, by the ending of the file's name. They write the run before repair: what
// reading mends is mended, and told, at every reading alike, and sharp edges keep the data of both sides.
var writers = map[string]func(io.Writer, field.Raw) error{
	".glb": format.WriteRawGLB,
	".ply": format.WriteRawPLY,
}

func (a *app) convert() *cobra.Command {
	var r runFlags
	var out string
	var force bool
	cmd := &cobra.Command{
		Use:   "convert RUN -o F.glb",
		Short: "Write the run in the form that the browser loads (.glb), or as .ply",
		Example: `  shearprint convert wing.cgns -o wing.glb
  shearprint convert export.csv --surface wing.stl --unit mm -o wing.ply`,
		Args: oneRun,
		RunE: func(cmd *cobra.Command, args []string) error {
			write, ok := writers[strings.ToLower(filepath.Ext(out))]
			if out != "" && !ok {
				return usagef("-o %s: convert writes .glb and .ply; give such a name", out)
			}
			if err := checkOutput(out, force); err != nil {
				return err
			}
			data, opt, err := r.read(args[0])
			if err != nil {
				return err
			}
			raw, err := format.Prepare(args[0], data, opt)
			if err != nil {
				return err
			}
			f, err := field.Build(raw) // a run that cannot be built must not be passed on
			if err != nil {
				return fmt.Errorf("%s: %w; check the export", args[0], err)
			}
			a.tell(args[0], f, &r)
			return writeFile(out, func(w io.Writer) error { return write(w, raw) })
		},
	}
	addOutput(cmd, &out, &force)
	r.add(cmd)
	return cmd
}

// addOutput adds the options of a command that writes a file.
func addOutput(cmd *cobra.Command, out *string, force *bool) {
	cmd.Flags().StringVarP(out, "output", "o", "", "`FILE` to write")
	cmd.Flags().BoolVar(force, "force", false, "write over a file that exists")
}
