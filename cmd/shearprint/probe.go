package main

import (
	"github.com/spf13/cobra"
)

func (a *app) probe() *cobra.Command {
	var r runFlags
	var asJSON bool
	var at string
	cmd := &cobra.Command{
		Use:   "probe RUN --at x,y,z",
		Short: "Tell all that is known at one surface point",
		Long: `Probe takes the surface point nearest to the given one and tells tau, pressure, the Jacobian of tau with its
eigenvalues, and the nearest critical point. Coordinates are in metres once the run's unit is known.`,
		Example: `  shearprint probe wing.ply --at 0.1,0,-0.02
  shearprint probe wing.ply --at 0.1,0,-0.02 --json`,
		Args: oneRun,
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := required(cmd, "at", at, "--at 0.1,0,-0.02"); err != nil {
				return err
			}
			p, err := point("--at", at)
			if err != nil {
				return err
			}
			s, err := a.study(args[0], &r, true)
			if err != nil {
				return err
			}
			result, err := s.Probe(cmd.Context(), p)
			if err != nil {
				return err
			}
			if asJSON {
				return a.json(result)
			}
			return a.print(result.WriteText)
		},
	}
	cmd.Flags().StringVar(&at, "at", "", "the point, as `x,y,z`")
	cmd.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	r.add(cmd)
	return cmd
}
