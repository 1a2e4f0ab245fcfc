package tidy

import (
	"math"
	"reflect"
	"strconv"
)

// OptionalInt is a whole number that may be missing; the zero value is
// missing.
type OptionalInt struct {
	Value int  // the number when Known
	Known bool // false: an empty cell
}

// Int returns a known whole number.
func Int(v int) OptionalInt { return OptionalInt{Value: v, Known: true} }

// Blank returns a row of T with every number missing: float64 NaN,
// OptionalInt unknown, string empty, int 0, bool false. It panics when T is
// not the row of a table.
func Blank[T any]() T {
	var row T
	t := tableOf(reflect.TypeFor[T]())
	v := reflect.ValueOf(&row).Elem()
	for _, c := range t.Columns {
		if c.Kind == Number {
			v.FieldByIndex(c.index).SetFloat(math.NaN())
		}
	}
	return row
}

// appendNumber appends the shortest text that reads back as x: plain decimals
// for 1e-6 <= |x| < 1e21, an exponent outside. NaN appends nothing; -0 is 0.
func appendNumber(dst []byte, x float64) []byte {
	switch size := math.Abs(x); {
	case math.IsNaN(x):
		return dst
	case math.IsInf(x, 1):
		return append(dst, "INF"...)
	case math.IsInf(x, -1):
		return append(dst, "-INF"...)
	case x == 0:
		return append(dst, '0')
	case size < 1e-6 || size >= 1e21:
		return strconv.AppendFloat(dst, x, 'e', -1, 64)
	default:
		return strconv.AppendFloat(dst, x, 'f', -1, 64)
	}
}
