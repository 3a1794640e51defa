package format_test

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shearprint/field/format"
)

// Numbers in tables and in ascii PLY are read to the last bit as package strconv reads them, however they are written.
func TestNumbersAreExact(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var words []string
		for range 6 {
			x := rapid.Float64().Draw(t, "x")
			if math.Abs(x) > 1e99 {
				x = 1 / x
			}
			form := rapid.SampledFrom([]byte("efgG")).Draw(t, "form")
			words = append(words, strconv.FormatFloat(x, form, rapid.IntRange(-1, 20).Draw(t, "digits"), 64))
		}
		rows := "0,0," + strings.Join(words, ",") + "\n1,0,0,0,0,0,0,0\n0,1,1,0,0,0,0,0\n1,1,0,1,0,0,0,0\n"
		var ply strings.Builder
		ply.WriteString("ply\nformat ascii 1.0\nelement vertex 1\n")
		for _, n := range []string{"x", "y", "z", "tau_x", "tau_y", "tau_z"} {
			fmt.Fprintf(&ply, "property double %s\n", n)
		}
		ply.WriteString("end_header\n" + strings.Join(words, " ") + "\n")
		want := make([]float64, 6)
		for i, w := range words {
			x, err := strconv.ParseFloat(w, 64)
			if err != nil {
				t.Fatal(err)
			}
			want[i] = x
		}
		check := func(kind string, data string, opt format.Options) {
			raw, err := format.Read(kind, []byte(data), opt)
			if err != nil {
				t.Fatal(err)
			}
			p, v := raw.Points[0], raw.Tau[0]
			for i, x := range []float64{p.X, p.Y, p.Z, v.X, v.Y, v.Z} {
				if math.Float64bits(x) != math.Float64bits(want[i]) {
					t.Fatalf("%s: %s is read as %v, want %v", kind, words[i], x, want[i])
				}
			}
		}
		check("ply", ply.String(), format.Options{})
		check("csv", "i,j,x,y,z,tau_x,tau_y,tau_z\n"+rows, format.Options{})
	})
}
