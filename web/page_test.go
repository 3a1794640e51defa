package web_test

import "testing"

func TestStart(t *testing.T) {
	b := visit(t, 1280, 720, "")
	b.until(ready + " && " + still)
	b.shot("start")
	t.Log(eval[map[string]any](b, `shearprint.call("timings")`))
}
