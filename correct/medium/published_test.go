package medium

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"sort"
	"strings"
	"testing"
)

// checkValue is one published number with its origin.
type checkValue struct {
	Group          string
	Formula        string
	Quantity       string
	Inputs         map[string]float64
	Value          float64
	Tolerance      float64 // half a unit of the last printed digit
	AgreementBound float64 `json:"agreement_bound"`
	CheckKind      string  `json:"check_kind"`
	Source         string
	Retrieved      string
}

// bound is one unit of the last printed digit for the formula's own values and
// the spread seen between formulas and experiments for the rest.
func (c checkValue) bound() float64 {
	if c.CheckKind == "own_formula" {
		return 2 * c.Tolerance
	}
	return c.AgreementBound
}

func (c checkValue) name() string {
	source, _, _ := strings.Cut(c.Source, ",")
	keys := make([]string, 0, len(c.Inputs))
	for key := range c.Inputs {
		keys = append(keys, key)
	}
	sort.Strings(keys)
	for i, key := range keys {
		keys[i] = fmt.Sprintf("%s=%g", key, c.Inputs[key])
	}
	return fmt.Sprintf("%s/%s/%s", source, c.Formula, strings.Join(keys, ","))
}

func readCheckValues(t *testing.T, name string) []checkValue {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "..", "testdata", name))
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Entries []checkValue }
	if err := json.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	return file.Entries
}

// verify compares every entry with compute and asserts how many there are of
// each kind, so that a lost entry cannot pass.
func verify(t *testing.T, entries []checkValue, kinds map[string]int, compute func(checkValue) (float64, bool)) {
	seen := map[string]int{}
	for _, c := range entries {
		seen[c.CheckKind]++
		t.Run(c.name(), func(t *testing.T) {
			got, ok := compute(c)
			if !ok {
				t.Fatalf("no computation for group %q, formula %q, quantity %q", c.Group, c.Formula, c.Quantity)
			}
			if c.Source == "" || c.Retrieved == "" || c.bound() <= 0 {
				t.Fatalf("entry without source or bound: %+v", c)
			}
			if !(math.Abs(got-c.Value) <= c.bound()) {
				t.Errorf("%s: got %.10g, want %.10g within %.2g (%s)", c.Quantity, got, c.Value, c.bound(), c.CheckKind)
			}
		})
	}
	if fmt.Sprint(seen) != fmt.Sprint(kinds) {
		t.Errorf("entries by kind: got %v, want %v", seen, kinds)
	}
}

func TestPublishedIndex(t *testing.T) {
	kinds := map[string]int{"own_formula": 53, "own_formula_inputs_uncertain": 6, "other_formula": 40, "measurement": 64}
	verify(t, readCheckValues(t, "refractive_index.json"), kinds, computeIndex)
}

func TestPublishedSoundSpeed(t *testing.T) {
	kinds := map[string]int{"own_formula": 41, "other_formula": 12, "rounded_inputs": 2}
	verify(t, readCheckValues(t, "sound_speed.json"), kinds, computeSound)
}

// computeSound takes the entry's temperature to ITS-90 and its pressure to dbar. Formulas
// are called without their ranges: some printed values lie outside.
func computeSound(c checkValue) (float64, bool) {
	in, latitude := c.Inputs, c.Inputs["lat_deg"]*math.Pi/180
	w := Water{TemperatureC: in["t68_C"]/1.00024 + in["t90_C"], Salinity: in["S"], PressureDbar: in["p_dbar_gauge"]}
	switch c.Formula {
	case "Chen & Millero 1977 (UNESCO EOS-80)", "Wong & Zhu 1995, refit of Chen & Millero":
		return chenMillero(w), true
	case "TEOS-10":
		// Practical salinity of the reference composition; the anomaly is worth 0.02 m/s.
		w.Salinity = in["SA_g_kg"] * 35 / 35.16504
		return chenMillero(w), true
	case "Del Grosso 1974, refit of Wong & Zhu 1995":
		w.PressureDbar = in["p_kgf_cm2"] * 9.80665
		return delGrosso(w), true
	case "Mackenzie 1981":
		return mackenzie(w.TemperatureC, w.Salinity, in["depth_m"]), true
	case "Saunders 1981":
		if c.Quantity == "pressure, dbar" {
			return PressureDbar(in["depth_m"], latitude), true
		}
		return DepthM(w.PressureDbar, latitude), true
	}
	return 0, false
}

func computeIndex(c checkValue) (float64, bool) {
	switch c.Group {
	case "air_ciddor":
		return computeAir(c)
	case "density_sr6_08":
		return computeDensity(c)
	case "iapws_r9_97", "handbook", "seawater_millard_seaver", "seawater_pressure", "seawater_quan_fry":
		return computePhase(c)
	case "group_index_water":
		return computeGroup(c)
	}
	return 0, false
}

