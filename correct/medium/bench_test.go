package medium

import "testing"

func TestNoAllocation(t *testing.T) {
	water, outside := Water{TemperatureC: 17.5, Salinity: 34.9}, Water{TemperatureC: 17.5, Salinity: 60}
	fresh, air := Water{TemperatureC: 17.5}, Air{TemperatureC: 18, PressureHPa: 1009, HumidityPercent: 60, CO2PPM: 450}
	sum := 0.0
	for name, call := range map[string]func(){
		"quan-fry":       func() { n, g, _ := QuanFry.Index(water, 532); sum += n + g },
		"millard-seaver": func() { n, g, _ := MillardSeaver.Index(water, 532); sum += n + g },
		"iapws":          func() { n, g, _ := IAPWS.Index(fresh, 532); sum += n + g },
		"ciddor":         func() { n, g, _ := air.Index(532); sum += n + g },
		"sound": func() {
			for _, f := range soundFormulas {
				c, _ := f.Speed(water, 0.7)
				sum += c
			}
		},
		"predicates": func() {
			if QuanFry.Computed(outside, 532) || QuanFry.Published(outside, 532) || DelGrosso.Published(outside, 0) || !air.Published(532) {
				sum++
			}
		},
	} {
		if got := testing.AllocsPerRun(100, call); got != 0 {
			t.Errorf("%s: %g allocations, want 0", name, got)
		}
	}
	if !(sum > 0) {
		t.Errorf("sum is %g", sum)
	}
}

func BenchmarkWaterIndex(b *testing.B) {
	for _, f := range []WaterFormula{QuanFry, MillardSeaver, IAPWS} {
		b.Run(f.String(), func(b *testing.B) {
			b.ReportAllocs()
			w, sum := Water{TemperatureC: 17.5}, 0.0
			for b.Loop() {
				n, g, _ := f.Index(w, 532)
				sum += n + g
			}
		})
	}
}

func BenchmarkAirIndex(b *testing.B) {
	b.ReportAllocs()
	air, sum := Air{TemperatureC: 18, PressureHPa: 1009, HumidityPercent: 60, CO2PPM: 450}, 0.0
	for b.Loop() {
		n, g, _ := air.Index(532)
		sum += n + g
	}
}

func BenchmarkSoundSpeed(b *testing.B) {
	for _, f := range soundFormulas {
		b.Run(f.String(), func(b *testing.B) {
			b.ReportAllocs()
			w, sum := Water{TemperatureC: 17.5, Salinity: 34.9, PressureDbar: 12}, 0.0
			for b.Loop() {
				c, _ := f.Speed(w, 0.7)
				sum += c
			}
		})
	}
}
