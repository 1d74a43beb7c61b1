package agreement

import (
	"fmt"
	"math"
	"reflect"
	"strings"

	"pgregory.net/rapid"
)

// sound fails the test unless everything in an analysis may be shown: no NaN
// or Inf anywhere, every figure either absent with a reason and otherwise
// empty, or inside its interval and its range.
func sound(t rapid.TB, a *Analysis) {
	t.Helper()
	soundValue(t, "analysis", reflect.ValueOf(a))
}

func soundValue(t rapid.TB, path string, v reflect.Value) {
	t.Helper()
	if !v.IsValid() {
		return
	}
	switch x := v.Interface().(type) {
	case Share:
		soundShare(t, path, x)
	case Estimate:
		soundEstimate(t, path, x)
	case error:
		if strings.TrimSpace(x.Error()) == "" {
			t.Errorf("%s: an empty reason", path)
		}
		return
	}
	switch v.Kind() {
	case reflect.Float64:
		if f := v.Float(); math.IsNaN(f) || math.IsInf(f, 0) {
			t.Errorf("%s is %v", path, f)
		}
	case reflect.Pointer, reflect.Interface:
		if !v.IsNil() {
			soundValue(t, path, v.Elem())
		}
	case reflect.Slice:
		for i := range v.Len() {
			soundValue(t, fmt.Sprintf("%s[%d]", path, i), v.Index(i))
		}
	case reflect.Struct:
		for i := range v.NumField() {
			soundValue(t, path+"."+v.Type().Field(i).Name, v.Field(i))
		}
	}
}

func soundShare(t rapid.TB, path string, s Share) {
	t.Helper()
	if s.Absent != nil {
		if s.Count != 0 || s.Of != 0 || s.Effective != 0 {
			t.Errorf("%s is absent and yet %d of %d", path, s.Count, s.Of)
		}
		return
	}
	if s.Of <= 0 || s.Count < 0 || s.Count > s.Of || s.Value != float64(s.Count)/float64(s.Of) {
		t.Errorf("%s: %d of %d is not %v", path, s.Count, s.Of, s.Value)
	}
	if s.Interval.Lower < 0 || s.Interval.Upper > 1 {
		t.Errorf("%s: a share with limits %v", path, s.Interval)
	}
}

func soundEstimate(t rapid.TB, path string, e Estimate) {
	t.Helper()
	if e.Absent != nil {
		rest := e
		rest.Absent = nil
		if rest != (Estimate{}) {
			t.Errorf("%s is absent and yet %+v", path, rest)
		}
		return
	}
	if e.Value > 1 {
		t.Errorf("%s: %v is above 1", path, e.Value)
	}
	if e.StandardError < 0 {
		t.Errorf("%s: a standard error of %v", path, e.StandardError)
	}
	if e.Unbounded != nil {
		if e.Interval.Width() != 0 || e.Method != "" || e.StandardError != 0 {
			t.Errorf("%s has no interval and yet %v", path, e.Interval)
		}
		return
	}
	if e.Method == "" {
		t.Errorf("%s: an interval without its method", path)
	}
	if !e.Interval.Contains(e.Value) {
		t.Errorf("%s: %v is outside of %v", path, e.Value, e.Interval)
	}
	if !(e.Interval.Width() > 0) {
		t.Errorf("%s: %v has no width", path, e.Interval)
	}
	// A limit for itself is no further out than as one of two.
	if o := e.OneSided; !o.Contains(e.Value) || o.Lower < e.Interval.Lower-rounding || o.Upper > e.Interval.Upper+rounding {
		t.Errorf("%s: one-sided limits %v of %v in %v", path, o, e.Value, e.Interval)
	}
	// A coefficient below −1 can arise only where the chance agreement comes
	// from calls that the observed one does not (single calls, say).
	if e.Interval.Lower < min(-1, e.Value) || e.Interval.Upper > 1 {
		t.Errorf("%s: limits %v out of range", path, e.Interval)
	}
}
