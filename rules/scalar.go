package rules

import (
	"math"
	"reflect"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"
)

// scalar fills a string, number or truth value.
func (d *decoder) scalar(n *yaml.Node, v reflect.Value) {
	switch v.Kind() {
	case reflect.String:
		if problem := textProblem(n); problem != "" {
			d.errorf(n, "%s", problem)
			return
		}
		v.SetString(n.Value)
	case reflect.Bool:
		switch n.Value {
		case "true", "yes":
			v.SetBool(true)
		case "false", "no":
			v.SetBool(false)
		default:
			d.errorf(n, "expected yes or no, found %s", describe(n))
		}
	case reflect.Int, reflect.Int8, reflect.Int16, reflect.Int32, reflect.Int64:
		i, err := strconv.ParseInt(n.Value, 10, v.Type().Bits())
		if n.Kind != yaml.ScalarNode || err != nil {
			d.errorf(n, "expected a whole number, found %s", describe(n))
			return
		}
		v.SetInt(i)
	case reflect.Uint, reflect.Uint8, reflect.Uint16, reflect.Uint32, reflect.Uint64:
		u, err := strconv.ParseUint(n.Value, 10, v.Type().Bits())
		if n.Kind != yaml.ScalarNode || err != nil {
			d.errorf(n, "expected a whole number from 0, found %s", describe(n))
			return
		}
		v.SetUint(u)
	case reflect.Float32, reflect.Float64:
		d.float(n, v)
	default:
		panic("rules: cannot decode into " + v.Type().String())
	}
}

// float reads a decimal number; quotes around it are an error, as is a decimal comma.
func (d *decoder) float(n *yaml.Node, v reflect.Value) {
	f, err := strconv.ParseFloat(n.Value, 64)
	switch {
	case n.Kind != yaml.ScalarNode || err != nil || math.IsNaN(f) || math.IsInf(f, 0):
		hint := ""
		if _, err := strconv.ParseFloat(strings.Replace(n.Value, ",", ".", 1), 64); n.Kind == yaml.ScalarNode && err == nil {
			hint = " (write a decimal point)"
		}
		d.errorf(n, "expected a number, found %s%s", describe(n), hint)
	case n.Tag == "!!str":
		d.errorf(n, "expected a number, found %s: leave out the quotes", describe(n))
	default:
		v.SetFloat(f)
	}
}

// textProblem says what is wrong with n where a text is meant; empty if nothing is. Dates count as
// texts. An empty value is an error because ” is how an empty text is written.
func textProblem(n *yaml.Node) string {
	const quote = ": put it in single quotes"
	switch {
	case n.Kind == yaml.AliasNode:
		return "an alias (*" + n.Value + ") is not accepted here: write the text out"
	case n.Kind == yaml.SequenceNode:
		return "expected a text, found a list; a text that begins with a bracket needs quotes" + quote
	case n.Kind != yaml.ScalarNode:
		return "expected a text, found keys and values; a text with ': ' in it needs quotes" + quote
	case n.Tag == "!!str" || n.Tag == "!!timestamp":
		return ""
	case n.Tag == "!!null" && n.Value == "":
		return "expected a text, found nothing: write one, or '' for none"
	}
	return "expected a text, found " + describe(n) + quote
}
