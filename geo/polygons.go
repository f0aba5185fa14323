package geo

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"

	"github.com/paulmach/orb"
)

// document is any GeoJSON object with the members that matter here.
type document struct {
	Type        string
	Features    []json.RawMessage
	Geometry    json.RawMessage
	Properties  json.RawMessage
	Coordinates json.RawMessage
}

// ParsePolygons reads the polygons of a GeoJSON text (RFC 7946): a
// FeatureCollection, a Feature, a Polygon or a MultiPolygon, whose parts become
// polygons of their own. Coordinates are taken as projected, in the units of the
// text; heights and properties are left aside, and a byte order mark is allowed.
//
// It is an error, with the numbers (from 1) of feature, polygon and ring, if the
// text is not GeoJSON or holds no polygon; if a geometry is missing or is of another
// type; if a position has fewer than 2 numbers, or one beyond 1e12; if a ring has
// fewer than 4 positions, is not closed, or crosses itself. A ring may touch itself.
// Holes may touch or overlap each other and the outline.
func ParsePolygons(data []byte) ([]orb.Polygon, error) {
	doc, err := parseText(data)
	if err != nil {
		return nil, err
	}
	switch doc.Type {
	case "FeatureCollection":
		return parseFeatures(doc.Features)
	case "Feature":
		return parseGeometry(doc.Geometry)
	}
	return parsePolygonal(doc)
}

// parseText reads a GeoJSON text.
func parseText(data []byte) (document, error) {
	return parseDocument(bytes.TrimPrefix(data, []byte("\ufeff")))
}

// parseDocument reads one GeoJSON object.
func parseDocument(data []byte) (document, error) {
	var doc document
	if err := json.Unmarshal(data, &doc); err != nil {
		return doc, fmt.Errorf("not GeoJSON: %w", err)
	}
	if doc.Type == "" {
		return doc, errors.New(`not GeoJSON: no "type", want a FeatureCollection, a Feature or a geometry`)
	}
	return doc, nil
}

// parseFeatures returns the polygons of all features.
func parseFeatures(features []json.RawMessage) ([]orb.Polygon, error) {
	if len(features) == 0 {
		return nil, errors.New("no polygons: the FeatureCollection has no features")
	}
	var all []orb.Polygon
	for i, data := range features {
		polys, err := parseFeature(data)
		if err != nil {
			return nil, fmt.Errorf("feature %d: %w", i+1, err)
		}
		all = append(all, polys...)
	}
	return all, nil
}

// parseFeature returns the polygons of one feature.
func parseFeature(data []byte) ([]orb.Polygon, error) {
	doc, err := asFeature(data)
	if err != nil {
		return nil, err
	}
	return parseGeometry(doc.Geometry)
}

// asFeature reads a feature of a collection.
func asFeature(data []byte) (document, error) {
	doc, err := parseDocument(data)
	if err == nil && doc.Type != "Feature" {
		err = fmt.Errorf("type is %q, want Feature", doc.Type)
	}
	return doc, err
}

// parseGeometry returns the polygons of a feature's geometry.
func parseGeometry(data []byte) ([]orb.Polygon, error) {
	if len(data) == 0 || string(data) == "null" {
		return nil, errors.New("no geometry, want a Polygon or MultiPolygon")
	}
	doc, err := parseDocument(data)
	if err != nil {
		return nil, err
	}
	return parsePolygonal(doc)
}

// parsePolygonal returns the checked polygons of a Polygon or MultiPolygon.
func parsePolygonal(doc document) ([]orb.Polygon, error) {
	switch doc.Type {
	case "Polygon":
		return parseSingle(doc.Coordinates)
	case "MultiPolygon":
		return parseMulti(doc.Coordinates)
	}
	return nil, fmt.Errorf("geometry is a %s, want a Polygon or MultiPolygon", doc.Type)
}

// parseSingle returns the checked polygon of a Polygon.
func parseSingle(coordinates []byte) ([]orb.Polygon, error) {
	var poly orb.Polygon
	if err := decode(coordinates, &poly); err != nil {
		return nil, err
	}
	if err := checkPolygon(poly); err != nil {
		return nil, err
	}
	return []orb.Polygon{poly}, nil
}

// parseMulti returns the checked polygons of a MultiPolygon.
func parseMulti(coordinates []byte) ([]orb.Polygon, error) {
	var polys []orb.Polygon
	if err := decode(coordinates, &polys); err != nil {
		return nil, err
	}
	if len(polys) == 0 {
		return nil, errors.New("the MultiPolygon is empty, want polygons")
	}
	for i, poly := range polys {
		if err := checkPolygon(poly); err != nil {
			return nil, fmt.Errorf("polygon %d: %w", i+1, err)
		}
	}
	return polys, nil
}

// decode reads coordinates into nested slices of points.
func decode(coordinates []byte, into any) error {
	if len(coordinates) == 0 {
		return errors.New(`no "coordinates"`)
	}
	if err := checkPositions(coordinates); err != nil {
		return err
	}
	if err := json.Unmarshal(coordinates, into); err != nil {
		return fmt.Errorf("coordinates: %w", err)
	}
	return nil
}

// checkPositions finds what the JSON decoder would fill up with zeros: null, and
// positions with one number. The text is known to be JSON; what else is wrong with
// it the decoder finds.
func checkPositions(coordinates []byte) error {
	position, start, commas := 0, -1, 0
	for i, c := range coordinates {
		switch c {
		case 'n':
			return errors.New("coordinates hold null, want numbers")
		case '[':
			start, commas = i, 0
		case ',':
			commas++
		case ']':
			if start >= 0 && len(bytes.TrimSpace(coordinates[start+1:i])) > 0 {
				position++
				if commas == 0 {
					return fmt.Errorf("position %d of the coordinates has one number, want x and y", position)
				}
			}
			start = -1
		}
	}
	return nil
}
