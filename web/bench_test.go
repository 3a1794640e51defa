package web_test

import (
	"testing"

	"shearprint/field/exact"
	"shearprint/web"
)

// BenchmarkPage drags a run of 250 000 triangles over a stage of 1280 x 720 on the plain canvas, and reports the medians
// that the page itself measures, in milliseconds.
func BenchmarkPage(b *testing.B) {
	data := ply(b, exact.Cases()[0].Raw(250_000))
	page := visit(b, 1280, 720, "?present=cpu", web.Run{Name: "ball.ply", Data: func() ([]byte, error) { return data, nil }})
	page.until(ready)
	page.settle()
	for b.Loop() {
		page.drag(700, 300, 900, 380, 120)
		page.settle()
	}
	for name, ms := range eval[map[string]float64](page, `shearprint.call("timings")`) {
		b.ReportMetric(ms, name+"-ms")
	}
}
