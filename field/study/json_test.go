package study_test

import (
	"bytes"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field/study"
)

// anyJSON draws a value of any shape that JSON has.
func anyJSON(t *rapid.T, depth int) any {
	kinds := 7
	if depth == 0 {
		kinds = 5
	}
	switch rapid.IntRange(0, kinds-1).Draw(t, "kind") {
	case 0:
		return nil
	case 1:
		return rapid.Bool().Draw(t, "bool")
	case 2:
		return study.Number(rapid.Float64().Draw(t, "number"))
	case 3:
		return rapid.StringOf(rapid.RuneFrom([]rune(`ab ,:[]{}"\<é`))).Draw(t, "string")
	case 4:
		return study.Word(rapid.SampledFrom([]string{"", "Pa"}).Draw(t, "word"))
	case 5:
		list := make([]any, rapid.IntRange(0, 5).Draw(t, "length"))
		for i := range list {
			list[i] = anyJSON(t, depth-1)
		}
		return list
	}
	object := map[string]any{}
	for range rapid.IntRange(0, 4).Draw(t, "size") {
		object[rapid.StringMatching(`[a-c":,]{1,3}`).Draw(t, "key")] = anyJSON(t, depth-1)
	}
	return object
}

func TestEncodeChangesBlanksOnly(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := anyJSON(t, 4)
		got, err := study.Encode(v)
		if err != nil {
			t.Fatal(err)
		}
		var want, compact bytes.Buffer
		enc := json.NewEncoder(&want)
		enc.SetEscapeHTML(false)
		if err := enc.Encode(v); err != nil {
			t.Fatal(err)
		}
		if err := json.Compact(&compact, got); err != nil {
			t.Fatalf("%v in %s", err, got)
		}
		if compact.String() != strings.TrimSpace(want.String()) {
			t.Fatalf("got %s, want %s", compact.String(), want.String())
		}
		if !bytes.HasSuffix(got, []byte("\n")) || bytes.HasSuffix(got, []byte("\n\n")) {
			t.Fatalf("the result must end with one newline: %q", got)
		}
	})
}

func TestEncodeLayout(t *testing.T) {
	type inner struct {
		A study.Vec   `json:"a"`
		B []study.Vec `json:"b"`
	}
	v := struct {
		Empty []int   `json:"empty"`
		List  []inner `json:"list"`
	}{[]int{}, []inner{{A: study.Vec{1, 0.1, -2e-7}, B: make([]study.Vec, 20)}}}
	got, err := study.Encode(v)
	if err != nil {
		t.Fatal(err)
	}
	want := `{
  "empty": [],
  "list": [
    {
      "a": [1, 0.1, -2e-07],
      "b": [
` + strings.Repeat("        [0, 0, 0],\n", 19) + `        [0, 0, 0]
      ]
    }
  ]
}
`
	if string(got) != want {
		t.Errorf("got %s, want %s", got, want)
	}
}

func TestNumbersHaveTenDigits(t *testing.T) {
	for _, c := range []struct {
		x    float64
		want string
	}{
		{0, "0"}, {math.Copysign(0, -1), "0"}, {1, "1"}, {-12345678.9012345, "-12345678.9"}, {1. / 3, "0.3333333333"},
		{2e10, "2e+10"}, {1234567890, "1234567890"}, {6.02214076e23, "6.02214076e+23"}, {1e-5, "1e-05"},
		{math.Inf(1), "null"}, {math.Inf(-1), "null"}, {math.NaN(), "null"}, {5e-324, "4.940656458e-324"},
		{math.MaxFloat64, "1.797693135e+308"},
	} {
		got, err := study.Number(c.x).MarshalJSON()
		if err != nil || string(got) != c.want {
			t.Errorf("%g: got %s (%v), want %s", c.x, got, err, c.want)
		}
	}
}
