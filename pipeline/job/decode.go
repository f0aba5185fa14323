package job

import (
	"fmt"
	"maps"
	"math"
	"reflect"
	"slices"
	"strconv"
)

// decode fills in the content of a job file from its values and reports unknown keys,
// wrong types and numbers that are not finite.
func decode(f *faults, content *file, values map[string]any) {
	decodeTable(f, reflect.ValueOf(content).Elem(), values, "")
}

func decodeTable(f *faults, dst reflect.Value, values map[string]any, table string) {
	for _, key := range slices.Sorted(maps.Keys(values)) {
		switch to, ok := field(dst.Type(), key); {
		case !ok:
			unknown(f, table, key, values[key])
		case to.Tag.Get("form") == "time":
			decodeTime(f, dst.FieldByIndex(to.Index), values[key], join(table, key))
		default:
			decodeValue(f, dst.FieldByIndex(to.Index), values[key], join(table, key))
		}
	}
}

func decodeValue(f *faults, dst reflect.Value, v any, key string) {
	inner, isTable := v.(map[string]any)
	items, isList := v.([]any)
	switch kind := dst.Kind(); {
	case kind == reflect.Pointer:
		dst.Set(reflect.New(dst.Type().Elem()))
		decodeValue(f, dst.Elem(), v, key)
	case kind == reflect.Struct && isTable:
		decodeTable(f, dst, inner, key)
	case kind == reflect.Map && isTable:
		decodeMap(f, dst, inner, key)
	case isTables(dst.Type()) && isList:
		dst.Set(reflect.MakeSlice(dst.Type(), len(items), len(items)))
		for i, item := range items {
			decodeValue(f, dst.Index(i), item, join(key, strconv.Itoa(i+1)))
		}
	case kind == reflect.Slice && isList:
		dst.Set(reflect.MakeSlice(dst.Type(), len(items), len(items)))
		decodeList(f, dst, items, key)
	case kind == reflect.Array && isList && len(items) != dst.Len():
		f.add(key, "has %d items, want %s", len(items), want(dst.Type()))
	case kind == reflect.Array && isList:
		decodeList(f, dst, items, key)
	default:
		if fault := decodeScalar(dst, v); fault != "" {
			f.add(key, "%s", fault)
		}
	}
}

func decodeMap(f *faults, dst reflect.Value, values map[string]any, table string) {
	dst.Set(reflect.MakeMap(dst.Type()))
	for _, key := range slices.Sorted(maps.Keys(values)) {
		to := reflect.New(dst.Type().Elem()).Elem()
		decodeValue(f, to, values[key], join(table, key))
		dst.SetMapIndex(reflect.ValueOf(key), to)
	}
}

func decodeList(f *faults, dst reflect.Value, items []any, key string) {
	for i, item := range items {
		if fault := decodeScalar(dst.Index(i), item); fault != "" {
			f.add(key, "item %d %s", i+1, fault)
		}
	}
}

// decodeScalar sets dst and returns "", or returns what is wrong.
func decodeScalar(dst reflect.Value, v any) (fault string) {
	switch v := v.(type) {
	case string:
		if dst.Kind() == reflect.String || dst.Kind() == reflect.Interface {
			dst.Set(reflect.ValueOf(v))
			return ""
		}
	case bool:
		if dst.Kind() == reflect.Bool {
			dst.SetBool(v)
			return ""
		}
	case int64, float64:
		return decodeNumber(dst, v)
	}
	return wrongType(dst, v)
}

func decodeNumber(dst reflect.Value, v any) (fault string) {
	whole, isWhole := v.(int64)
	if dst.Kind() == reflect.Int && isWhole {
		dst.SetInt(whole)
		return ""
	}
	if dst.Kind() != reflect.Float64 && dst.Kind() != reflect.Interface {
		return wrongType(dst, v)
	}
	const exact = 1 << 53 // beyond, not every whole number is a float64
	number, _ := v.(float64)
	switch {
	case whole > exact || whole < -exact:
		return fmt.Sprintf("is %d, want a whole number of at most %d", whole, exact)
	case math.IsNaN(number) || math.IsInf(number, 0):
		return "is " + format(number) + ", want a finite number"
	case isWhole:
		number = float64(whole)
	case number == 0:
		number = 0 // -0 is the same setting
	}
	dst.Set(reflect.ValueOf(number))
	return ""
}

func wrongType(dst reflect.Value, v any) string {
	return fmt.Sprintf("is %s, want %s", typeName(v), want(dst.Type()))
}

// typeName names the TOML type of a value.
func typeName(v any) string {
	switch v.(type) {
	case string:
		return "a string"
	case bool:
		return "a boolean"
	case int64, float64:
		return "a number"
	case []any:
		return "a list"
	case map[string]any:
		return "a table"
	}
	return "a date or time"
}

// want names the TOML type that fills a Go type.
func want(t reflect.Type) string {
	switch t.Kind() {
	case reflect.String:
		return "a string"
	case reflect.Bool:
		return "true or false"
	case reflect.Int:
		return "a whole number"
	case reflect.Float64:
		return "a number"
	case reflect.Interface:
		return "a number or a string"
	case reflect.Slice:
		if isTables(t) {
			return "a list of tables"
		}
		return "a list, each item " + want(t.Elem())
	case reflect.Array:
		return fmt.Sprintf("a list of %d, each item %s", t.Len(), want(t.Elem()))
	}
	return "a table"
}

// format writes a number as a job file would have it.
func format(v float64) string {
	switch {
	case math.IsNaN(v):
		return "nan"
	case math.IsInf(v, 1):
		return "inf"
	case math.IsInf(v, -1):
		return "-inf"
	}
	return strconv.FormatFloat(v, 'g', -1, 64)
}
