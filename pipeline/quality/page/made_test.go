package page

import (
	"encoding/json"
	"strings"
	"testing"

	"bentray/pipeline/quality"
)

// Settings are said in plain words, whatever model and surface they are of.
func TestFacts(t *testing.T) {
	air := `, "air": {"temperature": 15, "pressure": 1013.25, "humidity": 0}}`
	for _, c := range []struct{ name, job, want string }{
		{
			"images over a given plane", `{"input": {"vertical_unit": "ft"}, "water": {"temperature": 16.8, "salinity": 0.2, "formula": "iapws"},
			"surface": {"plane": {"level": 31.86, "slope_x": -0.0004, "slope_y": 0.0001}}, "sensor": [{"rays": {"model": "multiview", "cameras": "cameras.csv", "solve": "invert"}}]` + air,
			"Rays: images, by the rays of all cameras that saw a point (multiview), cameras of cameras.csv, solve = invert, light of 550 nm|Water: 16.8 °C, salinity 0.2, by iapws|" +
				"Water surface: plane of the given level 31.86 ft, slopes −0.0004 along x and 0.0001 along y|Air: 15 °C, 1013.25 hPa, 0 % humidity",
		},
		{
			"a river", `{"water": {"temperature": 14.2, "salinity": 0.3, "formula": "quan-fry", "zones": "zones.geojson"}, "surface": {"plane": {"waterline": "edge.csv"}, "gauge": {"file": "gauge.csv"}},
			"sensor": [{"name": "green", "rays": {"model": "pulse"}}, {"name": "quick", "rays": {"model": "vertical"}}]` + air,
			"Rays: green: airborne laser pulses (pulse), light of 532 nm; quick: depths scaled straight down (vertical), plan kept: a quick look, without the course of the rays, light of 550 nm|" +
				"Water: by zone from zones.geojson, elsewhere 14.2 °C, salinity 0.3, by quan-fry|Water surface: plane fitted to edge.csv; gauge gauge.csv; levels of zones that have one|Air: 15 °C, 1013.25 hPa, 0 % humidity",
		},
		{"what is no job", `[1]`, "Settings: not readable: json: cannot unmarshal array into Go value of type job.Job"},
	} {
		var got []string
		for _, f := range newMade(quality.Setting{Job: json.RawMessage(c.job)}).Facts {
			got = append(got, f.Name+": "+f.Text)
		}
		if text := strings.Join(got, "|"); text != c.want {
			t.Errorf("%s: facts are %q, want %q", c.name, text, c.want)
		}
	}
}

// Keys are all there, by path, with their values as JSON.
func TestKeys(t *testing.T) {
	var got []string
	for _, f := range keys("", json.RawMessage(`{"b": {"d": "x", "c": [1, 2]}, "a": [ {"e": 0.5}, {"e": null} ], "f": []}`)) {
		got = append(got, f.Name+"="+f.Text)
	}
	if text, want := strings.Join(got, " "), `a.1.e=0.5 a.2.e=null b.c=[1,2] b.d="x" f=[]`; text != want {
		t.Errorf("keys are %q, want %q", text, want)
	}
}
