package main

import (
	"github.com/spf13/cobra"

	"shearprint/field/study"
	"shearprint/field/topology"
)

func (a *app) topology() *cobra.Command {
	var r runFlags
	var asJSON, asCSV bool
	var floor string
	cmd := &cobra.Command{
		Use:   "topology RUN",
		Short: "Find critical points, lines and ledger",
		Long: `Topology finds the critical points of the wall shear stress, the lines that separate and attach, and the
ledger that balances the points against what the surface demands.

Exit status 3 tells that the ledger does not balance.`,
		Example: `  shearprint topology wing.ply
  shearprint topology wing.ply --json --min-robustness 0.5% > wing.json
  shearprint topology half.cgns --mirror y --csv > wing.csv`,
		Args: oneRun,
		RunE: func(cmd *cobra.Command, args []string) error {
			if asJSON && asCSV {
				return usagef("--json and --csv exclude one another; give one of them")
			}
			opt := topology.Options{Lines: true}
			var err error
			if opt.MinRobustness, opt.Relative, err = study.ParseRobustness(floor); err != nil {
				return inOption("--min-robustness", err)
			}
			s, err := a.study(args[0], &r, true)
			if err != nil {
				return err
			}
			var end func()
			opt.Progress, end = a.progress("reading the pattern", r.quiet)
			result, err := s.Topology(cmd.Context(), opt)
			end()
			if err != nil {
				return err
			}
			return a.printTopology(result, asJSON, asCSV)
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	cmd.Flags().BoolVar(&asCSV, "csv", false, "write three tables: points, lines, and the points of the lines")
	cmd.Flags().StringVar(&floor, "min-robustness", "0", "cancel points weaker than `R`, in the unit of tau, or R% of the largest")
	r.add(cmd)
	return cmd
}

func (a *app) printTopology(result *study.Topology, asJSON, asCSV bool) error {
	var err error
	switch {
	case asJSON:
		err = a.json(result)
	case asCSV:
		err = a.print(result.WriteCSV)
	default:
		err = a.print(result.WriteText)
	}
	if err == nil && !result.Ledger.Balanced {
		return errUnbalanced
	}
	return err
}
