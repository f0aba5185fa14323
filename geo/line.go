package geo

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"github.com/paulmach/orb"
)

// ParseLine reads the one line of a GeoJSON text: a LineString, a Feature with one, or
// a FeatureCollection with one such Feature. Coordinates are taken as projected, in
// the units of the text; heights and properties are left aside.
//
// It is an error if the text is not GeoJSON or holds no line or several; if the line
// has fewer than 2 different positions, or one with fewer than 2 numbers or a number beyond 1e12.
func ParseLine(data []byte) ([]orb.Point, error) {
	doc, err := parseText(data)
	if err != nil {
		return nil, err
	}
	if doc.Type == "FeatureCollection" {
		if n := len(doc.Features); n != 1 {
			return nil, fmt.Errorf("the FeatureCollection has %d features, want one, with a LineString", n)
		}
		if doc, err = asFeature(doc.Features[0]); err != nil {
			return nil, fmt.Errorf("feature 1: %w", err)
		}
	}
	if doc.Type == "Feature" {
		if string(orNull(doc.Geometry)) == "null" {
			return nil, errors.New("no geometry, want a LineString")
		}
		if doc, err = parseDocument(doc.Geometry); err != nil {
			return nil, err
		}
	}
	if doc.Type != "LineString" {
		return nil, fmt.Errorf("geometry is a %s, want a LineString", doc.Type)
	}
	return parseLineString(doc.Coordinates)
}

// parseLineString returns the checked positions of a LineString.
func parseLineString(coordinates []byte) ([]orb.Point, error) {
	var line []orb.Point
	if err := decode(coordinates, &line); err != nil {
		return nil, err
	}
	if len(line) < 2 {
		return nil, fmt.Errorf("line has %d positions, want at least 2", len(line))
	}
	for i, p := range line {
		if !(math.Abs(p[0]) <= maxCoordinate && math.Abs(p[1]) <= maxCoordinate) {
			return nil, fmt.Errorf("position %d is %v, want finite projected coordinates", i+1, p)
		}
	}
	if !slices.ContainsFunc(line, func(p orb.Point) bool { return p != line[0] }) {
		return nil, fmt.Errorf("all %d positions of the line are %v, want at least 2 different ones", len(line), line[0])
	}
	return line, nil
}
