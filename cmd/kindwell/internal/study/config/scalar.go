package config

import (
	"reflect"
	"regexp"
	"strconv"
	"strings"
	"unicode"

	"kindwell/internal/names"
)

var (
	plainWhole     = regexp.MustCompile(`^[-+]?(0|[1-9][0-9]*)$`)
	startsAsNumber = regexp.MustCompile(`^[-+]?[0-9]`)
	plainNumber    = regexp.MustCompile(`^[-+]?([0-9]+(\.[0-9]*)?|\.[0-9]+)([eE][-+]?[0-9]+)?$`)
)

// scalar fills text, a word, a number or a truth value.
func (d *decoder) scalar(n *node, into reflect.Value, f *field, path string) {
	t := into.Type()
	expected := expectedOf(t, f)
	if n.kind != isScalar {
		d.refuse(n, path, expected, f.advice)
		return
	}
	if path != "" {
		d.src.places[path] = n.place
	}
	switch {
	case choicesOf(t, f.enum) != nil:
		d.word(n, into, choicesOf(t, f.enum), path)
	case t.Kind() == reflect.String:
		if advice := badText(n.text); advice != "" {
			d.refuse(n, path, "text of one line", advice)
			return
		}
		into.SetString(n.text)
	case t.Kind() == reflect.Bool:
		if n.quoted || n.text != "true" && n.text != "false" {
			d.refuse(n, path, expected, truthAdvice(n))
			return
		}
		into.SetBool(n.text == "true")
	default:
		d.number(n, into, f, path)
	}
}

// badText says what is wrong with text, if anything.
func badText(text string) string {
	if text == "" {
		return "write it, or remove the key"
	}
	for _, r := range text {
		if unicode.IsControl(r) {
			return "it holds a line break or another control character"
		}
	}
	return ""
}

// truthAdvice guesses what was meant by another word than true and false.
func truthAdvice(n *node) string {
	switch strings.ToLower(n.text) {
	case "yes", "y", "on", "true", "1":
		return "write `true`"
	case "no", "n", "off", "false", "0":
		return "write `false`"
	}
	return ""
}

// word fills a key that takes one of several words.
func (d *decoder) word(n *node, into reflect.Value, choices []Choice, path string) {
	for _, c := range choices {
		if c.Name != n.text {
			continue
		}
		if c.Later && !d.everything {
			d.bad[path] = true
			d.fault(n.place, notAvailable(path+": "+c.Name), "this version has "+strings.Join(quoted(servedNames(choices)), ", "))
			return
		}
		into.SetString(n.text)
		return
	}
	served := servedNames(choices)
	advice := ""
	if near := names.Nearest(n.text, served); near != "" {
		advice = "did you mean `" + near + "`?"
	}
	d.refuse(n, path, oneOf(served), advice)
}

// number fills a whole number or a number and checks its range.
func (d *decoder) number(n *node, into reflect.Value, f *field, path string) {
	whole := into.Kind() != reflect.Float64
	expected := expectedOf(into.Type(), f)
	if n.quoted || !plainNumber.MatchString(n.text) || whole && !plainWhole.MatchString(n.text) {
		advice := f.advice
		switch {
		case n.quoted && plainNumber.MatchString(n.text):
			advice = "remove the quotes"
		case whole && plainNumber.MatchString(n.text) && strings.ContainsAny(n.text, "eE"):
			advice = "write the number in digits"
		case whole && plainNumber.MatchString(n.text) && !strings.Contains(n.text, "."):
			advice = "write it without leading zeros"
		case !n.quoted && startsAsNumber.MatchString(n.text) && strings.ContainsAny(n.text, ",_' "):
			advice = "write it without separators, with `.` as the decimal point"
		}
		d.refuse(n, path, expected, advice)
		return
	}
	if whole {
		// Beyond the range of int64 the result is the nearest bound of it and
		// so outside of every declared range, or refused here.
		v, err := strconv.ParseInt(n.text, 10, 64)
		if err != nil || !within(v, f, parseWhole) {
			d.refuse(n, path, expected, f.advice)
			return
		}
		if into.CanUint() {
			into.SetUint(uint64(v))
		} else {
			into.SetInt(v)
		}
		return
	}
	v, err := strconv.ParseFloat(n.text, 64)
	if err != nil || !within(v, f, parseNumber) {
		d.refuse(n, path, expected, f.advice)
		return
	}
	into.SetFloat(v)
}

func parseWhole(s string) int64 {
	v, err := strconv.ParseInt(s, 10, 64)
	if err != nil {
		panic("config: a bound is no whole number: " + s)
	}
	return v
}

func parseNumber(s string) float64 {
	v, err := strconv.ParseFloat(s, 64)
	if err != nil {
		panic("config: a bound is no number: " + s)
	}
	return v
}

// within says whether a number is in the declared range.
func within[T int64 | float64](v T, f *field, parse func(string) T) bool {
	if f.zero != "" && v == 0 {
		return true
	}
	return (f.minimum == nil || v >= parse(*f.minimum)) &&
		(f.above == nil || v > parse(*f.above)) &&
		(f.maximum == nil || v <= parse(*f.maximum)) &&
		(f.below == nil || v < parse(*f.below))
}
