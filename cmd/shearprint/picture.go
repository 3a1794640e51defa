package main

import (
	"context"
	"fmt"
	"image"
	"image/png"
	"io"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"shearprint/field"
	"shearprint/field/study"
	"shearprint/field/topology"
	"shearprint/render"
)

// pictureFlags say what a picture shows.
type pictureFlags struct {
	view, look, size       string
	colour, pattern, theme string
	hide, floor            string
	transparent            bool
	samples                int
}

// Words of the options of picture.
var (
	colours = map[string]render.Quantity{
		"auto": render.Auto, "cp": render.Cp, "p": render.Pressure, "tau": render.TauSize, "basins": render.Basins,
		"none": render.Plain,
	}
	patterns = map[string]render.Flow{"texture": render.Texture, "lines": render.FlowLines, "none": render.NoFlow}
	themes   = map[string]render.Theme{"light": render.Light, "dark": render.Dark, "print": render.Print}
	layers   = []string{"points", "lines", "legend"}
)

func (a *app) picture() *cobra.Command {
	var r runFlags
	var p pictureFlags
	var out string
	var force bool
	cmd := &cobra.Command{
		Use:   "picture RUN -o F.png",
		Short: "Make a picture, without browser and GPU",
		Long: `Picture draws the surface with its limiting streamlines as texture, pressure as colour, and critical points and
lines on top.

Points: a disc is a node, a disc with a curl a focus, a star a saddle, a square a degenerate point; filled where
the flow separates, hollow where it attaches. Lines: unbroken where the flow separates, dashed where it attaches,
thin where it does neither; with bars a line runs into or out of a focus, with dots it is open, with rings
a closed orbit.`,
		Example: `  shearprint picture wing.ply -o wing.png
  shearprint picture wing.ply --view rear --size 3840x2160 --theme print -o rear.png
  shearprint picture wing.ply --look 2,-3,1:0.5,0,0 --colour tau --hide lines,legend -o detail.png
  shearprint picture wing.ply --view '#run=wing.ply&eye=-3,-3,2&target=0,0,0&up=0,0,1' --samples 2 -o as-shared.png`,
		Args: oneRun,
		RunE: func(cmd *cobra.Command, args []string) error {
			w, h, err := p.check()
			if err != nil {
				return err
			}
			if ext := filepath.Ext(out); out != "" && !strings.EqualFold(ext, ".png") {
				return usagef("-o %s: picture writes PNG; give a name that ends in .png", out)
			}
			if err := checkOutput(out, force); err != nil {
				return err
			}
			f, err := a.load(args[0], &r, true)
			if err != nil {
				return err
			}
			picture, err := p.draw(cmd.Context(), a, f, w, h, r.quiet)
			if err != nil {
				return err
			}
			return writeFile(out, func(w io.Writer) error { return png.Encode(w, picture) })
		},
	}
	f := cmd.Flags()
	addOutput(cmd, &out, &force)
	f.StringVar(&p.view, "view", "iso", "`VIEW` by its name: "+strings.Join(render.ViewNames(), ", ")+
		"; or all that a link of the page has after its #, with the #")
	f.StringVar(&p.look, "look", "", "view of one's own, `FROM:AT` as x,y,z:x,y,z")
	f.StringVar(&p.size, "size", "1600x1000", "`WxH` in pixels")
	f.StringVar(&p.colour, "colour", "auto", "cp, p, tau, basins or none; auto takes the first that the run has")
	f.StringVar(&p.pattern, "pattern", "texture", "how the direction of tau is shown: texture, lines or none")
	f.StringVar(&p.theme, "theme", "light", "light, dark or print")
	f.StringVar(&p.hide, "hide", "", "`LAYERS` to leave out, with commas: "+strings.Join(layers, ", "))
	f.StringVar(&p.floor, "min-robustness", "0", "leave out points weaker than `R`, in the unit of tau, or R% of the largest")
	f.BoolVar(&p.transparent, "transparent", false, "no background")
	f.IntVar(&p.samples, "samples", 1, "`N` samples per pixel each way, 1 to 4: more are smoother; 1 gives the page's pixels")
	r.add(cmd)
	return cmd
}

