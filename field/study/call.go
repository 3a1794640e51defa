package study

import (
	"bytes"
	"cmp"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"slices"
	"strings"

	"shearprint/field/r3"
	"shearprint/field/topology"
)

// arguments are what calls take, all in one; the table of calls says which call takes which.
type arguments struct {
	MinRobustness *floor `json:"min_robustness"` // topology: number, or "1%"
	Lines         *bool  `json:"lines"`          // topology: false leaves the lines out
	At            *point `json:"at"`             // probe, trace: [x, y, z]
	Through       points `json:"through"`        // loop: [[x, y, z], ...]
	Parts         parts  `json:"parts"`          // loop, in place of through: numbers of parts
	Box           *box   `json:"box"`            // loop, likewise: two corners
	handArguments
}

// call is one entry of the table of calls.
type call struct {
	name  string
	takes []string
	run   func(ctx context.Context, s *Study, a *arguments) (any, error)
}

var calls = []call{
	{"inspect", nil, func(ctx context.Context, s *Study, _ *arguments) (any, error) { return s.Inspect(ctx) }},
	{"topology", []string{"min_robustness", "lines"}, func(ctx context.Context, s *Study, a *arguments) (any, error) {
		opt := topology.Options{Lines: a.Lines == nil || *a.Lines}
		if a.MinRobustness != nil {
			opt.MinRobustness, opt.Relative = a.MinRobustness.value, a.MinRobustness.relative
		}
		return s.Topology(ctx, opt)
	}},
	{"probe", []string{"at"}, func(ctx context.Context, s *Study, a *arguments) (any, error) {
		if a.At == nil {
			return nil, errNoPoint
		}
		return s.Probe(ctx, r3.Vec(*a.At))
	}},
	{"trace", []string{"at"}, func(ctx context.Context, s *Study, a *arguments) (any, error) {
		if a.At == nil {
			return nil, errNoPoint
		}
		return s.Trace(ctx, r3.Vec(*a.At))
	}},
	{"loop", []string{"through", "parts", "box"}, func(ctx context.Context, s *Study, a *arguments) (any, error) {
		switch {
		case a.Parts != nil && a.Box == nil && a.Through == nil:
			return s.Parts(ctx, a.Parts)
		case a.Box != nil && a.Parts == nil && a.Through == nil:
			return s.Box(ctx, a.Box[0], a.Box[1])
		case a.Box != nil || a.Parts != nil:
			return nil, errTwoRegions
		}
		return s.Loop(ctx, a.Through)
	}},
	{"ledger", handNames, func(_ context.Context, _ *Study, a *arguments) (any, error) {
		h, err := a.hand()
		if err != nil {
			return nil, err
		}
		return ByHand(h), nil
	}},
}

var errNoPoint = errors.New(`the point is missing: give {"at": [x, y, z]}`)

var errTwoRegions = errors.New("a loop goes through points, or is about parts, or about a box: give one of the three")

// Call answers the question of that name with the JSON that the command of that name prints with --json: inspect,
// topology {min_robustness, lines}, probe {at}, trace {at}, loop {through}, {parts} or {box}, ledger {body, nodes, saddles, ...}.
// Arguments are a JSON object, or nothing; a name or an argument that is not known is an error.
func (s *Study) Call(ctx context.Context, name string, args json.RawMessage) (json.RawMessage, error) {
	i := slices.IndexFunc(calls, func(c call) bool { return c.name == name })
	if i < 0 {
		var names []string
		for _, c := range calls {
			names = append(names, c.name)
		}
		return nil, fmt.Errorf("there is no call %q; there are %s", name, strings.Join(names, ", "))
	}
	a, err := calls[i].read(args)
	if err != nil {
		return nil, fmt.Errorf("arguments of %s: %w", name, err)
	}
	result, err := calls[i].run(ctx, s, a)
	if err != nil {
		return nil, err
	}
	return Encode(result)
}

// read reads the arguments and refuses those that the call does not take.
func (c *call) read(args json.RawMessage) (*arguments, error) {
	a := &arguments{}
	if len(bytes.TrimSpace(args)) == 0 {
		return a, nil
	}
	var given map[string]json.RawMessage
	if err := json.Unmarshal(args, &given); err != nil {
		return nil, err
	}
	for _, key := range slices.Sorted(maps.Keys(given)) {
		if !slices.Contains(c.takes, key) {
			return nil, fmt.Errorf("there is no %q; it takes %s", key, cmp.Or(strings.Join(c.takes, ", "), "nothing"))
		}
	}
	return a, json.Unmarshal(args, a)
}
