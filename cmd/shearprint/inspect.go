package main

import "github.com/spf13/cobra"

func (a *app) inspect() *cobra.Command {
	var r runFlags
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "inspect RUN",
		Short: "Tell the health of mesh and field: counts, what was repaired, what is doubtful",
		Example: `  shearprint inspect wing.ply
  shearprint inspect export.csv --surface wing.stl --unit mm --json`,
		Args: oneRun,
		RunE: func(cmd *cobra.Command, args []string) error {
			s, err := a.study(args[0], &r, false)
			if err != nil {
				return err
			}
			result, err := s.Inspect(cmd.Context())
			if err != nil {
				return err
			}
			if asJSON {
				return a.json(result)
			}
			return a.print(result.WriteText)
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	r.add(cmd)
	return cmd
}
