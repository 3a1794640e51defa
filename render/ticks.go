package render

import (
	"math"
	"strconv"
	"strings"
)

// niceStep returns the smallest of 1, 2 and 5 times a power of ten that is not below x.
func niceStep(x float64) float64 {
	if !(x > 0) || math.IsInf(x, 0) {
		return 1
	}
	power := 1.0
	for power > x {
		power /= 10
	}
	for power*10 <= x {
		power *= 10
	}
	for _, k := range [...]float64{1, 2, 5} {
		if power*k >= x*(1-1e-9) {
			return float64(power * k)
		}
	}
	return float64(power * 10)
}

// ticks returns round values within lo..hi, about count of them, and their distance.
func ticks(lo, hi float64, count int) (values []float64, step float64) {
	step = niceStep((hi - lo) / float64(max(count, 1)))
	for k := math.Ceil(lo/step - 1e-9); k*step <= hi+float64(1e-9*step) && len(values) < 100; k++ {
		values = append(values, k*step)
	}
	return values, step
}

// tickText writes a multiple of step with as many digits as the step has; with an exponent where that is shorter.
func tickText(x, step float64) string {
	if math.Abs(x) < step/2 {
		return "0"
	}
	var text string
	if size := math.Abs(x); size >= 1e5 || step < 1e-4 {
		text = strconv.FormatFloat(x, 'g', 4, 64)
	} else {
		decimals := 0
		for s := step; s < 1-1e-9 && decimals < 6; s *= 10 {
			decimals++
		}
		text = strconv.FormatFloat(x, 'f', decimals, 64)
	}
	return strings.Replace(text, "-", "−", 1)
}
