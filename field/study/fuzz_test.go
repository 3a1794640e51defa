package study_test

import (
	"context"
	"encoding/json"
	"strings"
	"testing"
)

// Whatever the page sends, the answer is valid JSON or an error of one line.
func FuzzCall(f *testing.F) {
	for _, s := range [][2]string{
		{"inspect", "{}"}, {"topology", `{"min_robustness": "1%"}`}, {"probe", `{"at": [0.1, 0.2, 0]}`},
		{"trace", `{"at": "0.1,0.2,0"}`}, {"loop", `{"through": [[0.5,-0.5,0],[0.5,0.5,0],[-0.5,0,0]]}`},
		{"loop", `{"through": [[0,0,0],[0,0,0],[0,0,0]]}`}, {"ledger", `{"body": "patch", "nodes": 1}`},
		{"loop", `{"parts": [0]}`}, {"loop", `{"box": [[0,0,-1],[0.5,0.5,1]]}`},
		{"probe", `{"at": [1e99, 0, 0]}`}, {"topology", `{"min_robustness": 1e308}`},
	} {
		f.Add(s[0], s[1])
	}
	s := plane(f, 1, saddle)
	f.Fuzz(func(t *testing.T, name, args string) {
		got, err := s.Call(context.Background(), name, json.RawMessage(args))
		if err == nil && !json.Valid(got) {
			t.Errorf("%s %s: no JSON: %s", name, args, got)
		}
		if err != nil && (strings.ContainsAny(err.Error(), "\r\n") || err.Error() == "") {
			t.Errorf("%s %s: the error is not one line: %q", name, args, err)
		}
	})
}
