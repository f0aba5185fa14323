package geo_test

import (
	"errors"
	"fmt"

	"bentray/geo"
)

func ExampleGauges_Add() {
	// Two gauges 1 km apart, whose zero is 0.5 m below that of the cloud's heights.
	gauges, err := geo.NewGauges(geo.GaugeRecords{
		Name: []string{"mole", "mole", "mole", "weir", "weir"}, UTC: []float64{0, 600, 1200, 0, 600},
		Level: []float64{1.0, 1.2, 1.3, 2.0, 2.2},
		X:     []float64{512000, 512000, 512000, 513000, 513000}, Y: []float64{7012000, 7012000, 7012000, 7012000, 7012000},
	}, -0.5, 3600)
	if err != nil {
		fmt.Println(err)
		return
	}
	level := make([]float64, 3)
	gauges.Add(level, []float64{512000, 512250, 512250}, []float64{7012000, 7012000, 7012000}, []float64{300, 300, 1200})
	fmt.Printf("%.2f, the last from %d gauge of %d\n", level, gauges.Recording(1200), gauges.Len())
	// Output:
	// [0.60 0.85 0.80], the last from 1 gauge of 2
}

func ExampleNewGauges() {
	_, err := geo.NewGauges(geo.GaugeRecords{UTC: []float64{1700000000, 1700000600, 1700000600}, Level: []float64{0, 0.1, 0.2}}, 0, 3600)
	var fault *geo.RecordError
	if errors.As(err, &fault) {
		fmt.Printf("tide.csv: line %d: %v\n", fault.Index+2, fault.Err)
	}
	// Output:
	// tide.csv: line 4: gauge: time 1700000600 repeats the one before it, want each time once
}

func ExampleSeparation_Add() {
	separation, err := geo.NewSeparation([]float64{0, 1000, 0, 1000}, []float64{0, 0, 500, 500}, []float64{46.0, 46.1, 46.2, 46.3})
	if err != nil {
		fmt.Println(err)
		return
	}
	level, slopeX, slopeY := []float64{0.4, 0.4}, []float64{0, 0}, []float64{0, 0}
	separation.Add(level, slopeX, slopeY, []float64{500, 1500}, []float64{250, 250})
	fmt.Printf("%.2f %.4f %.4f\n", level, slopeX, slopeY)
	// Output:
	// [46.55 NaN] [0.0001 NaN] [0.0004 NaN]
}

func ExampleNewSeparation() {
	_, err := geo.NewSeparation([]float64{0, 10, 20}, []float64{5, 5, 5}, []float64{46, 46, 46})
	fmt.Println(err)
	// Output:
	// separation has 3 columns and 1 rows, want at least 2 of each
}

func ExampleStations_Fill() {
	// A cast of warm water over cold at a pier, and one of mixed water at a buoy.
	stations, err := geo.NewStations(geo.StationRecords{
		Name: []string{"pier", "pier", "pier", "buoy"}, X: []float64{0, 0, 0, 100}, Y: []float64{0, 0, 0, 0},
		Depth: []float64{0, 4, 8, 1}, Temperature: []float64{18, 18, 10, 15}, Salinity: []float64{30, 30, 34, 32},
	}, 3600)
	if err != nil {
		fmt.Println(err)
		return
	}
	x, y, depth := []float64{0, 0, 50}, []float64{0, 0, 0}, []float64{4, 8, 8}
	temperature, salinity := make([]float64, 3), make([]float64, 3)
	stations.Fill(temperature, salinity, []int32{0, 1, 2}, x, y, nil, depth)
	fmt.Printf("%.1f %.1f\n", temperature, salinity)
	// Output:
	// [18.0 16.0 15.5] [30.0 31.0 31.5]
}

func ExampleNewStations() {
	_, err := geo.NewStations(geo.StationRecords{
		Name: []string{"pier", "pier"}, X: []float64{0, 0}, Y: []float64{0, 0},
		Depth: []float64{2.5, 2.5}, Temperature: []float64{18, 17}, Salinity: []float64{30, 30},
	}, 3600)
	fmt.Println(err)
	// Output:
	// record 2: station "pier" has depth 2.5 m twice in one cast, want each depth once
}
