package main

import (
	"github.com/spf13/cobra"

	"shearprint/field/study"
)

func (a *app) loop() *cobra.Command {
	var r runFlags
	var asJSON bool
	var through string
	cmd := &cobra.Command{
		Use:   "loop RUN --through x,y,z;x,y,z;...",
		Short: "Tell the index along a closed loop on the surface and what accounts for it",
		Example: `  shearprint loop wing.ply --through "0,0,1; 1,0,1; 1,1,1; 0,1,1"
  shearprint loop wing.ply --through "0,0,1;1,0,1;0,1,1" --json`,
		Args: oneRun,
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := required(cmd, "through", through, `--through "0,0,1; 1,0,1; 0,1,1"`); err != nil {
				return err
			}
			points, err := study.ParsePoints(through)
			if err != nil {
				return inOption("--through", err)
			}
			s, err := a.study(args[0], &r, true)
			if err != nil {
				return err
			}
			result, err := s.Loop(cmd.Context(), points)
			if err != nil {
				return err
			}
			if asJSON {
				return a.json(result)
			}
			return a.print(result.WriteText)
		},
	}
	cmd.Flags().StringVar(&through, "through", "", "corners of the loop, as `x,y,z;x,y,z;...`; it closes by itself")
	cmd.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	r.add(cmd)
	return cmd
}
