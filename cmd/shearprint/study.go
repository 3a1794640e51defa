package main

import (
	"github.com/spf13/cobra"

	"shearprint/field/study"
)

// study loads a run for questions.
func (a *app) study(path string, r *runFlags, tell bool) (*study.Study, error) {
	f, err := a.load(path, r, tell)
	if err != nil {
		return nil, err
	}
	return study.New(f), nil
}

// required returns the value of an option that the command cannot do without.
func required(cmd *cobra.Command, name, value, example string) error {
	if value == "" {
		return usagef("%s needs --%s; for example %s", cmd.Name(), name, example)
	}
	return nil
}
