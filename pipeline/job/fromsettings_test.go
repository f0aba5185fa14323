package job

import (
	"fmt"
	"reflect"
	"strings"
	"testing"
)

// sameFromSettings tells whether a job comes back from its settings, but for what they
// leave out.
func sameFromSettings(j *Job, settings []byte) error {
	got, err := FromSettings("receipt", "survey", settings)
	if err != nil {
		return fmt.Errorf("settings %s: %w", settings, err)
	}
	want := *j
	want.Title, want.Input.Files, want.Output.Folder, want.Path, want.Dir = "", nil, "", "receipt", "survey"
	for _, maps := range []*map[string]string{&want.Input.Columns, &got.Input.Columns} {
		if len(*maps) == 0 {
			*maps = nil
		}
	}
	if !reflect.DeepEqual(*got, want) {
		return fmt.Errorf("the job of %s is\n%+v, want\n%+v", settings, *got, want)
	}
	return nil
}

// Jobs of every kind come back from their settings, also where those are indented as in
// a receipt.
func TestFromSettings(t *testing.T) {
	media := "[input]\nfiles=['a.csv']\n[output]\nfolder='b'\n"
	water := "[water]\ntemperature=17\nsalinity=0.5\n"
	for name, text := range map[string]string{
		"least":     least,
		"pulse":     pulseJob,
		"sensors":   withSensors(manySensors(3)),
		"column":    media + water + "[surface]\ncolumn='wl'\n[rays]\nmodel='vertical'",
		"plane":     media + water + "[surface.plane]\nlevel=1\nat=[1,2.5]\n[rays]\nmodel='vertical'",
		"waterline": media + water + "[surface.plane]\nwaterline='w.csv'\n[rays]\nmodel='vertical'",
		"profile":   media + water + "[surface.profile]\ncentreline='c.geojson'\nlevels='l.csv'\nreach=40\n[rays]\nmodel='vertical'",
		"classes":   media + water + "[surface.grid]\nclasses=[41,9]\ncell=2\n[rays]\nmodel='pulse'\ntrajectory='t <&>.csv'",
		"gauge":     media + water + "[surface.gauge]\nfile='g.csv'\nat=2031-04-17T09:30:00.5Z\n[surface.separation]\nfile='s.csv'\n[rays]\nmodel='pulse'\nrange_index=1.0002",
		"local":     media + "[water]\nstations='s.csv'\nzones='z.geojson'\n[extent]\npolygons='e.geojson'\n[surface]\nlevel=-0.5\n[rays]\nmodel='vertical'",
		"cameras":   media + water + "[surface]\nlevel=0\n[rays]\nmodel='multiview'\ncameras='c.csv'\nsolve='average'\nmax_off_nadir=30\ncamera_medium='water'\nresidual='equal'",
		"input": "[input]\nfiles=['a.csv']\nunit='us-ft'\nvertical_unit='m'\nbad_rows='divert'\ncoarse=true\ntime='gps-week'\nweek=2200\n[input.columns]\nx='easting'\nclassification='sort'\n" +
			"[input.csv]\nnames=['easting','y','z','sort']\n[output]\nfolder='b'\ndecimals=2\nprovenance='lean'\n[select.where]\nsort=[2,'a',1e17]\n" + water + "[surface]\nlevel=0\n[light]\nwavelength=515\n[rays]\nmodel='pulse'",
	} {
		t.Run(name, func(t *testing.T) {
			j := parse(t, text)
			data, err := j.Settings()
			if err != nil {
				t.Fatal(err)
			}
			for _, data := range []string{string(data), strings.ReplaceAll(string(data), ",\"", ",\n  \"")} {
				if err := sameFromSettings(j, []byte(data)); err != nil {
					t.Error(err)
				}
			}
		})
	}
}

// Changed settings make a job of other settings, or none and say why.
func TestFromSettingsFaults(t *testing.T) {
	data := settings(t, pulseJob)
	for _, c := range []struct{ from, to, want string }{
		{`{"input"`, `"input"`, "receipt: settings are no JSON: "},
		{data, "null", "receipt: settings are no JSON: they are null"},
		{data, "[]", "receipt: settings are no JSON: "},
		{data, "{}", `receipt: [input] files is missing`},
		{`"decimals":4`, `"decimals":40`, "receipt: [output] decimals is 40, want 0 to 9"},
		{`"decimals":4`, `"decimals":"4"`, "receipt: [output] decimals is a string, want a whole number"},
		{`"decimals":4`, `"decimals":4,"decimals":4`, "receipt: settings are "},
		{`"decimals":4`, `"decimals":4.0`, `receipt: [output] decimals is a number, want a whole number`},
		{`"decimals":4`, `"decimal":4`, `receipt: unknown key "decimal" in [output]; did you mean "decimals"?`},
		{`"decimals":4`, `"folder":"a"`, "receipt: settings are "},
		{`,"decimals":4`, ``, "receipt: settings are "},
		{`"model":"pulse"`, `"model":"pulses"`, `receipt: [rays] model is "pulses", want "vertical", "pulse" or "multiview"`},
		{data, data + "{}", "receipt: settings are "},
		{data, `{"sensor":[` + strings.Repeat("{},", 100_000) + `{}]}`, "receipt: [input] files is missing"}, // and ends
	} {
		changed := strings.Replace(data, c.from, c.to, 1)
		if changed == data {
			t.Fatalf("%s is not in %s", c.from, data)
		}
		if _, err := FromSettings("receipt", "", []byte(changed)); err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("with %.60s it gives %.200v, want %s", c.to, err, c.want)
		}
	}
}
