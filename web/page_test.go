package web_test

import "testing"

func TestStart(t *testing.T) {
	b := visit(t, 1280, 720, "")
	b.until(ready)
	b.settle()
	b.shot("start")
	t.Log(eval[map[string]any](b, `shearprint.call("timings")`))
}

func TestClickOnSaddle(t *testing.T) {
	b := visit(t, 1280, 720, "")
	b.until(ready)
	b.settle()
	eval[any](b, `document.querySelector("#book tr[data-id=S1]").click()`)
	b.until(`!document.getElementById("card").hidden`)
	b.settle()
	b.shot("saddle")
}
