package reports

import (
	"bufio"
	"bytes"
	"encoding/json"
	"io"
	"reflect"
	"strings"

	"example.org/standclear/exposure"
)

// JSON writes the assessment as one JSON object. Lists are written an element
// at a time, so that a site of thousands of places needs no second copy in
// memory. Infinite numbers are null.
func JSON(w io.Writer, a *exposure.Assessment) error {
	out := bufio.NewWriterSize(w, 1<<16)
	v := reflect.ValueOf(*a)
	first := true
	out.WriteString("{")
	for i := range v.NumField() {
		name, options, _ := strings.Cut(v.Type().Field(i).Tag.Get("json"), ",")
		field := v.Field(i)
		if name == "-" || strings.Contains(options, "omitempty") && (field.IsZero() || field.Kind() == reflect.Slice && field.Len() == 0) {
			continue
		}
		if !first {
			out.WriteString(",")
		}
		first = false
		out.WriteString("\n  \"" + name + "\": ")
		if err := writeField(out, field); err != nil {
			return err
		}
	}
	out.WriteString("\n}\n")
	return out.Flush()
}

func writeField(out *bufio.Writer, field reflect.Value) error {
	if field.Kind() != reflect.Slice {
		text, err := compact(field.Interface())
		out.Write(text)
		return err
	}
	out.WriteString("[")
	for i := range field.Len() {
		if i > 0 {
			out.WriteString(",")
		}
		text, err := compact(field.Index(i).Interface())
		if err != nil {
			return err
		}
		out.WriteString("\n    ")
		out.Write(text)
	}
	if field.Len() > 0 {
		out.WriteString("\n  ")
	}
	_, err := out.WriteString("]")
	return err
}

// compact is json.Marshal with < and > left readable.
func compact(v any) ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	if err := enc.Encode(v); err != nil {
		return nil, err
	}
	return bytes.TrimRight(b.Bytes(), "\n"), nil
}
