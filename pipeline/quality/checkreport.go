package quality

// CheckReport compares the corrected cloud with surveyed points. A residual is
// corrected minus check, in VerticalUnit; a depth is water level minus check.
type CheckReport struct {
	File      string `json:"file"`
	Match     string `json:"match"`   // MatchPlane or MatchNearest
	Reach     Number `json:"reach"`   // in plan
	Given     int    `json:"given"`   // points of the file that have coordinates: Count + Unmatched + OnLand
	Ignored   int    `json:"ignored"` // those that have none, or one beyond 1e12
	Count     int    `json:"count"`   // matched, and not on land
	Unmatched int    `json:"unmatched"`
	OnLand    int    `json:"on_land"` // at or above the water, or with dry points alone about them; in no figure
	Residuals
	Scatter Number `json:"scatter"` // of the corrected points about the local planes, the median; NaN of nearest ones

	Slope      Number            `json:"slope"` // of the residual against depth, least squares
	SlopeSigma Number            `json:"slope_sigma"`
	Meaning    string            `json:"meaning"` // of the slope
	ByDepth    []CheckBand       `json:"by_depth"`
	S44        map[string]Number `json:"s44"` // by order, the share (0 to 1) within its TVU
	Warnings   []string          `json:"warnings"`
	Points     []CheckPoint      `json:"-"` // in the order of the file
}

// Residuals sums up differences; what so few do not tell is NaN.
type Residuals struct {
	Bias Number `json:"bias"` // mean
	RMSE Number `json:"rmse"`
	Std  Number `json:"std"` // about the mean, n-1
	P95  Number `json:"p95"` // 95th percentile of the magnitude, linear
}

// CheckBand is the residuals of the check points whose depth is in [From, To).
type CheckBand struct {
	From  Number `json:"from"`
	To    Number `json:"to"`
	Count int    `json:"count"`
	Residuals
}

// CheckPoint is one check point, and what the corrected cloud says there; NaN where
// it is unmatched, on land (the residual) or without a water level.
type CheckPoint struct {
	X, Y, Z   float64
	Corrected float64
	Depth     float64
	Residual  float64
	Scatter   float64 // of the corrected points about their plane, as a standard deviation
	Near      int     // corrected points within reach, as far as they were kept
}

// Ways to match a check point among the corrected points.
const (
	MatchPlane   = "plane"   // a robust plane through the points within reach, at least 6
	MatchNearest = "nearest" // the nearest of them
)
