package topology_test

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field/topology"
)

// Published rules: isolated body N - S = 2 (Davey 1961, Lighthill 1963); Hunt, Abell, Peterka and Woo 1978: obstacle
// on a surface 0, obstacle with a hole through it -2, plane section 1 - n; Tobak and Peake 1982 (list from memory):
// torus 0, section through a body -1, through a surface that runs on 0. Junction of two pipes -1 (Hunt et al.): a
// patch with two holes that the flow crosses one way each.
func TestDecide(t *testing.T) {
	type hand = topology.Hand
	for _, c := range []struct {
		name    string
		hand    hand
		sum     float64
		want    float64
		missing string
	}{
		{"body with two nodes", hand{Nodes: 2}, 2, 2, ""},
		{"body, one node unseen", hand{Nodes: 2, Foci: 2, Saddles: 3}, 1, 2, "one node or focus is missing"},
		{"torus", hand{Holes: 1, Nodes: 2, Saddles: 2}, 0, 0, ""},
		{"body on a wall", hand{Body: topology.OnWall, Nodes: 8, Saddles: 8}, 0, 0, ""},
		{"body on a wall, saddle unseen", hand{Body: topology.OnWall, Nodes: 8, Saddles: 7}, 1, 0, "one saddle is missing"},
		{"arch on a wall", hand{Body: topology.OnWall, Holes: 1, Nodes: 6, Saddles: 8}, -2, -2, ""},
		{"junction of two pipes", hand{Body: topology.Patch, Rim: topology.OneWay, Holes: 2, Saddles: 1}, -1, -1, ""},
		{"window in a stream", hand{Body: topology.Patch}, 0, 0, ""},
		{"window, tangencies counted",
			hand{Body: topology.Patch, Rim: topology.Counted, Interior: 2, Exterior: 2, Nodes: 1}, 1, 1, ""},
		{"section through a cylinder", hand{Section: true, HalfSaddles: 2}, -1, -1, ""},
		{"section through a bump on a wall", hand{Body: topology.OnWall, Section: true, HalfSaddles: 2, Nodes: 1}, 0, 0, ""},
		{"half of a sphere", hand{HalfNodes: 2}, 1, 1, ""},
		{"half of a body on a wall", hand{Body: topology.OnWall, HalfNodes: 1, HalfSaddles: 2}, -0.5, 0,
			"0.5 of the kind node"},
		{"two saddles unseen", hand{Nodes: 4}, 4, 2, "2 more of the kind saddle are missing"},
	} {
		v := topology.Decide(c.hand)
		if v.Sum != c.sum || v.Expected != c.want || v.Balanced != (c.missing == "") ||
			!strings.Contains(v.Missing, c.missing) {
			t.Errorf("%s: %+v, want sum %g, expected %g, missing %q", c.name, v, c.sum, c.want, c.missing)
		}
		if v.Rule == "" {
			t.Errorf("%s: no rule", c.name)
		}
	}
}

// A reading that obeys another rule is told so: it may have been filed under the wrong body.
func TestDecideNamesOtherRule(t *testing.T) {
	v := topology.Decide(topology.Hand{Nodes: 8, Saddles: 8})
	if v.Balanced || !strings.Contains(v.Other, "on a wall") {
		t.Errorf("%+v", v)
	}
	v = topology.Decide(topology.Hand{HalfSaddles: 2})
	if v.Balanced || !strings.Contains(v.Other, "section") {
		t.Errorf("%+v", v)
	}
}

// Adding what is said to be missing balances the reading.
func TestMissingCloses(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 9)
		h := topology.Hand{Body: topology.Body(rapid.IntRange(0, 2).Draw(t, "body")), Nodes: n.Draw(t, "nodes"),
			Foci: n.Draw(t, "foci"), Saddles: n.Draw(t, "saddles"), HalfNodes: n.Draw(t, "half nodes"),
			HalfSaddles: n.Draw(t, "half saddles"), Holes: n.Draw(t, "holes"), Section: rapid.Bool().Draw(t, "section")}
		v := topology.Decide(h)
		if v.Balanced == (v.Missing != "") {
			t.Fatalf("%+v", v)
		}
		gap := v.Expected - v.Sum
		if math.Trunc(gap) != gap {
			return
		}
		if gap > 0 {
			h.Nodes += int(gap)
		} else {
			h.Saddles -= int(gap)
		}
		if w := topology.Decide(h); !w.Balanced {
			t.Fatalf("%+v after %+v", w, v)
		}
	})
}

// The words of results are read back as what they stood for, and no others are.
func TestWords(t *testing.T) {
	type all struct {
		T topology.Type
		S topology.Sense
		K topology.Kind
		L topology.LineType
		B topology.Body
	}
	for i := range uint8(4) {
		in := all{topology.Type(i), topology.Sense(i % 3), topology.Kind(i % 3), topology.LineType(i), topology.Body(i % 3)}
		text, err := json.Marshal(in)
		if err != nil {
			t.Fatal(err)
		}
		var out all
		if err := json.Unmarshal(text, &out); err != nil || out != in {
			t.Errorf("%s gives %+v (%v)", text, out, err)
		}
	}
	text, _ := json.Marshal(all{
		topology.Saddle, topology.Separation, topology.SeparationLine, topology.Horn, topology.OnWall,
	})
	if want := `{"T":"saddle","S":"separation","K":"separation","L":"horn","B":"on-wall"}`; string(text) != want {
		t.Errorf("%s, want %s", text, want)
	}
	var out all
	for _, bad := range []string{`{"T":"nod"}`, `{"S":""}`, `{"K":"x"}`, `{"L":"x"}`, `{"B":"wall"}`} {
		if err := json.Unmarshal([]byte(bad), &out); err == nil {
			t.Errorf("%s was taken", bad)
		}
	}
	if topology.Type(9).String() != "type 9" {
		t.Error(topology.Type(9))
	}
}
