package format

import (
	"math"
	"strconv"
)

// exactPowers are the powers of ten that double precision holds exactly.
var exactPowers = [...]float64{1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15,
	1e16,
	1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// parseNumber reads a decimal number; the decimal mark is point. It accepts the spellings of missing values that
// programs write (NaN, -nan, 1.#IND, an empty cell) as NaN. ok is false for anything else that is not a number.
//
// The common case is exact by one rounding: a mantissa below 2^53 times or over an exact power of ten (W. D. Clinger,
// How to read floating point numbers accurately, 1990, from memory). The rest goes to strconv.
func parseNumber(s []byte, point byte) (x float64, ok bool) {
	i, neg := 0, false
	if len(s) > 0 && (s[0] == '-' || s[0] == '+') {
		neg = s[0] == '-'
		i++
	}
	var mantissa uint64
	digits, scale := 0, 0
	seenPoint := false
	for ; i < len(s); i++ {
		c := s[i]
		if d := c - '0'; d < 10 {
			if mantissa >= 1<<53/10 {
				return parseHard(s, point)
			}
			mantissa = mantissa*10 + uint64(d)
			digits++
			if seenPoint {
				scale--
			}
			continue
		}
		if c != point || seenPoint {
			break
		}
		seenPoint = true
	}
	if digits == 0 {
		return parseHard(s, point)
	}
	if i < len(s) && (s[i] == 'e' || s[i] == 'E') {
		e, rest, ok := parseExponent(s[i+1:])
		if !ok || rest > 0 {
			return parseHard(s, point)
		}
		scale += e
		i = len(s)
	}
	if i < len(s) || scale < -22 || scale > 22 {
		return parseHard(s, point)
	}
	x = float64(mantissa)
	if scale < 0 {
		x /= exactPowers[-scale]
	} else {
		x *= exactPowers[scale]
	}
	if neg {
		x = -x
	}
	return x, true
}

func parseExponent(s []byte) (e, rest int, ok bool) {
	i, neg := 0, false
	if len(s) > 0 && (s[0] == '-' || s[0] == '+') {
		neg = s[0] == '-'
		i++
	}
	from := i
	for ; i < len(s) && s[i]-'0' < 10 && e < 10000; i++ {
		e = e*10 + int(s[i]-'0')
	}
	if neg {
		e = -e
	}
	return e, len(s) - i, i > from
}

// parseHard reads what the fast way leaves: long mantissas, large exponents, Fortran's D exponents, missing values.
func parseHard(s []byte, point byte) (float64, bool) {
	const longest = 400 // a double written out in full has at most about 1080 digits, no program writes half as many
	if len(s) > longest {
		return 0, false
	}
	buf := make([]byte, len(s))
	for i, c := range s {
		switch {
		case c == point:
			c = '.'
		case c == '.' || c == '_' || c == 'x' || c == 'X' || c == 'p' || c == 'P':
			return 0, false // not decimal numbers, though strconv takes some
		case c == 'd' || c == 'D':
			c = 'e'
		}
		buf[i] = c
	}
	x, err := strconv.ParseFloat(string(buf), 64)
	if err == nil || math.IsInf(x, 0) {
		return x, true
	}
	return missing(s)
}

// missing reads the spellings of "no value".
func missing(s []byte) (float64, bool) {
	switch normal(string(s)) {
	case "", "nan", "nanind", "nansnan", "na", "null", "none", "1ind", "1qnan", "1snan":
		return math.NaN(), true
	case "1inf", "inf", "infinity":
		return math.Inf(1), true
	}
	return 0, false
}

// scanNumber reads the plain decimal number at offset at, for the cells that nearly all tables have; ok is false for
// all others, which parseNumber then reads. The result is exact by one rounding, as parseNumber's.
func scanNumber(data []byte, at int, point byte) (x float64, next int, ok bool) {
	i := at
	neg := false
	if i < len(data) && data[i] == '-' {
		neg = true
		i++
	}
	var mantissa uint64
	from := i
	for i < len(data) && data[i]-'0' < 10 {
		mantissa = mantissa*10 + uint64(data[i]-'0')
		i++
	}
	digits := i - from
	scale := 0
	if i < len(data) && data[i] == point {
		i++
		from = i
		for i < len(data) && data[i]-'0' < 10 {
			mantissa = mantissa*10 + uint64(data[i]-'0')
			i++
		}
		scale = i - from
		digits += scale
	}
	const mostDigits = 18 // below 2^63
	if digits == 0 || digits > mostDigits {
		return 0, at, false
	}
	scale = -scale
	if i < len(data) && data[i]|0x20 == 'e' {
		i++
		eneg := false
		if i < len(data) && (data[i] == '-' || data[i] == '+') {
			eneg = data[i] == '-'
			i++
		}
		e, from := 0, i
		for i < len(data) && data[i]-'0' < 10 && i-from < 4 {
			e = e*10 + int(data[i]-'0')
			i++
		}
		if i == from {
			return 0, at, false
		}
		if eneg {
			e = -e
		}
		scale += e
	}
	if mantissa >= 1<<53 || scale < -22 || scale > 22 {
		return 0, at, false
	}
	x = float64(mantissa)
	if scale < 0 {
		x /= exactPowers[-scale]
	} else {
		x *= exactPowers[scale]
	}
	if neg {
		x = -x
	}
	return x, i, true
}
