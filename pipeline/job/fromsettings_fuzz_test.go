package job

import (
	"bytes"
	"testing"
)

// Whatever a receipt holds as settings, it makes a job that gives them back, or none.
func FuzzFromSettings(f *testing.F) {
	for _, text := range []string{least, pulseJob, withSensors(manySensors(2))} {
		j, err := Parse("job.toml", []byte(text))
		if err != nil {
			f.Fatal(err)
		}
		data, err := j.Settings()
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	for _, text := range []string{
		`{}`, `null`, `[]`, `{"sensor":[{"rays":1}]}`, `{"sensor":[{"rays":{"model":"pulse"}},3]}`, `{"input":3,"output":[]}`, `{"":{"":[{}]}}`, `{"rays":{},"sensor":null}`,
		`{"water":{"temperature":1e999}}`, `{"input":{"week":1.5}}`, `{"surface":{"plane":{"at":[1]}}}`, `{"select":{"where":{"a":[[1]]}}}`, `{"sensor":[{"where":{"a":["b",1]},"rays":{}}]}`,
	} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		before := bytes.Clone(data)
		j, err := FromSettings("receipt", "", data)
		if !bytes.Equal(before, data) {
			t.Fatal("FromSettings changed its input")
		}
		if (j == nil) == (err == nil) {
			t.Fatalf("it gives %v and %v", j, err)
		}
	})
}