// check refuses words that make no sense, before any work, and returns the picture's size.
func (p *pictureFlags) check() (w, h int, err error) {
	if p.samples < 1 || p.samples > 4 {
		return 0, 0, usagef("--samples %d: give 1 to 4", p.samples)
	}
	if p.linked() {
		if _, err := p.link(); err != nil {
			return 0, 0, usagef("--view: %w", err)
		}
		return parseSize(p.size)
	}
	if !slices.Contains(render.ViewNames(), p.view) {
		return 0, 0, usagef("--view %s: give one of %s", p.view, strings.Join(render.ViewNames(), ", "))
	}
	if p.look != "" {
		if _, err := render.LookFrom(p.look); err != nil {
			return 0, 0, usagef("--look: %w", err)
		}
	}
	if _, ok := colours[p.colour]; !ok {
		return 0, 0, usagef("--colour %s: give auto, cp, p, tau, basins or none", p.colour)
	}
	if _, ok := patterns[p.pattern]; !ok {
		return 0, 0, usagef("--pattern %s: give texture, lines or none", p.pattern)
	}
	if _, ok := themes[p.theme]; !ok {
		return 0, 0, usagef("--theme %s: give light, dark or print", p.theme)
	}
	for _, word := range p.hidden() {
		if !slices.Contains(layers, word) {
			return 0, 0, usagef("--hide %s: the layers are %s", word, strings.Join(layers, ", "))
		}
	}
	if _, _, err := study.ParseRobustness(p.floor); err != nil {
		return 0, 0, inOption("--min-robustness", err)
	}
	return parseSize(p.size)
}

func (p *pictureFlags) hidden() []string {
	if p.hide == "" {
		return nil
	}
	return strings.Split(p.hide, ",")
}

// Sizes of pictures [pixels]: smaller ones show nothing, larger ones nobody can open.
const leastSide, mostSide = 16, 8192

func parseSize(s string) (w, h int, err error) {
	left, right, _ := strings.Cut(s, "x")
	w, err1 := strconv.Atoi(left)
	h, err2 := strconv.Atoi(right)
	if err1 != nil || err2 != nil || min(w, h) < leastSide || max(w, h) > mostSide {
		return 0, 0, usagef("--size %s: give width and height as 1600x1000, from %d to %d", s, leastSide, mostSide)
	}
	return w, h, nil
}

// streamlineGap is the distance between streamlines, as a share of the run's size: close enough to show a focus an eighth
// of the body wide, and far enough to see the colours between.
const streamlineGap = 1. / 60

// draw makes the picture. The skeleton is computed only if it is shown.
func (p *pictureFlags) draw(ctx context.Context, a *app, f *field.Field, w, h int, quiet bool) (*image.RGBA, error) {
	if p.linked() {
		return p.drawLink(ctx, a, f, w, h, quiet)
	}
	hidden := p.hidden()
	points, lines := !slices.Contains(hidden, "points"), !slices.Contains(hidden, "lines")
	var sk *topology.Skeleton
	basins := colours[p.colour] == render.Basins
	if points || lines || basins {
		opt := topology.Options{Lines: lines || basins}
		var end func()
		opt.Progress, end = a.progress("reading the pattern", quiet)
		var err error
		if opt.MinRobustness, opt.Relative, err = study.ParseRobustness(p.floor); err != nil {
			return nil, err
		}
		sk, err = topology.Find(ctx, f, opt)
		end()
		if err != nil {
			return nil, err
		}
	}
	scene := render.SceneOf(f, sk)
	scene.Quantity, scene.Flow, scene.Theme = colours[p.colour], patterns[p.pattern], themes[p.theme]
	scene.Transparent, scene.Bare = p.transparent, slices.Contains(hidden, "legend")
	if scene.Flow == render.FlowLines {
		var err error
		if scene.Streamlines, err = render.Streamlines(ctx, f, float64(streamlineGap*f.Diagonal())); err != nil {
			return nil, err
		}
	}
	if !points {
		scene.Marks = nil
	}
	if !lines {
		scene.Lines = nil
	}
	return p.paint(ctx, scene, p.camera(f, w, h), w, h)
}

// paint makes the pixels.
func (p *pictureFlags) paint(ctx context.Context, s *render.Scene, c render.Camera, w, h int) (*image.RGBA, error) {
	picture, err := render.NewRenderer().Picture(ctx, s, c, w, h, p.samples)
	if err != nil {
		return nil, fmt.Errorf("the picture: %w", err)
	}
	return picture, nil
}

func (p *pictureFlags) camera(f *field.Field, w, h int) render.Camera {
	if p.look != "" {
		if c, err := render.LookFrom(p.look); err == nil { // checked before
			return c
		}
	}
	return render.NamedView(p.view, f).Fit(f, float64(w)/float64(h))
}
