package medium_test

import (
	"fmt"
	"math"

	"bentray/correct/medium"
)

func ExampleWaterFormula_Index() {
	sea := medium.Water{TemperatureC: 20, Salinity: 35}
	phase, group, err := medium.QuanFry.Index(sea, 532)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("phase %.6f, group %.6f, published range: %v\n", phase, group, medium.QuanFry.Published(sea, 532))

	_, _, err = medium.QuanFry.Index(medium.Water{TemperatureC: 20, Salinity: 52}, 532)
	fmt.Println(err)
	// Output:
	// phase 1.341877, group 1.364184, published range: true
	// salinity is 52, want 0 to 45 for quan-fry
}

func ExampleAir_Index() {
	air := medium.StandardAir()
	air.TemperatureC, air.HumidityPercent = 20, 50
	phase, group, err := air.Index(532)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("phase %.9f, group %.9f\n", phase, group)
	// Output: phase 1.000273027, group 1.000284401
}

func ExampleParseWaterFormula() {
	formula, err := medium.ParseWaterFormula("millard-seaver")
	fmt.Println(formula, formula.UsesPressure(), err)
	// Output: millard-seaver true <nil>
}

func ExampleSoundFormula_Speed() {
	// The check value of UNESCO Technical Papers in Marine Science 44 (1983),
	// 1731.995 m/s, is for 40 degrees C of IPTS-68.
	w := medium.Water{TemperatureC: 40 / 1.00024, Salinity: 40, PressureDbar: 10000}
	speed, err := medium.ChenMillero.Speed(w, 0)
	fmt.Printf("%.3f m/s, %v\n", speed, err)

	_, err = medium.DelGrosso.Speed(medium.Water{TemperatureC: 12}, 0)
	fmt.Println(err)
	// Output:
	// 1731.995 m/s, <nil>
	// salinity is 0, want 20 to 45 for del-grosso
}

func ExamplePressureDbar() {
	latitude := 54 * math.Pi / 180
	p := medium.PressureDbar(25, latitude)
	speed, _ := medium.Mackenzie.Speed(medium.Water{TemperatureC: 11, Salinity: 33, PressureDbar: p}, latitude)
	fmt.Printf("%.3f dbar, %.2f m/s\n", p, speed)
	// Output: 25.238 dbar, 1491.32 m/s
}

func ExampleParseSoundFormula() {
	formula, err := medium.ParseSoundFormula("del-grosso")
	fmt.Println(formula, err)
	// Output: del-grosso <nil>
}
