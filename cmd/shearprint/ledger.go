package main

import (
	"github.com/spf13/cobra"

	"shearprint/field/study"
	"shearprint/field/topology"
)

func (a *app) ledger() *cobra.Command {
	var h topology.Hand
	var body, rim string
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "ledger --nodes N --saddles N --body isolated|on-wall|patch",
		Short: "Balance a reading made by eye, of an oil-flow picture for example",
		Long: `Ledger tells which rule a reading made by eye must obey, whether it does, and what is missing. Foci count as
nodes. Half points lie on a cut: the plane of symmetry of a half body, or, with --section, a plane section.

Exit status 3 tells that the ledger does not balance.`,
		Example: `  shearprint ledger --nodes 8 --saddles 8 --body on-wall
  shearprint ledger --nodes 2 --saddles 1 --half-nodes 2 --half-saddles 2 --body isolated
  shearprint ledger --half-saddles 3 --half-nodes 1 --body isolated --section
  shearprint ledger --nodes 1 --saddles 2 --body patch --interior 0 --exterior 4`,
		Args: noWords,
		RunE: func(cmd *cobra.Command, _ []string) error {
			if err := required(cmd, "body", body, "--body isolated, on-wall or patch"); err != nil {
				return err
			}
			if err := h.Body.UnmarshalText([]byte(body)); err != nil {
				return usagef("--body %q: give isolated, on-wall or patch", body)
			}
			var err error
			if h.Rim, err = study.ParseRim(rim); err != nil {
				return inOption("--rim", err)
			}
			if cmd.Flags().Changed("interior") || cmd.Flags().Changed("exterior") {
				h.Rim = topology.Counted
			}
			if err := study.CheckHand(h); err != nil {
				return usageError{err}
			}
			result := study.ByHand(h)
			if asJSON {
				err = a.json(result)
			} else {
				err = a.print(result.WriteText)
			}
			if err == nil && !result.Balanced {
				return errUnbalanced
			}
			return err
		},
	}
	f := cmd.Flags()
	f.SortFlags = false
	f.IntVar(&h.Nodes, "nodes", 0, "nodes; foci may be counted among them")
	f.IntVar(&h.Foci, "foci", 0, "foci, if counted apart")
	f.IntVar(&h.Saddles, "saddles", 0, "saddles")
	f.StringVar(&body, "body", "", "isolated, on-wall or patch")
	f.IntVar(&h.HalfNodes, "half-nodes", 0, "nodes and foci on a cut")
	f.IntVar(&h.HalfSaddles, "half-saddles", 0, "saddles on a cut")
	f.BoolVar(&h.Section, "section", false, "the reading is of the streamlines in a plane that cuts bodies and walls")
	f.IntVar(&h.Holes, "holes", 0, "holes right through the body, or in the patch besides its outer rim")
	f.StringVar(&rim, "rim", "across", "how the stream meets a patch's rim: across, or one-way")
	f.IntVar(&h.Interior, "interior", 0, "places where tau touches a patch's rim from inside")
	f.IntVar(&h.Exterior, "exterior", 0, "places where tau touches a patch's rim from outside")
	f.BoolVar(&asJSON, "json", false, "write JSON")
	return cmd
}
