package main

import (
	"context"
	"io"

	"github.com/spf13/cobra"

	"shearprint/field/study"
)

func (a *app) loop() *cobra.Command {
	var r runFlags
	var asJSON bool
	var through, parts, box string
	cmd := &cobra.Command{
		Use:   "loop RUN --through x,y,z;x,y,z;...",
		Short: "Tell the index along a closed loop on the surface and what accounts for it",
		Long: `Loop tells how the wall shear stress turns along a closed loop on the surface, the index of the region on its
left, and whether the critical points inside account for it. With --parts or --box it balances the region that
consists of parts of the surface, or lies in a box.`,
		Example: `  shearprint loop wing.ply --through "0,0,1; 1,0,1; 1,1,1; 0,1,1"
  shearprint loop wing.ply --through "0,0,1;1,0,1;0,1,1" --json
  shearprint loop car.ply --parts 0,3
  shearprint loop car.ply --box 2,-1,0:4,1,1.5`,
		Args: oneRun,
		RunE: func(cmd *cobra.Command, args []string) error {
			ask, err := regionAsked(cmd, through, parts, box)
			if err != nil {
				return err
			}
			s, err := a.study(args[0], &r, true)
			if err != nil {
				return err
			}
			result, err := ask(cmd.Context(), s)
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
	cmd.Flags().StringVar(&parts, "parts", "", "`NUMBERS` of parts, as inspect lists them, with commas")
	cmd.Flags().StringVar(&box, "box", "", "two opposite corners of a box, as `x,y,z:x,y,z`")
	cmd.Flags().BoolVar(&asJSON, "json", false, "write JSON")
	r.add(cmd)
	return cmd
}

// worded is a result that has words.
type worded interface{ WriteText(w io.Writer) error }

// regionAsked returns the question that the options ask.
func regionAsked(cmd *cobra.Command, through, parts, box string) (func(context.Context, *study.Study) (worded, error), error) {
	given := 0
	for _, s := range []string{through, parts, box} {
		if s != "" {
			given++
		}
	}
	if given > 1 {
		return nil, usagef("loop takes one of --through, --parts and --box")
	}
	switch {
	case parts != "":
		list, err := study.ParseParts(parts)
		if err != nil {
			return nil, inOption("--parts", err)
		}
		return func(ctx context.Context, s *study.Study) (worded, error) { return s.Parts(ctx, list) }, nil
	case box != "":
		corners, err := study.ParseBox(box)
		if err != nil {
			return nil, inOption("--box", err)
		}
		return func(ctx context.Context, s *study.Study) (worded, error) { return s.Box(ctx, corners[0], corners[1]) }, nil
	}
	if err := required(cmd, "through", through, `--through "0,0,1; 1,0,1; 0,1,1"`); err != nil {
		return nil, err
	}
	points, err := study.ParsePoints(through)
	if err != nil {
		return nil, inOption("--through", err)
	}
	return func(ctx context.Context, s *study.Study) (worded, error) { return s.Loop(ctx, points) }, nil
}
