package job

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"strconv"
)

// FromSettings returns the job of which Settings gave these bytes, white space
// apart. It has neither title nor files nor output folder; relative paths start
// from the folder. Errors are those of Parse without lines, for messages that begin
// with the path: other programs' settings, or changed ones, need not make a job.
func FromSettings(path, folder string, data []byte) (*Job, error) {
	values, err := readSettings(data)
	if err != nil {
		return nil, &Error{Path: path, Msg: "settings are no JSON: " + err.Error()}
	}
	values.complete()
	lines := map[string]int{}
	noteKeys(lines, "", map[string]any(values))
	f := newFaults(path, lines)
	content := &file{Job: newJob(path)}
	decode(f, content, values)
	content.settleSensors(f)
	j := content.Job
	j.applyDefaults(f)
	j.check(f)
	for _, fault := range f.list {
		fault.Line = 0
	}
	if err := f.err(); err != nil {
		return nil, err
	}
	j.Input.Files, j.Output.Folder, j.Dir = nil, "", folder
	if err := j.isOf(data); err != nil {
		return nil, err
	}
	return j, nil
}

// settingValues are settings by key, as readDocument has them.
type settingValues map[string]any

func readSettings(data []byte) (settingValues, error) {
	d := json.NewDecoder(bytes.NewReader(data))
	d.UseNumber()
	var values settingValues
	if err := d.Decode(&values); err != nil {
		return nil, err
	}
	if values == nil {
		return nil, errors.New("they are null")
	}
	withNumbers(map[string]any(values))
	return values, nil
}

// withNumbers returns a value with numbers of the types that TOML gives them.
func withNumbers(v any) any {
	switch v := v.(type) {
	case map[string]any:
		for key := range v {
			v[key] = withNumbers(v[key])
		}
	case []any:
		for i := range v {
			v[i] = withNumbers(v[i])
		}
	case json.Number:
		const exact = 1 << 53
		if whole, err := strconv.ParseInt(v.String(), 10, 64); err == nil && -exact <= whole && whole <= exact {
			return whole
		}
		number, _ := v.Float64() // beyond its range infinite, which is refused
		return number
	}
	return v
}

// complete adds what settings leave out and a job must have, and puts the rays of a
// sensor without name where a job file has them.
func (s settingValues) complete() {
	for _, key := range []struct {
		table, name string
		value       any
	}{{"input", "files", []any{"-"}}, {"output", "folder", "-"}} {
		if table, ok := s[key.table].(map[string]any); ok {
			table[key.name] = key.value
		}
	}
	list, _ := s[sensorTable].([]any)
	if len(list) != 1 {
		return
	}
	if only, _ := list[0].(map[string]any); len(only) == 1 && only["rays"] != nil {
		s["rays"] = only["rays"]
		delete(s, sensorTable)
	}
}

// noteKeys notes every key and table below a path as one that is there. It does not go
// deeper than any job has keys.
func noteKeys(lines map[string]int, path string, v any) {
	if len(path) > longestPath {
		return
	}
	if path != "" {
		lines[path] = 1
	}
	switch v := v.(type) {
	case map[string]any:
		for key := range v {
			noteKeys(lines, join(path, key), v[key])
		}
	case []any:
		for i := range v {
			if item, ok := v[i].(map[string]any); ok {
				noteKeys(lines, join(path, strconv.Itoa(i+1)), item)
			}
		}
	}
}

// isOf refuses settings that the job would not write.
func (j *Job) isOf(data []byte) error {
	want, err := j.Settings()
	if err != nil {
		return err
	}
	var got bytes.Buffer
	if err := json.Compact(&got, data); err != nil || !bytes.Equal(got.Bytes(), want) {
		return &Error{Path: j.Path, Msg: fmt.Sprintf("settings are %.400q, want %.400q, as this program writes them", got.Bytes(), want)}
	}
	return nil
}
