package session

import (
	"encoding/binary"
	"errors"

	"shearprint/render"
)

// A packed frame is what the view's shader mixes, as one block of bytes:
//
//	12 uint32, little-endian: magic, W, H of the frame, w, h of the planes, factor, animated, background RGBA, 4 spare
//	256 x 4 bytes: colour of each scalar (RGB), light of each texture value (A)
//	4 w h bytes: texture, cos, sin, scalar of each pixel of the planes
//	4 w h bytes: shade, mask, 0, 255
//	4 W H bytes: the overlay, RGBA premultiplied
const (
	packMagic  = 0x73706b31 // "spk1"
	packHeader = 12 * 4
	tableBytes = 256 * 4
)

// Packed is a frame on the view's side; its slices share the block that it was read from.
type Packed struct {
	W, H     int // of the frame
	PW, PH   int // of the planes
	Factor   int // frame pixels per plane pixel
	Animated bool
	Back     [4]uint8
	Table    []byte // 256 RGBA: see above
	A, B     []byte // the planes
	Overlay  []byte
}

// Pack appends the frame's layers to into[:0].
func Pack(into []byte, l *render.Layers, w, h int) []byte {
	n := l.W * l.H
	total := packHeader + tableBytes + 8*n + 4*w*h
	if cap(into) < total {
		into = make([]byte, total)
	}
	into = into[:total]
	animated := uint32(0)
	if l.Animated {
		animated = 1
	}
	back := uint32(l.Back[0]) | uint32(l.Back[1])<<8 | uint32(l.Back[2])<<16 | uint32(l.Back[3])<<24
	for i, x := range [12]uint32{
		packMagic, uint32(w), uint32(h), uint32(l.W), uint32(l.H), uint32(l.Factor), animated, back,
	} {
		binary.LittleEndian.PutUint32(into[4*i:], x)
	}
	at := packHeader
	for i, c := range l.Table {
		o := into[at+4*i : at+4*i+4]
		o[0], o[1], o[2], o[3] = c[0], c[1], c[2], l.Curve[i]
	}
	at += tableBytes
	a, b := into[at:at+4*n], into[at+4*n:at+8*n]
	for i := range n {
		o := a[4*i : 4*i+4 : 4*i+4]
		o[0], o[1], o[2], o[3] = l.Texture[i], 128, 128, l.Scalar[i]
		if l.Animated {
			o[1], o[2] = l.Cos[i], l.Sin[i]
		}
		q := b[4*i : 4*i+4 : 4*i+4]
		q[0], q[1], q[2], q[3] = l.Shade[i], l.Mask[i], 0, 255
	}
	copy(into[at+8*n:], l.Overlay)
	return into
}

var errPacked = errors.New("not a packed frame")

// Unpack reads what Pack wrote, with every size checked.
func Unpack(block []byte) (Packed, error) {
	if len(block) < packHeader+tableBytes || binary.LittleEndian.Uint32(block) != packMagic {
		return Packed{}, errPacked
	}
	var x [12]int
	for i := range x {
		x[i] = int(binary.LittleEndian.Uint32(block[4*i:]))
	}
	p := Packed{W: x[1], H: x[2], PW: x[3], PH: x[4], Factor: x[5], Animated: x[6] == 1}
	for _, side := range [4]int{p.W, p.H, p.PW, p.PH} {
		if side < 1 || side > largestSide {
			return Packed{}, errPacked
		}
	}
	n := 4 * p.PW * p.PH
	if p.Factor < 1 || p.Factor > largestSide || p.PW*p.Factor < p.W || p.PH*p.Factor < p.H ||
		len(block) != packHeader+tableBytes+2*n+4*p.W*p.H {
		return Packed{}, errPacked
	}
	for i := range p.Back {
		p.Back[i] = block[4*7+i]
	}
	rest := block[packHeader:]
	p.Table, rest = rest[:tableBytes], rest[tableBytes:]
	p.A, p.B, p.Overlay = rest[:n], rest[n:2*n], rest[2*n:]
	return p, nil
}
