package job

import (
	"bytes"
	"encoding/json"
	"flag"
	"os"
	"reflect"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "rewrite testdata")

func settings(t *testing.T, text string) string {
	t.Helper()
	b, err := parse(t, text).Settings()
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

func TestSettingsGolden(t *testing.T) {
	for _, name := range []string{"cove", "reach"} {
		j, err := Load("testdata/" + name + ".toml")
		if err != nil {
			t.Fatal(err)
		}
		got, err := j.Settings()
		if err != nil {
			t.Fatal(err)
		}
		var pretty bytes.Buffer
		if err := json.Indent(&pretty, got, "", "  "); err != nil {
			t.Fatal(err)
		}
		pretty.WriteByte('\n')
		compareGolden(t, "testdata/"+name+".settings.json", pretty.Bytes())
	}
}

func compareGolden(t *testing.T, golden string, got []byte) {
	t.Helper()
	if *update {
		if err := os.WriteFile(golden, got, 0o600); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		t.Errorf("settings are\n%s\nwant\n%s", got, want)
	}
}

func TestSettingsKeepWhatDoesNotMatterOut(t *testing.T) {
	want := settings(t, least)
	pulse := strings.Replace(least, "vertical", "pulse", 1) + "rays.trajectory = 't.csv'\n"
	for _, c := range []struct{ name, text, want string }{
		{"title", least + `title = "another"`, want},
		{"files", strings.Replace(least, "raw/*.csv", "more/*.csv", 1), want},
		{"folder", strings.Replace(least, `"true"`, `"elsewhere"`, 1), want},
		{"comment and blanks", "# noted\n\n" + least, want},
		{"order", "surface.level = 0.42\n" + strings.Replace(least, "surface.level = 0.42\n", "", 1), want},
		{"tables", "rays.model = 'vertical'\n[surface]\nlevel = 42e-2\n[water]\nsalinity = -0.0\ntemperature = 12.0\n[output]\nfolder = 'true'\n[input]\nfiles = ['raw/*.csv']", want},
		{"default unit", least + `input.unit = "m"`, want},
		{"default vertical_unit", least + `input.vertical_unit = "m"`, want},
		{"default bad_rows", least + `input.bad_rows = "stop"`, want},
		{"default coarse", least + "input.coarse = false", want},
		{"default time", least + `input.time = "gps-adjusted"`, want},
		{"default header", least + `input.csv.header = true`, want},
		{"default provenance", least + `output.provenance = "full"`, want},
		{"default decimals", least + `output.decimals = 4`, want},
		{"default formula", strings.Replace(least, "salinity = 0", `salinity = 0, formula = "quan-fry", pressure_dbar = 0`, 1), want},
		{"default air", least + `air = { temperature = 15, pressure = 1013.25, humidity = 0, co2 = 450 }`, want},
		{"default wavelength", least + `light.wavelength = 550`, want},
		{"default incidence", least + `limits.max_incidence = 60`, want},
		{"default wavelength of pulse", pulse + `light.wavelength = 532`, settings(t, pulse)},
		{"default gap", pulse + `rays.max_gap = 1`, settings(t, pulse)},
		{"header with names", least + "input.csv = { header = false, names = ['x', 'y', 'z'] }", settings(t, least+"input.csv.names = ['x', 'y', 'z']")},
		{"order and repeats of values", least + "select.where.kind = ['b', 2, 'a', 1, 2.0]", settings(t, least+"select.where.kind = [1, 2, 'a', 'b']")},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := settings(t, c.text); got != c.want {
				t.Errorf("settings are\n%s\nwant\n%s", got, c.want)
			}
		})
	}
}

func TestSettingsTellWhatMatters(t *testing.T) {
	seen := map[string]string{settings(t, least): "least"}
	pulse := strings.Replace(least, "vertical", "pulse", 1) + "rays.trajectory = 't.csv'\n"
	for name, text := range map[string]string{
		"salinity":     strings.Replace(least, "salinity = 0", "salinity = 35", 1),
		"temperature":  strings.Replace(least, "temperature = 12", "temperature = 12.1", 1),
		"level":        strings.Replace(least, "0.42", "0.43", 1),
		"level column": strings.Replace(least, "surface.level = 0.42", `surface.column = "tide"`, 1),
		"humidity":     least + "air.humidity = 1",
		"wavelength":   least + "light.wavelength = 551",
		"unit":         least + "input.unit = 'ft'",
		"heights":      least + "input.vertical_unit = 'ft'",
		"bad rows":     least + "input.bad_rows = 'divert'",
		"coarse":       least + "input.coarse = true",
		"time":         least + "input.time = 'utc'",
		"columns":      least + "input.columns.x = 'e'",
		"names":        least + "input.csv.names = ['x', 'y', 'z']",
		"decimals":     least + "output.decimals = 3",
		"provenance":   least + "output.provenance = 'lean'",
		"where":        least + "select.where.kind = [2]",
		"where text":   least + "select.where.kind = ['2']",
		"extent":       least + "extent.polygons = 'a.geojson'",
		"incidence":    least + "limits.max_incidence = 50",
		"pulse":        pulse,
		"gap":          pulse + "rays.max_gap = 2",
		"range index":  pulse + "rays.range_index = 1.0003",
	} {
		s := settings(t, text)
		if other, ok := seen[s]; ok {
			t.Errorf("settings of %q and %q are the same:\n%s", name, other, s)
		}
		seen[s] = name
	}
}

// The receipt shows settings under the names that the job file has.
func TestSettingsNamesAreTheKeys(t *testing.T) {
	checked := 0
	var compare func(reflect.Type)
	compare = func(typ reflect.Type) {
		for i := range typ.NumField() {
			f := typ.Field(i)
			name, _, _ := strings.Cut(f.Tag.Get("json"), ",")
			if key := f.Tag.Get("toml"); key == "" || name != key && name != "-" {
				t.Errorf("%s.%s: key is %q, want the settings' name %q", typ.Name(), f.Name, key, name)
			}
			checked++
			inner := f.Type
			if inner.Kind() == reflect.Pointer || inner.Kind() == reflect.Slice {
				inner = inner.Elem()
			}
			if inner.Kind() == reflect.Struct {
				compare(inner)
			}
		}
	}
	compare(reflect.TypeFor[Job]())
	if checked < 70 {
		t.Errorf("%d fields are checked, want all of the job", checked)
	}
}
