package main

import (
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
)

// progress returns what to call with the share of the work done, and what to call at its end. It shows a bar where the
// error stream is a terminal, and nothing elsewhere.
func (a *app) progress(what string, quiet bool) (step func(share float64), end func()) {
	file, ok := a.errOut.(*os.File)
	if !ok || quiet {
		return nil, func() {}
	}
	if info, err := file.Stat(); err != nil || info.Mode()&os.ModeCharDevice == 0 {
		return nil, func() {}
	}
	const whole = 1000
	bar := progressbar.NewOptions(whole, progressbar.OptionSetWriter(file), progressbar.OptionSetDescription(what),
		progressbar.OptionClearOnFinish(), progressbar.OptionThrottle(100*time.Millisecond), progressbar.OptionSetWidth(30))
	// The bar is a courtesy: a terminal that cannot show it spoils no result.
	return func(share float64) { _ = bar.Set(int(share * whole)) }, func() { _ = bar.Clear() }
}
