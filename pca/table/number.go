package table

import (
	"math"
	"strconv"
	"unsafe"
)

// powersOfTen are exact in double precision up to 10^22.
var powersOfTen = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11,
	1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// scanNumber reads a plain decimal number that starts at b[i], as far as it can tell
// quickly: sign, digits with one point, no exponent, mantissa below 2^53 and at most 22
// places after the point, where one correctly rounded division gives the nearest double
// (Clinger 1990). It returns the number and the position after it; ok is false when the
// slow way must decide. The byte after the last of b that is scanned must exist: callers
// guarantee a line end.
func scanNumber(b []byte, i int, point byte) (v float64, end int, ok bool) {
	negative := false
	switch b[i] {
	case '-':
		negative = true
		i++
	case '+':
		i++
	}
	start := i
	var mantissa uint64
	for {
		d := b[i] - '0'
		if d > 9 {
			break
		}
		mantissa = mantissa*10 + uint64(d)
		i++
	}
	digits := i - start
	places := 0
	if b[i] == point {
		i++
		from := i
		for {
			d := b[i] - '0'
			if d > 9 {
				break
			}
			mantissa = mantissa*10 + uint64(d)
			i++
		}
		places = i - from
		digits += places
	}
	// 19 digits always fit in 64 bits, so the bound on the mantissa below can be trusted.
	if digits == 0 || digits > 19 || mantissa > 1<<53 || places > 22 {
		return 0, i, false
	}
	v = float64(mantissa)
	if places > 0 {
		v /= powersOfTen[places]
	}
	if negative {
		v = -v
	}
	return v, i, true
}

// parseNumber reads a trimmed cell the slow way: every finite decimal number, nothing
// else (no hexadecimal, no underscores, no words).
func parseNumber(cell []byte, point byte) (v float64, ok bool) {
	v, ok = readNumber(cell, point)
	return v, ok && !math.IsInf(v, 0)
}

// readNumber is parseNumber but for numbers too large, which are infinite and not ok.
func readNumber(cell []byte, point byte) (v float64, ok bool) {
	if len(cell) == 0 {
		return 0, false
	}
	var scratch [64]byte
	text := cell
	if point != '.' {
		text = append(scratch[:0], cell...)
	}
	for i, c := range text {
		switch {
		case (c == 'd' || c == 'D') && fortranExponent(text, i):
			if point == '.' {
				text = append(scratch[:0], cell...)
			}
			text[i] = 'e'
		case c >= '0' && c <= '9', c == '-', c == '+', c == 'e', c == 'E':
		case c == point:
			if point != '.' {
				text[i] = '.'
			}
		default:
			return 0, false
		}
	}
	v, err := strconv.ParseFloat(unsafe.String(&text[0], len(text)), 64)
	return v, err == nil
}
