package main

import (
	"github.com/spf13/cobra"
)

func (a *app) trace() *cobra.Command {
	var r runFlags
	var asJSON bool
	var at string
	cmd := &cobra.Command{
		Use:   "trace RUN --at x,y,z",
		Short: "Follow the limiting streamline through a point, both ways, as CSV",
		Long: `Trace follows the limiting streamline through the surface point nearest to the given one, upstream and
downstream, and writes it along the flow as CSV. Comment lines tell why each end is an end.`,
		Example: `  shearprint trace wing.ply --at 0.1,0,-0.02 > line.csv`,
		Args:    oneRun,
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
			result, err := s.Trace(cmd.Context(), p)
			if err != nil {
				return err
			}
			if asJSON {
				return a.json(result)
			}
			return a.print(result.WriteCSV)
		},
	}
	cmd.Flags().StringVar(&at, "at", "", "the point, as `x,y,z`")
	cmd.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	r.add(cmd)
	return cmd
}
