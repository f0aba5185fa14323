package geo

import "fmt"

// Unit is the length of one unit of a file in metres: a length in the file times
// the Unit is the length in metres.
type Unit float64

// The units of length that files may have (NIST SP 811, 2008, appendix B.6: the
// foot is exact by definition, the US survey foot is exactly 1200/3937 m).
const (
	Metre  Unit = 1
	Foot   Unit = 0.3048
	USFoot Unit = 1200.0 / 3937
)

// ParseUnit returns the unit with the name "m", "ft" (international foot) or
// "us-ft" (US survey foot). Any other name, also the empty one, is an error.
func ParseUnit(name string) (Unit, error) {
	switch name {
	case "m":
		return Metre, nil
	case "ft":
		return Foot, nil
	case "us-ft":
		return USFoot, nil
	}
	return 0, fmt.Errorf(`unit is %q, want "m", "ft" (0.3048 m) or "us-ft" (1200/3937 m)`, name)
}
