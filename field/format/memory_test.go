package format_test

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"runtime"
	"testing"

	"shearprint/field/format"
)

// Reading takes at most six times the file's size, the file's own bytes counted. All that is ever allocated is
// measured, which is more than the peak.
func TestMemoryOfReading(t *testing.T) {
	raw := sphereRaw(60_000)
	var glb, table bytes.Buffer
	if err := format.WriteRawGLB(&glb, raw); err != nil {
		t.Fatal(err)
	}
	fmt.Fprintln(&table, "i;j;x;y;z;tau_x;tau_y;tau_z;p")
	for k, p := range million().Points[:60_000] {
		v := million().Tau[k]
		fmt.Fprintf(&table, "%d;%d;%.7g;%.7g;%.7g;%.7g;%.7g;%.7g;1\n", k%1000, k/1000, p.X, p.Y, p.Z, v.X, v.Y, v.Z)
	}
	for name, data := range map[string][]byte{
		"ply": plyOf(t, raw), "glb": glb.Bytes(), "table": table.Bytes(), "stl": stlOf(raw), "gltf": dataURIOf(glb.Bytes()),
		"cgns": []byte(cgnsOf(raw)),
	} {
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		if _, err := format.Read(name, data, format.Options{}); err != nil {
			t.Fatal(err)
		}
		runtime.ReadMemStats(&after)
		times := float64(after.TotalAlloc-before.TotalAlloc)/float64(len(data)) + 1
		if times > 6 {
			t.Errorf("%s: %.1f times the file's %d bytes", name, times, len(data))
		}
		t.Logf("%s: %.1f times", name, times)
	}
}

// dataURIOf makes a text document of a GLB file, its buffer in the text.
func dataURIOf(glb []byte) []byte {
	text := glb[20 : 20+binary.LittleEndian.Uint32(glb[12:])]
	bin := glb[28+len(text):]
	uri := `"buffers":[{"uri":"data:application/octet-stream;base64,` + base64.StdEncoding.EncodeToString(bin) + `",`
	return bytes.Replace(text, []byte(`"buffers":[{`), []byte(uri), 1)
}
