package quality

import (
	"encoding/json"
	"math"

	"bentray/io/atomicfile"
	"bentray/pipeline/receipt"
)

// Number is a figure; one that is not known is NaN, and null in JSON.
type Number float64

// MarshalJSON writes the number with the digits that give it back, or null.
func (n Number) MarshalJSON() ([]byte, error) {
	if v := float64(n); math.IsNaN(v) || math.IsInf(v, 0) {
		return []byte("null"), nil
	}
	return json.Marshal(float64(n))
}

// Report is all that a comparison found. Lengths in plan are in Unit, heights and
// depths in VerticalUnit. What JSON leaves out is for pictures.
type Report struct {
	Raw            string           `json:"raw"` // as called: a file or a folder
	Corrected      string           `json:"corrected"`
	TwoCorrected   bool             `json:"two_corrected"` // Raw is itself a corrected cloud: the shift is between the two
	Holds          bool             `json:"holds"`         // nothing is missing, nothing changed that should not
	Rows           int64            `json:"rows"`          // of the corrected clouds
	RowsRaw        int64            `json:"rows_raw"`      // = rows + rows_diverted where all holds
	RowsDiverted   int64            `json:"rows_diverted"` // that could not be read, as NAME.rejects.csv has them
	ColumnsChanged []string         `json:"columns_changed"`
	NotCompared    []string         `json:"columns_not_compared"` // stored in other bytes, in a type that cannot be read
	OneSided       []string         `json:"columns_one_sided"`    // of two corrected clouds, untouched columns of one alone
	Findings       []Finding        `json:"findings"`             // the first ones
	FindingCounts  map[string]int64 `json:"finding_counts"`       // of all, by Kind
	Files          []FileReport     `json:"files"`
	Settings       []Setting        `json:"settings"`

	Unit         string `json:"unit"`
	VerticalUnit string `json:"vertical_unit"`
	UnitKnown    bool   `json:"unit_known"` // from a receipt; else metres are taken for granted

	Outcomes    map[string]int64 `json:"outcomes"` // of the corrected clouds
	OutcomesRaw map[string]int64 `json:"outcomes_raw,omitempty"`

	// Over corrected points; of two corrected clouds over those that both corrected.
	Shift       Shift           `json:"shift"`
	ByDepth     []DepthBand     `json:"by_depth"`
	ByIncidence []IncidenceBand `json:"by_incidence"` // empty where no incidence is known
	Histograms  Histograms      `json:"histograms"`
	Map         *Map            `json:"-"` // nil where nothing was corrected
	Sections    []Section       `json:"-"`

	Check    *CheckReport   `json:"check,omitempty"`
	Overlap  *OverlapReport `json:"overlap,omitempty"`
	Notes    []string       `json:"notes"`    // what could not be shown, and why
	Cautions []string       `json:"cautions"` // of the receipts, of the comparison, and on use
}

// WriteJSON writes the report's figures, whole or not at all. Numbers are not rounded.
func (r *Report) WriteJSON(path string) error {
	data, err := json.MarshalIndent(r, "", "  ")
	if err != nil {
		return err
	}
	return atomicfile.Write(path, append(data, '\n'))
}

// FileReport is one pair of files.
type FileReport struct {
	Name         string `json:"name"` // of a corrected file, as below its folder
	Rows         int64  `json:"rows"`
	RowsRaw      int64  `json:"rows_raw"`
	RowsDiverted int64  `json:"rows_diverted"`
	Holds        bool   `json:"holds"`
	Error        string `json:"error,omitempty"` // why the comparison ended early
	Run          string `json:"run,omitempty"`   // fingerprint; this and what follows as the receipt has it
	InputSHA256  string `json:"input_sha256,omitempty"`
	OutputSHA256 string `json:"output_sha256,omitempty"`
}

// Setting is what made some of the files, as their receipts have it.
type Setting struct {
	Run       string                `json:"run"`
	Program   string                `json:"program"`
	Job       json.RawMessage       `json:"job"`
	Auxiliary []receipt.Input       `json:"auxiliary"` // files besides the cloud
	Ranges    map[string][2]float64 `json:"ranges"`    // least and greatest over the corrected points of these files
	Files     int                   `json:"files"`
}

// Shift sums up how far points moved.
type Shift struct {
	Count  int64  `json:"count"`
	MeanDZ Number `json:"mean_dz"` // height, positive up
	RMSDZ  Number `json:"rms_dz"`
	MaxDZ  Number `json:"max_dz"`  // greatest magnitude
	MeanDH Number `json:"mean_dh"` // in plan
	RMSDH  Number `json:"rms_dh"`
	MaxDH  Number `json:"max_dh"`
}

// DepthBand is the shift of the points whose depth is in [From, To).
type DepthBand struct {
	From Number `json:"from"`
	To   Number `json:"to"`
	Shift
}

// IncidenceBand is the shift of the points whose incidence, in degrees, is in
// [From, To).
type IncidenceBand struct {
	From Number `json:"from"`
	To   Number `json:"to"`
	Shift
	MeanDepth Number `json:"mean_depth"`
}

// Histograms count corrected points by shift and depth; nil where there is none.
type Histograms struct {
	DZ    *Histogram `json:"dz"`
	DH    *Histogram `json:"dh"`
	Depth *Histogram `json:"depth"`
}

// Histogram counts values: Counts[i] those in [From + i Width, From + (i+1) Width).
type Histogram struct {
	From   Number  `json:"from"`
	Width  Number  `json:"width"`
	Counts []int64 `json:"counts"`
}

// Map holds means of the shift in square cells, row by row from the south-west.
// Cells without points have Count 0 and NaN.
type Map struct {
	X, Y       float64 // south-west corner
	Cell       float64 // side
	Cols, Rows int     // at most MapSide
	Count      []int64
	MeanDZ     []float64
	MeanDH     []float64
}

// Section is a straight cut through the cloud: sampled points near a line.
type Section struct {
	Name         string // along or across the cloud's main axis, and where
	X0, Y0       float64
	X1, Y1       float64
	Halfwidth    float64        // points lie at most so far off the line
	SampledShare float64        // of the points there, how many are shown
	Points       []SectionPoint // by At
}

// SectionPoint is one corrected point of a section.
type SectionPoint struct {
	At        float64 // along the line, from X0, Y0
	Corrected float64 // height
	RawAt     float64 // both as they were
	Raw       float64
	Level     float64 // of the water; NaN where there is none
}
