package render

import (
	"context"
)

// soften smooths rows from..to of the texture by a binomial filter over three pixels each way, and restores the
// contrast: the stairs of lines that run nearly along the rows go, the lines stay.
func (p *plate) soften(ctx context.Context, s smear, from, to int) error {
	channels := 1
	if s.animate {
		channels = 3
	}
	for c := range channels {
		plane := p.tex[c]
		p.soft = fitted(p.soft, len(plane))
		rows := p.bottom - p.top
		err := bands(ctx, from, to, 64, func(from, to int) {
			for y := from; y < to; y++ {
				above := plane[max(y-1, 0)*p.w:][:p.w]
				row := plane[y*p.w:][:p.w]
				below := plane[min(y+1, rows-1)*p.w:][:p.w]
				out := p.soft[y*p.w:][:p.w]
				fade := p.fade[y*p.w:][:p.w]
				column := func(x int) int32 { return int32(above[x]) + 2*int32(row[x]) + int32(below[x]) - 512 }
				left, middle := column(0), column(0)
				for x := range p.w {
					right := column(min(x+1, p.w-1))
					v := int32(128)
					if fade[x] != 0 {
						v = min(max(128+((left+2*middle+right)*softenGain)>>8, 1), 255)
					}
					out[x] = uint8(v)
					left, middle = middle, right
				}
			}
		})
		if err != nil {
			return err
		}
		copy(plane[from*p.w:to*p.w], p.soft[from*p.w:to*p.w])
	}
	return nil
}

// softenGain makes up for the contrast that softening takes, in 1/16: measured on the radome, so that the texture's
// variance stays.
const softenGain = 23
