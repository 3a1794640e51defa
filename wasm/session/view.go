package session

import (
	"encoding/json"
	"fmt"
	"net/url"
	"slices"
	"strconv"
	"strings"

	"shearprint/field/r3"
	"shearprint/render"
)

// View is all that a link carries: the run, the camera and what is shown. As JSON it has the names that the link has.
type View struct {
	Run string `json:"run"`

	Eye      [3]float64 `json:"eye"`
	Target   [3]float64 `json:"target"`
	Up       [3]float64 `json:"up"`
	Angle    float64    `json:"angle"` // vertical angle of view [rad]; 0 for the usual one
	Parallel bool       `json:"parallel"`

	Colour string `json:"colour"`  // "cp", "p", "tau", "basins" or "none"
	Flow   string `json:"pattern"` // "texture", "lines" or "none"
	Theme  string `json:"theme"`   // "light" or "dark"

	Points     bool `json:"points"`
	Separation bool `json:"separation"` // lines by what they do ...
	Attachment bool `json:"attachment"`
	Closed     bool `json:"closed"` // ... and by their type
	Horn       bool `json:"horn"`
	Open       bool `json:"open"`
	Cycle      bool `json:"cycle"`
	Legend     bool `json:"legend"`
	Isobars    bool `json:"isobars"`
	Motion     bool `json:"motion"` // the texture moves along the flow

	Floor float64     `json:"floor"` // robustness below which points are cancelled [unit of tau]
	At    *[3]float64 `json:"at"`    // the chosen place; nil for none
}

// Words that the fields may have; the first is the default.
var (
	colours = []string{"cp", "p", "tau", "basins", "none"}
	flows   = []string{"texture", "lines", "none"}
	themes  = []string{"light", "dark"}
)

// Default returns the view of a run that was just opened, without a camera.
func Default(run string) View {
	return View{
		Run: run, Colour: colours[0], Flow: flows[0], Theme: themes[0], Points: true, Separation: true, Attachment: true,
		Closed: true, Horn: true, Open: true, Cycle: true, Legend: true,
	}
}

// Suit returns the view for a run: a quantity that the run lacks gives way to one that it has.
func (v View) Suit(hasP, hasCp bool) View {
	if v.Colour == "cp" && !hasCp {
		v.Colour = "p"
	}
	if v.Colour == "p" && !hasP {
		v.Colour = "tau"
		if hasCp {
			v.Colour = "cp"
		}
	}
	return v
}

// Camera returns the view's camera. HasCamera tells whether there is one.
func (v View) Camera() render.Camera {
	return render.Camera{From: vec(v.Eye), At: vec(v.Target), Up: vec(v.Up), Fov: v.Angle, Ortho: v.Parallel}
}

// HasCamera tells whether eye and target differ.
func (v View) HasCamera() bool { return v.Eye != v.Target }

// With returns the view with another camera.
func (v View) With(c render.Camera) View {
	v.Eye, v.Target, v.Up, v.Angle, v.Parallel = list(c.From), list(c.At), list(c.Up), c.Fov, c.Ortho
	return v
}

func vec(x [3]float64) r3.Vec  { return r3.Vec{X: x[0], Y: x[1], Z: x[2]} }
func list(p r3.Vec) [3]float64 { return [3]float64{p.X, p.Y, p.Z} }

// word is a field with a list of words, toggle one that is on or off, place one with three numbers.
type word struct {
	key   string
	value *string
	list  []string
}

type toggle struct {
	key     string
	value   *bool
	initial bool
}

type place struct {
	key   string
	value *[3]float64
}

func (v *View) words() []word {
	return []word{{"colour", &v.Colour, colours}, {"pattern", &v.Flow, flows}, {"theme", &v.Theme, themes}}
}

func (v *View) toggles() []toggle {
	return []toggle{
		{"parallel", &v.Parallel, false}, {"points", &v.Points, true}, {"separation", &v.Separation, true},
		{"attachment", &v.Attachment, true}, {"closed", &v.Closed, true}, {"horn", &v.Horn, true}, {"open", &v.Open, true},
		{"cycle", &v.Cycle, true}, {"legend", &v.Legend, true}, {"isobars", &v.Isobars, false},
		{"motion", &v.Motion, false},
	}
}

func (v *View) places() []place {
	return []place{{"eye", &v.Eye}, {"target", &v.Target}, {"up", &v.Up}}
}

// largestCoordinate keeps squares of distances finite.
const largestCoordinate = 1e100

