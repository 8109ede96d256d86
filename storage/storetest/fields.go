package storetest

import (
	"reflect"
	"slices"
	"testing"

	"swardbook/planner"
)

// everyField wants each field of the nouns, at any depth, to be other than its
// zero in at least one of them: a field that is added to a noun and not kept
// shows only when a test saves a value in it.
func everyField(t *testing.T, nouns []planner.Noun) {
	t.Helper()
	used := map[string]bool{}
	for _, noun := range nouns {
		walkFields(reflect.ValueOf(noun), reflect.TypeOf(noun).Name(), used)
	}
	for path, set := range used {
		if !set {
			t.Errorf("no noun that is saved has a value in %s: add one, and keep it", path)
		}
	}
}

// archiving are the fields that hide a noun, which have tests of their own.
var archiving = []string{"Archived", "Undone"}

// walkFields notes for each field under the value whether it is set.
func walkFields(value reflect.Value, path string, used map[string]bool) {
	switch {
	case value.Kind() == reflect.Slice:
		for i := range value.Len() {
			walkFields(value.Index(i), path, used)
		}
		used[path] = used[path] || value.Len() > 0
	case value.Kind() == reflect.Struct && value.Type().PkgPath() != "time":
		for i := range value.NumField() {
			if field := value.Type().Field(i); field.IsExported() && !slices.Contains(archiving, field.Name) {
				walkFields(value.Field(i), path+"."+field.Name, used)
			}
		}
	default:
		used[path] = used[path] || !value.IsZero()
	}
}
