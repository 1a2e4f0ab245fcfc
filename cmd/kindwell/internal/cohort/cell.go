package cohort

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"unicode"
)

// missingCells knows which cells stand for a missing value: the empty one (or
// one of blanks alone), NA, n/a and NaN in capitals or small letters, and the
// codes of the study. In a column of numbers a code that is a number means that
// number however it is written: -999 is also -999.0.
type missingCells struct {
	codes   map[string]bool
	numbers []float64
}

func newMissingCells(codes []string) missingCells {
	m := missingCells{}
	if len(codes) == 0 {
		return m
	}
	m.codes = make(map[string]bool, len(codes))
	for _, code := range codes {
		code = strings.TrimSpace(code)
		m.codes[code] = true
		if v, why := parseNumber(code); why == "" {
			m.numbers = append(m.numbers, v)
		}
	}
	return m
}

// text tells whether a cell, its outer blanks taken off, is missing.
func (m missingCells) text(cell string) bool {
	switch len(cell) {
	case 0:
		return true
	case 2:
		if strings.EqualFold(cell, "na") {
			return true
		}
	case 3:
		if strings.EqualFold(cell, "nan") || strings.EqualFold(cell, "n/a") {
			return true
		}
	}
	return m.codes != nil && m.codes[cell]
}

// number tells whether a number is one of the study's codes.
func (m missingCells) number(v float64) bool {
	for _, code := range m.numbers {
		if v == code {
			return true
		}
	}
	return false
}

// parseNumber reads a decimal number, its outer blanks already taken off: sign,
// digits, one decimal point, an exponent. Infinity, hexadecimal, digit groups
// and numbers beyond what 64 bits hold are refused; why says so and what to do.
func parseNumber(cell string) (v float64, why string) {
	if v, ok := shortNumber(cell); ok {
		return v, ""
	}
	if !decimal(cell) {
		return 0, whyNoNumber(cell)
	}
	v, err := strconv.ParseFloat(cell, 64)
	switch {
	case errors.Is(err, strconv.ErrRange):
		return 0, "is too large for a 64-bit number; choose another unit"
	case err != nil:
		return 0, whyNoNumber(cell)
	case v == 0 && !zeroDigits(cell):
		return 0, "is too small for a 64-bit number; choose another unit, or write 0"
	}
	return v, ""
}

// powers are the powers of ten that a float64 holds exactly.
var powers = [...]float64{
	1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11,
	1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
}

// shortNumber reads sign, digits and decimal point when the digits make an
// integer below 2^53: one exact division then gives the nearest float64
// (Clinger 1990), in a third of the time of the general way. Anything else is
// left to that.
func shortNumber(cell string) (v float64, ok bool) {
	at, digits, fraction := 0, 0, 0
	if cell != "" && (cell[0] == '-' || cell[0] == '+') {
		at++
	}
	var whole uint64
	point := false
	for ; at < len(cell); at++ {
		c := cell[at]
		switch {
		case '0' <= c && c <= '9':
			whole = whole*10 + uint64(c-'0')
			digits++
			if point {
				fraction++
			}
		case c == '.' && !point:
			point = true
		default:
			return 0, false
		}
	}
	if digits == 0 || digits > 19 || whole >= 1<<53 {
		return 0, false
	}
	v = float64(whole) / powers[fraction]
	if cell[0] == '-' {
		v = -v
	}
	return v, true
}

// decimal tells whether a cell has the characters of a decimal number; the
// order of them is left to strconv, which takes more than we do.
func decimal(cell string) bool {
	for i := 0; i < len(cell); i++ {
		switch c := cell[i]; {
		case '0' <= c && c <= '9', c == '.', c == '-', c == '+', c == 'e', c == 'E':
		default:
			return false
		}
	}
	return cell != ""
}

// zeroDigits tells whether every digit before the exponent is 0.
func zeroDigits(cell string) bool {
	for i := 0; i < len(cell) && cell[i] != 'e' && cell[i] != 'E'; i++ {
		if '1' <= cell[i] && cell[i] <= '9' {
			return false
		}
	}
	return true
}

// whyNoNumber says what keeps a cell from being a number.
func whyNoNumber(cell string) string {
	plain := func(replaced string) bool {
		if !decimal(replaced) {
			return false
		}
		_, err := strconv.ParseFloat(replaced, 64)
		return err == nil
	}
	switch {
	case strings.Count(cell, ",") == 1 && plain(strings.Replace(cell, ",", ".", 1)):
		return "is not a number: commas are not read; write a decimal point, and nothing between thousands"
	case strings.ContainsAny(cell, ",_' \u00a0\u202f") && plain(strings.Map(dropGroups, cell)):
		return "is not a number: write it without marks between groups of digits"
	case strings.HasPrefix(cell, "\u2212") && plain("-"+strings.TrimPrefix(cell, "\u2212")):
		return "is not a number: its minus sign is a typographic one; write a hyphen"
	case strings.HasSuffix(cell, "%") && plain(strings.TrimSpace(strings.TrimSuffix(cell, "%"))):
		return "is not a number: take off the percent sign in the whole column"
	case infinite(cell):
		return "is not a finite number; leave the cell empty if it is missing"
	case strings.HasPrefix(strings.ToLower(strings.TrimLeft(cell, "+-")), "0x"):
		return "is not a decimal number; write it without 0x"
	}
	return "is not a number; correct it, or leave it empty (or name it in missing_codes) if it is missing"
}

func dropGroups(r rune) rune {
	switch r {
	case ',', '_', '\'', ' ', '\u00a0', '\u202f':
		return -1
	}
	return r
}

func infinite(cell string) bool {
	v, err := strconv.ParseFloat(cell, 64)
	return err == nil && math.IsInf(v, 0)
}

// topCoded reads an age like 89+, in which the oldest are put together.
func topCoded(cell string) (v float64, ok bool) {
	bare, found := strings.CutSuffix(cell, "+")
	if !found {
		return 0, false
	}
	v, why := parseNumber(strings.TrimSpace(bare))
	return v, why == ""
}

// trimmed takes off what is not seen at the ends of a cell: white space of any
// script, zero-width spaces, byte-order marks.
func trimmed(cell string) string {
	if n := len(cell); n > 0 && plainByte(cell[0]) && plainByte(cell[n-1]) {
		return cell
	}
	return strings.TrimFunc(cell, unseen)
}

func plainByte(c byte) bool { return ' ' < c && c < 0x7f }

func unseen(r rune) bool {
	switch r {
	case '\u200b', '\u2060', '\ufeff':
		return true
	}
	return unicode.IsSpace(r) || unicode.IsControl(r)
}

// formatNumber is the shortest text that reads back as the same number.
func formatNumber(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// plural puts a count before the right form of a word.
func plural(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return strconv.Itoa(n) + " " + many
}
