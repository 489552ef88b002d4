package worker

import (
	"reflect"
	"testing"

	"betaloom/schema/part"
	"betaloom/solvers"
)

// TestRowHasEveryField holds that a row leaves out nothing of a mode but the state.
func TestRowHasEveryField(t *testing.T) {
	var m solvers.Mode
	from := reflect.ValueOf(&m).Elem()
	for i := range from.NumField() {
		fill(t, from.Field(i), i+1)
	}
	to := reflect.ValueOf(row(&m))
	if n := reflect.TypeFor[part.Mode]().NumField(); n != from.NumField()-1 {
		t.Errorf("a row has %d fields, a mode %d: expected one more, the state", n, from.NumField())
	}
	for i := range to.NumField() {
		name := to.Type().Field(i).Name
		if got, want := to.Field(i).Interface(), from.FieldByName(name).Interface(); !reflect.DeepEqual(got, want) {
			t.Errorf("%s: found %v, expected %v", name, got, want)
		}
	}
}

// fill gives a field a value of its own.
func fill(t *testing.T, v reflect.Value, i int) {
	switch v.Kind() {
	case reflect.String:
		v.SetString("text " + string(rune('a'+i)))
	case reflect.Float64, reflect.Float32:
		v.SetFloat(float64(i))
	case reflect.Complex128:
		v.SetComplex(complex(float64(i), 1))
	case reflect.Bool:
		v.SetBool(true)
	case reflect.Slice:
		v.Set(reflect.MakeSlice(v.Type(), 1, 1))
		fill(t, v.Index(0), i)
	case reflect.Array:
		for k := range v.Len() {
			fill(t, v.Index(k), i+k)
		}
	case reflect.Interface:
		v.Set(reflect.ValueOf("state"))
	default:
		t.Fatalf("a field of kind %s", v.Kind())
	}
}
