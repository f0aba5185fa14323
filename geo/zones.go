package geo

import (
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"github.com/paulmach/orb"
)

// Zone is water with values of its own, from one feature of a GeoJSON text.
type Zone struct {
	Name     string
	Polygons []orb.Polygon // at least one, checked as by ParsePolygons; they may overlap

	// NaN stands for what the zone does not give: temperature and salinity together,
	// the level, never all three.
	Temperature, Salinity, Level float64 // degrees C, practical, length of the caller's unit
}

// ParseZones reads the zones of a GeoJSON text, in its order: a FeatureCollection or
// one Feature, each a Polygon or a MultiPolygon, which is one zone. A zone has the
// properties name (text, different for each), temperature and salinity (numbers, both
// or neither) and level (number); null is as good as absent, and other properties are
// left aside. Ranges of the values are for the caller to check.
//
// It is an error, with the number of the feature (from 1), if a geometry is none
// that ParsePolygons takes; if the name is missing, blank or that of another zone; if
// a zone has no value, a temperature without a salinity or the reverse; if a value is
// of another type; if a property differs from these only in letter case, or is a number
// under a name that is one slip of the hand from that of a value which is not given.
func ParseZones(data []byte) ([]Zone, error) {
	doc, err := parseText(data)
	if err != nil {
		return nil, err
	}
	switch doc.Type {
	case "FeatureCollection":
		return parseZones(doc.Features)
	case "Feature":
		zone, err := parseZone(doc)
		if err != nil {
			return nil, err
		}
		return []Zone{zone}, nil
	}
	return nil, fmt.Errorf("the text is a %s, want a FeatureCollection or a Feature, whose properties are the zone's values", doc.Type)
}

// parseZones returns the zones of all features.
func parseZones(features []json.RawMessage) ([]Zone, error) {
	if len(features) == 0 {
		return nil, errors.New("no zones: the FeatureCollection has no features")
	}
	zones, numbers := make([]Zone, len(features)), map[string]int{}
	for i, data := range features {
		doc, err := asFeature(data)
		if err == nil {
			zones[i], err = parseZone(doc)
		}
		if err != nil {
			return nil, fmt.Errorf("feature %d: %w", i+1, err)
		}
		name := zones[i].Name
		if first, taken := numbers[name]; taken {
			return nil, fmt.Errorf("feature %d: name is %q, as is that of feature %d, want different names", i+1, name, first)
		}
		numbers[name] = i + 1
	}
	return zones, nil
}

// parseZone returns the zone of a feature.
func parseZone(doc document) (zone Zone, err error) {
	var values properties
	if err := json.Unmarshal(orNull(doc.Properties), &values); err != nil {
		return Zone{}, fmt.Errorf("properties are %s, want an object", doc.Properties)
	}
	if err := values.checkNames(); err != nil {
		return Zone{}, err
	}
	if zone.Name, err = values.name(); err != nil {
		return Zone{}, err
	}
	for i, to := range []*float64{&zone.Temperature, &zone.Salinity, &zone.Level} {
		if *to, err = values.number(zoneKeys[1+i]); err != nil {
			return Zone{}, err
		}
	}
	if err := zone.checkValues(); err != nil {
		return Zone{}, err
	}
	zone.Polygons, err = parseGeometry(doc.Geometry)
	return zone, err
}

// orNull returns a JSON value, null where there is none.
func orNull(data json.RawMessage) []byte {
	if len(data) == 0 {
		return []byte("null")
	}
	return data
}

// checkValues returns what is wrong with which values a zone has.
func (z *Zone) checkValues() error {
	switch warm, salty := !math.IsNaN(z.Temperature), !math.IsNaN(z.Salinity); {
	case warm && !salty:
		return errors.New("temperature stands without salinity, want both or neither")
	case salty && !warm:
		return errors.New("salinity stands without temperature, want both or neither")
	case !warm && math.IsNaN(z.Level):
		return errors.New("no values, want temperature and salinity, or level, or all three")
	}
	return nil
}

// properties are those of a feature.
type properties map[string]json.RawMessage

// zoneKeys are the properties that a zone takes, the name first, then numbers.
var zoneKeys = []string{"name", "temperature", "salinity", "level"}

// checkNames returns an error if a property would be a zone's in other letters.
func (p properties) checkNames() error {
	for _, key := range slices.Sorted(maps.Keys(p)) {
		for _, want := range zoneKeys {
			_, found := p[want]
			switch {
			case found:
			case strings.EqualFold(key, want):
				return fmt.Errorf("property is %q, want it in the letters %q", key, want)
			case isSlip(strings.ToLower(key), want) && isNumber(p[key]):
				return fmt.Errorf("property is %q; did you mean %q?", key, want)
			}
		}
	}
	return nil
}

// isNumber tells whether a JSON value is a number.
func isNumber(data json.RawMessage) bool {
	var v any
	_ = json.Unmarshal(data, &v) // it was read before
	_, is := v.(float64)
	return is
}

// isSlip tells whether a word is another one with one letter too few, too many or
// wrong, or with two neighbours exchanged.
func isSlip(written, word string) bool {
	if len(written) > len(word) {
		written, word = word, written
	}
	same := 0
	for same < len(written) && written[same] == word[same] {
		same++
	}
	rest, of := written[same:], word[same:]
	switch {
	case len(of) == 0:
		return false
	case len(of) > len(rest):
		return rest == of[1:]
	case rest[1:] == of[1:]:
		return true
	}
	return len(of) > 1 && rest[0] == of[1] && rest[1] == of[0] && rest[2:] == of[2:]
}

// name returns the zone's name.
func (p properties) name() (string, error) {
	var name any
	if err := json.Unmarshal(orNull(p["name"]), &name); err != nil {
		return "", err
	}
	switch text, isText := name.(string); {
	case name == nil:
		return "", errors.New("no name, want a text as property name")
	case !isText:
		return "", fmt.Errorf("name is %s, want a text", p["name"])
	case strings.TrimSpace(text) == "":
		return "", errors.New("name is empty, want a text")
	default:
		return text, nil
	}
}

// number returns a number, NaN where there is none or null.
func (p properties) number(key string) (float64, error) {
	var value *float64
	if err := json.Unmarshal(orNull(p[key]), &value); err != nil {
		return 0, fmt.Errorf("%s is %s, want a number", key, p[key])
	}
	if value == nil {
		return math.NaN(), nil
	}
	return *value, nil
}
