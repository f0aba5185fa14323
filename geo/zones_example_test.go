package geo_test

import (
	"fmt"

	"bentray/geo"
)

const waters = `{"type":"FeatureCollection","features":[
	{"type":"Feature","properties":{"name":"Brook mouth","temperature":9.5,"salinity":0},
	 "geometry":{"type":"Polygon","coordinates":[[[0,0],[100,0],[100,80],[0,80],[0,0]]]}},
	{"type":"Feature","properties":{"name":"Weir pool","level":31.25},
	 "geometry":{"type":"Polygon","coordinates":[[[90,0],[200,0],[200,80],[90,80],[90,0]]]}}]}`

func ExampleParseZones() {
	zones, err := geo.ParseZones([]byte(waters))
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, z := range zones {
		fmt.Println(z.Name, len(z.Polygons), z.Temperature, z.Salinity, z.Level)
	}
	// Output:
	// Brook mouth 1 9.5 0 NaN
	// Weir pool 1 NaN NaN 31.25
}

func ExampleOverlaps() {
	zones, err := geo.ParseZones([]byte(waters))
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, pair := range geo.Overlaps(zones) {
		fmt.Printf("%s overlaps %s\n", zones[pair[0]].Name, zones[pair[1]].Name)
	}
	// Output:
	// Brook mouth overlaps Weir pool
}

func ExampleParseLine() {
	line, err := geo.ParseLine([]byte(`{"type":"LineString","coordinates":[[0,0],[60,10],[140,15]]}`))
	fmt.Println(line, err)
	// Output:
	// [[0 0] [60 10] [140 15]] <nil>
}
