package job

import (
	"bytes"
	"encoding/json"
	"errors"
	"os"
	"testing"
)

// Whatever the bytes are, they are a job whose settings are JSON, or they are
// refused with faults that say where.
func FuzzParse(f *testing.F) {
	cove, err := os.ReadFile("testdata/cove.toml")
	if err != nil {
		f.Fatal(err)
	}
	reach, err := os.ReadFile("testdata/reach.toml")
	if err != nil {
		f.Fatal(err)
	}
	for _, seed := range []string{
		string(cove), string(reach), withSensors(manySensors(3)), "sensor=[1,{name=[]},{rays={model='pulse'}}]", "[sensor]\n[sensor.1]\nname=1", "[[sensor.rays]]\nmodel=1",
		"[[a]]\n[[a.b]]\n[a.b.c]\n[[a]]\nb=[[{c=1}]]", "surface.gauge.at=09:30:00", "surface.gauge.at=0001-01-01T00:00:00Z", "surface.gauge.at=''", "surface.grid.classes=[-1,256]",
		least, pulseJob, "", "\ufeff", "a", "[a", "a=1\na=1", "[[water]]", "water=[{}]", "input.columns={x='y',\"\"='z'}",
		"select.where={a=[1,'b',nan],b=3}", "surface.plane.at=[1]", "''=1", "[a.'.'.b]\n'.'={c={d=1}}", "input.csv.names=['\\u0000']", "rays=1979-05-27",
		"surface.level=9223372036854775807", "input.week=-9223372036854775808", "\xff", "[input.columns]\nx.y=1",
	} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		before := bytes.Clone(data)
		j, err := Parse("job.toml", data)
		if !bytes.Equal(before, data) {
			t.Fatal("Parse changed its input")
		}
		if err != nil {
			checkRefusal(t, err, 1+bytes.Count(data, []byte("\n")))
			return
		}
		settings, err := j.Settings()
		if err != nil || !json.Valid(settings) {
			t.Fatalf("settings are %s, %v", settings, err)
		}
		if err := sameFromSettings(j, settings); err != nil {
			t.Fatal(err)
		}
	})
}

func checkRefusal(t *testing.T, err error, lines int) {
	all := []error{err}
	if joined, ok := err.(interface{ Unwrap() []error }); ok {
		all = joined.Unwrap()
	}
	for _, err := range all {
		var e *Error
		if !errors.As(err, &e) {
			t.Fatalf("%#v is no *Error", err)
		}
		if e.Path != "job.toml" || e.Line < 0 || e.Line > lines || e.Msg == "" {
			t.Fatalf("%#v does not say where, in %d lines", e, lines)
		}
	}
}
