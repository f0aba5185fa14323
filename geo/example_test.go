package geo_test

import (
	"errors"
	"fmt"

	"bentray/geo"
)

func ExampleParseUnit() {
	unit, err := geo.ParseUnit("us-ft")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.7f m\n", 3937*float64(unit))
	_, err = geo.ParseUnit("yard")
	fmt.Println(err)
	// Output:
	// 1200.0000000 m
	// unit is "yard", want "m", "ft" (0.3048 m) or "us-ft" (1200/3937 m)
}

func ExampleFillLevel() {
	level, slopeX, slopeY := make([]float64, 2), make([]float64, 2), make([]float64, 2)
	geo.FillLevel(level, slopeX, slopeY, 0.42)
	fmt.Println(level, slopeX, slopeY)
	// Output:
	// [0.42 0.42] [0 0] [0 0]
}

func ExamplePlane_Fill() {
	// A river that falls 1 m in 1 km to the east.
	river := geo.Plane{Level: 31.2, AtX: 512000, AtY: 7012000, SlopeX: -0.001}
	x, y := []float64{512000, 512500}, []float64{7012040, 7012040}
	level, slopeX, slopeY := make([]float64, 2), make([]float64, 2), make([]float64, 2)
	river.Fill(level, slopeX, slopeY, x, y)
	fmt.Println(level, slopeX, slopeY)
	// Output:
	// [31.2 30.7] [-0.001 -0.001] [0 0]
}

func ExamplePolygonIndex_Find() {
	polys, err := geo.ParsePolygons([]byte(`{"type":"Polygon","coordinates":[
		[[0,0],[100,0],[100,80],[0,80],[0,0]],
		[[40,40],[60,40],[60,60],[40,60],[40,40]]]}`))
	if err != nil {
		fmt.Println(err)
		return
	}
	water := geo.NewPolygonIndex(polys)
	found := make([]int32, 3)
	water.Find(found, []float64{10, 50, 150}, []float64{10, 50, 10}) // open water, island, land
	fmt.Println(found)
	// Output:
	// [0 -1 -1]
}

func ExampleParsePolygons() {
	_, err := geo.ParsePolygons([]byte(`{"type":"Polygon","coordinates":[[[0,0],[2,2],[2,0],[0,2],[0,0]]]}`))
	fmt.Println(err)
	// Output:
	// ring 1: edges 1 and 3 cross near 1.000 1.000, want a ring that does not cross itself
}

func ExampleTrajectory_At() {
	t := []float64{100, 101, 102}
	x, y, z := []float64{0, 50, 100}, []float64{0, 0, 2}, []float64{500, 501, 503}
	flight, err := geo.NewTrajectory(t, x, y, z, 1.5)
	if err != nil {
		fmt.Println(err)
		return
	}
	px, py, pz := make([]float64, 2), make([]float64, 2), make([]float64, 2)
	flight.At(px, py, pz, []float64{101.5, 103})
	fmt.Println(px, py, pz)
	// Output:
	// [75 NaN] [1 NaN] [502 NaN]
}

func ExampleNewTrajectory() {
	column := []float64{5, 6, 5.5}
	_, err := geo.NewTrajectory(column, column, column, column, 1)
	var fault *geo.RecordError
	if errors.As(err, &fault) {
		fmt.Printf("flight.csv: line %d: %v\n", fault.Index+2, fault.Err)
	}
	// Output:
	// flight.csv: line 4: time 5.5 comes after 6, want records sorted by time
}

func ExampleTimeScale() {
	adjusted, err := geo.ParseTimeScale("gps-adjusted", 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(adjusted.Time(0))
	fmt.Printf("%.0f\n", adjusted.FromUTC(adjusted.UTC(167264018)))
	// Output:
	// 2011-09-14 01:46:25 +0000 UTC
	// 167264018
}
