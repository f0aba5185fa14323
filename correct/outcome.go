package correct

import "fmt"

// Outcome says what became of a point. Every point has exactly one. Apart from
// Corrected the values stand in order of precedence: of all that apply, the smallest
// is the outcome.
type Outcome uint8

// The outcomes. The packages that know about selections, sensors, extents and
// waters set those that concern them.
const (
	Corrected   Outcome = iota // the true point was computed; the zero value
	Invalid                    // a coordinate is not a finite number
	NotSelected                // left out by the job's selection
	NoRule                     // no sensor matches
	Outside                    // not in the extent of the water
	NoSurface                  // no water surface at the point's plan position
	Dry                        // on the ray origin's side of the surface at its raw plan position
	NoOrigin                   // no ray origin, or one that is not on its side of the surface
	NoWater                    // no temperature and salinity for it
	OutOfRange                 // water outside the range of the index formula
	FewRays                    // seen by fewer than two rays
	Grazing                    // incidence beyond the limit, total reflection, or a point behind a port
	Unsolved                   // no result: not finite, or the rays do not fix one
)

// NumOutcomes is the number of outcomes: every outcome is below it.
const NumOutcomes = Unsolved + 1

var outcomeNames = [...]string{
	Corrected:   "corrected",
	Invalid:     "invalid",
	NotSelected: "not_selected",
	NoRule:      "no_rule",
	Outside:     "outside",
	NoSurface:   "no_surface",
	Dry:         "dry",
	NoOrigin:    "no_origin",
	NoWater:     "no_water",
	OutOfRange:  "out_of_range",
	FewRays:     "few_rays",
	Grazing:     "grazing",
	Unsolved:    "unsolved",
}

// String returns the outcome's name as columns and receipts have it, such as "no_surface".
func (o Outcome) String() string {
	if int(o) < len(outcomeNames) {
		return outcomeNames[o]
	}
	return fmt.Sprintf("outcome %d", uint8(o))
}