// Check says what is wrong with the view.
func (v View) Check() error {
	for _, w := range v.words() {
		if !slices.Contains(w.list, *w.value) {
			return fmt.Errorf("%s is %q; there are %s", w.key, *w.value, strings.Join(w.list, ", "))
		}
	}
	places := v.places()
	if v.At != nil {
		places = append(places, place{"at", v.At})
	}
	for _, p := range places {
		for _, x := range p.value {
			if !finite(x) || x > largestCoordinate || x < -largestCoordinate {
				return fmt.Errorf("%s: %g is no number that a point can have", p.key, x)
			}
		}
	}
	if !finite(v.Floor, v.Angle) || v.Floor < 0 || v.Angle < 0 || v.Angle >= 3 {
		return fmt.Errorf("floor %g or angle %g is out of range", v.Floor, v.Angle)
	}
	return nil
}

// Change returns the view with the fields of a JSON object; the others stay. If the object makes no sense, the error says
// why and the view is unchanged.
func (v View) Change(object json.RawMessage) (View, error) {
	out := v
	if v.At != nil { // decoding must not write into the old view
		at := *v.At
		out.At = &at
	}
	if err := strict(object, &out); err != nil {
		return v, err
	}
	if err := out.Check(); err != nil {
		return v, err
	}
	return out, nil
}

// digits of numbers in links: where the camera is close to a face of a fine mesh, a pixel is 1e-7 of the coordinates.
const digits = 9

// Encode returns the view as the part of an address behind #. What has its default is left out.
func (v View) Encode() string {
	var b strings.Builder
	put := func(key, value string) {
		if b.Len() > 0 {
			b.WriteByte('&')
		}
		b.WriteString(key + "=" + value)
	}
	put("run", url.QueryEscape(v.Run))
	for _, p := range v.places() {
		put(p.key, point(*p.value))
	}
	if v.Angle != 0 {
		put("angle", number(v.Angle))
	}
	for _, w := range v.words() {
		if *w.value != w.list[0] {
			put(w.key, *w.value)
		}
	}
	for _, t := range v.toggles() {
		if *t.value != t.initial {
			put(t.key, map[bool]string{true: "1", false: "0"}[*t.value])
		}
	}
	if v.Floor > 0 {
		put("floor", number(v.Floor))
	}
	if v.At != nil {
		put("at", point(*v.At))
	}
	return b.String()
}

// number leaves out the plus of an exponent, which in an address is a blank.
func number(x float64) string {
	return strings.Replace(strconv.FormatFloat(x, 'g', digits, 64), "e+", "e", 1)
}

func point(p [3]float64) string { return number(p[0]) + "," + number(p[1]) + "," + number(p[2]) }

// Decode reads what Encode wrote, over the view given as the default. Keys that are missing leave the default; an unknown
// key or a value that makes no sense is an error that names it.
func Decode(link string, v View) (View, error) {
	out := v
	for part := range strings.SplitSeq(strings.TrimPrefix(link, "#"), "&") {
		key, value, _ := strings.Cut(part, "=")
		if key == "" {
			continue
		}
		value, err := url.QueryUnescape(value)
		if err == nil {
			err = out.take(key, value)
		}
		if err != nil {
			return v, fmt.Errorf("the address says %s: %w", part, err)
		}
	}
	if err := out.Check(); err != nil {
		return v, fmt.Errorf("the address: %w", err)
	}
	return out, nil
}

func (v *View) take(key, value string) error {
	for _, w := range v.words() {
		if w.key == key {
			*w.value = value
			return nil
		}
	}
	for _, t := range v.toggles() {
		if t.key == key {
			*t.value = value == "1"
			return nil
		}
	}
	for _, p := range append(v.places(), place{"at", new([3]float64)}) {
		if p.key != key {
			continue
		}
		if err := parsePoint(value, p.value); err != nil {
			return err
		}
		if key == "at" {
			v.At = p.value
		}
		return nil
	}
	var err error
	switch key {
	case "run":
		v.Run = value
	case "angle":
		v.Angle, err = strconv.ParseFloat(value, 64)
	case "floor":
		v.Floor, err = strconv.ParseFloat(value, 64)
	default:
		err = fmt.Errorf("there is no part of that name")
	}
	return err
}

func parsePoint(s string, into *[3]float64) error {
	parts := strings.Split(s, ",")
	if len(parts) != 3 {
		return fmt.Errorf("a point is three numbers with commas")
	}
	for k, p := range parts {
		x, err := strconv.ParseFloat(p, 64)
		if err != nil {
			return fmt.Errorf("%q is no number that a point can have", p)
		}
		into[k] = x
	}
	return nil
}
