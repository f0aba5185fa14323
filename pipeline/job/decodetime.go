package job

import (
	"reflect"
	"time"

	"github.com/pelletier/go-toml/v2"
)

// decodeTime sets dst to UTC seconds since 1970, from such a number or from a
// time with its offset, as text or as TOML has it.
func decodeTime(f *faults, dst reflect.Value, v any, key string) {
	switch t := v.(type) {
	case string:
		at, err := time.Parse(time.RFC3339, t)
		if err != nil {
			f.add(key, "is %q, want %s", t, wantTime)
			return
		}
		v = utcSeconds(at)
	case time.Time:
		v = utcSeconds(t)
	case int64, float64:
	case toml.LocalDateTime, toml.LocalDate, toml.LocalTime:
		f.add(key, "is %v, want %s", t, wantTime)
		return
	default:
		f.add(key, "is %s, want %s", typeName(v), wantTime)
		return
	}
	decodeValue(f, dst, v, key)
}

const wantTime = "a time with its offset, such as 2031-04-17T09:30:00Z, or UTC seconds since 1970"

// utcSeconds returns a time in seconds since 1970.
func utcSeconds(t time.Time) float64 {
	return float64(t.Unix()) + float64(t.Nanosecond())/1e9
}