// computeAir takes the vapour pressure as the entry gives it: directly, or by
// the saturation pressure of its formula.
func computeAir(c checkValue) (float64, bool) {
	in := c.Inputs
	t, pressure, vapour := in["t_C"], in["p_Pa"]+1000*in["p_kPa"], 0.0
	switch c.Formula {
	case "Ciddor 1996":
		vapour = in["vapour_pressure_Pa"]
	case "Ciddor 1996, xw = f pw / p":
		vapour = in["vapour_pressure_Pa"]
	case "Ciddor 1996 (BIPM-91 saturation pressure)":
		vapour = in["RH_percent"] / 100 * saturationPressure(t)
	case "Ciddor 1996 (IAPWS saturation pressure)":
		vapour = in["RH_percent"] / 100 * saturationPressureIF97(t)
	default:
		return 0, false
	}
	n, _ := moistAir(t, pressure, vapourFraction(t, pressure, vapour), in["xCO2_ppm"], in["lambda_vac_nm"])
	if strings.HasPrefix(c.Quantity, "(n-1) x 1e8") {
		return (n - 1) * 1e8, true
	}
	return n, true
}

func computeDensity(c checkValue) (float64, bool) {
	kelvin := c.Inputs["T_K"]
	switch {
	case strings.HasPrefix(c.Quantity, "density"):
		return waterDensity(kelvin - 273.15), true
	case strings.HasPrefix(c.Quantity, "dv/dT"):
		return derivative(specificVolume, kelvin, 0.1), true
	case strings.HasPrefix(c.Quantity, "molar concentration"):
		// Molar mass by the two gas constants of the entry and of SR6-08.
		return waterDensity(kelvin-273.15) * 461.51805 / 8.31464 / 1000, true
	}
	return 0, false
}

// wavelengthNM reads the wavelength under whichever unit the entry has.
func wavelengthNM(in map[string]float64) float64 {
	return in["lambda_nm"] + in["lambda_vac_nm"] + 1000*(in["lambda_um"]+in["lambda_vac_um"])
}

// gaugeDbar reads the water pressure under whichever unit the entry has.
func gaugeDbar(in map[string]float64) float64 {
	const atmosphere = 10.1325 // dbar
	if bar, ok := in["p_bar_absolute"]; ok {
		return 10*bar - atmosphere
	}
	if pascal, ok := in["p_Pa"]; ok {
		return pascal/1e4 - atmosphere
	}
	return in["p_dbar_gauge"]
}

func computePhase(c checkValue) (float64, bool) {
	in, nm := c.Inputs, wavelengthNM(c.Inputs)
	w := Water{TemperatureC: in["t_C"], Salinity: in["S_psu"] + in["S_ppt"], PressureDbar: gaugeDbar(in)}
	switch c.Formula {
	case "Quan & Fry 1995":
		return computeQuanFry(c, w, nm), true
	case "Millard & Seaver 1990", "Millard & Seaver 1990 region I":
		n, _ := millardSeaver(w, nm)
		return n, true
	case "Millard & Seaver 1990 x n_air(t)":
		rel, slope := millardSeaver(w, nm)
		n, _ := referToVacuum(rel, slope, w.TemperatureC, nm)
		return n, true
	case "R9-97 + SR6-08":
		n, _ := iapws(w.TemperatureC, waterDensity(w.TemperatureC), nm)
		return n, true
	case "R9-97":
		n, _ := iapws(in["T_K"]-273.15, in["density_kg_m3"], nm)
		return n, true
	case "R9-97 + TEOS-10 pure-water density":
		n, _ := iapws(w.TemperatureC, in["density_kg_m3"], nm)
		return n, true
	}
	return 0, false
}

func computeQuanFry(c checkValue, w Water, nm float64) float64 {
	c0, c1 := quanFryCoefficients(w.TemperatureC, w.Salinity)
	n, _ := quanFry(w.TemperatureC, w.Salinity, nm)
	switch {
	case strings.Contains(c.Quantity, "coefficient of lambda^0"):
		return c0
	case strings.Contains(c.Quantity, "coefficient of lambda^-1"):
		return c1
	case strings.Contains(c.Quantity, "lambda^0"):
		return c0
	case strings.HasPrefix(c.Quantity, "difference of phase index"):
		at530, _ := quanFry(w.TemperatureC, w.Salinity, 530)
		return n - at530
	}
	return n
}

func computeGroup(c checkValue) (float64, bool) {
	t, ok := c.Inputs["t_C"]
	if !ok {
		t = 20 // not stated by the source; 0 to 30 degrees C moves the delay by 0.2 ns
	}
	n, slope := iapws(t, waterDensity(t), wavelengthNM(c.Inputs))
	switch {
	case strings.HasPrefix(c.Quantity, "group index of water"):
		return n - slope, true
	case strings.HasPrefix(c.Quantity, "group / phase - 1"):
		return (n-slope)/n - 1, true
	case strings.HasPrefix(c.Quantity, "extra delay"):
		const light = 0.299792458 // m/ns, exact (SI)
		return -slope * 100 / light, true
	}
	return 0, false
}
