package pipeline

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"bentray/correct"
	"bentray/geo"
	"bentray/io/cloud"
	"bentray/pipeline/job"
)

// cameras are those of a multiview sensor, and what its job says of them.
type cameras struct {
	*geo.Cameras
	centres    correct.Cameras
	visibility *geo.Visibility // who sees a point where the cloud does not say
	rule       string          // its name in view_source: image or angle
	bundle     correct.Bundle  // solve, residual and medium
}

// Columns of a camera file beyond its id and centre, all of them optional.
var cameraColumns = []string{
	timeColumn, "omega", "phi", "kappa", "r11", "r12", "r13", "r21", "r22", "r23", "r31", "r32", "r33",
	"focal_px", "width_px", "height_px", "cx_px", "cy_px",
}

// readCameras reads the cameras of a multiview sensor.
func (s *survey) readCameras(sn *sensor, path string) error {
	t, err := s.readSheet(path, sheetColumns{needed: []string{"x", "y", "z"}, optional: cameraColumns, texts: []string{"camera"}})
	if err != nil {
		return err
	}
	ids, ok := t.texts["camera"]
	if !ok {
		return errors.New("no column \"camera\", want the camera's id in it, as the column views of the clouds has it")
	}
	n := t.numbers
	s.scaleXYZ(correct.XYZ{X: n["x"], Y: n["y"], Z: n["z"]}, s.plan, s.height)
	r := geo.CameraRecords{
		ID: ids, X: n["x"], Y: n["y"], Z: n["z"], Omega: n["omega"], Phi: n["phi"], Kappa: n["kappa"],
		FocalPx: n["focal_px"], WidthPx: n["width_px"], HeightPx: n["height_px"], CxPx: n["cx_px"], CyPx: n["cy_px"], UTC: t.utc,
	}
	for k := range r.R {
		r.R[k] = n[fmt.Sprintf("r%d%d", k/3+1, k%3+1)]
	}
	list, err := geo.NewCameras(r)
	if err != nil {
		return err
	}
	sn.cameras, err = newCameras(list, &sn.Rays)
	return err
}

// newCameras makes of the job's rays what the kernel is told.
func newCameras(list *geo.Cameras, r *job.Rays) (c *cameras, err error) {
	c = &cameras{Cameras: list, rule: job.Angle}
	c.centres.X, c.centres.Y, c.centres.Z = list.Centres()
	c.centres.Rotation = list.Rotations()
	c.bundle = correct.Bundle{FromWater: r.CameraMedium == job.InWater}
	switch residual := r.Residual; {
	case residual == job.Image && r.Solve == job.Invert && !list.HasRotations():
		return nil, errors.New("the cameras have no rotations, which residual = \"image\" needs; give omega, phi, kappa or r11 to r33, or use residual = \"angle\"")
	case residual == job.Image || residual == "" && list.HasRotations():
		c.bundle.Residual = correct.Image
	case residual == job.Equal:
		c.bundle.Residual = correct.Equal
	default:
		c.bundle.Residual = correct.Angle
	}
	c.bundle.Solve = map[string]correct.Solve{job.Invert: correct.Invert, job.Intersect: correct.Intersect, job.Average: correct.Average}[r.Solve]
	if list.HasImages() {
		c.rule = job.Image
		c.visibility, err = list.ByImage()
	} else {
		c.visibility, err = list.ByAngle(r.MaxOffNadir*radiansPerDegree, c.bundle.FromWater)
	}
	return c, err
}

// checkImages refuses cameras whose images cannot tell which points they show, though
// they have rotations.
func (s *survey) checkImages() error {
	for _, sn := range s.sensors {
		if sn.isMultiview() && sn.cameras.HasRotations() && !sn.cameras.HasImages() {
			return fmt.Errorf("no column \"views\" tells which cameras saw a point, and %s has rotations but no focal_px, width_px and height_px to tell it from the images; give one or the other, or leave the rotations out to take all cameras within max_off_nadir", sn.Rays.Cameras)
		}
	}
	return nil
}

// checkSides refuses cameras that are all on the wrong side of one constant level.
func (s *survey) checkSides() error {
	if !s.surface.isConstant() {
		return nil
	}
	for _, sn := range s.sensors {
		if !sn.isMultiview() {
			continue
		}
		low, high := sn.cameras.Bounds()
		z := fmt.Sprintf("z of the cameras is %.3f to %.3f, and the water level %g", low[2]/s.height, high[2]/s.height, *s.job.Surface.Level)
		switch {
		case !sn.looksUp() && high[2] <= s.surface.level:
			return fmt.Errorf("%s: no camera is above the water: %s; are both in one vertical reference and unit? (camera_medium = \"water\" is for cameras under water)", sn.Rays.Cameras, z)
		case sn.looksUp() && low[2] >= s.surface.level:
			return fmt.Errorf("%s: no camera is below the water, as camera_medium = \"water\" says: %s; are both in one vertical reference and unit?", sn.Rays.Cameras, z)
		}
	}
	return nil
}

// checkViews refuses a text of camera ids that no sensor's cameras all are.
func (s *survey) checkViews(text []byte) error {
	var err error
	for _, sn := range s.sensors {
		if !sn.isMultiview() {
			continue
		}
		if err = sn.cameras.CheckViews(text); err == nil {
			return nil
		}
	}
	return fmt.Errorf("has an unknown id: %w", err)
}

// appendViews appends the cameras that saw a point: those that the cloud names,
// else those that the sensor's rule finds.
func (sn *sensor) appendViews(dst []int32, w *workspace, c *cloud.Chunk, r *reading, i int) ([]int32, error) {
	if r.views < 0 {
		return sn.cameras.visibility.AppendSeeing(dst, w.raw.X[i], w.raw.Y[i], w.raw.Z[i]), nil
	}
	return sn.cameras.AppendViews(dst, c.Texts[r.views].At(i))
}

// viewRule names the rule by which the sensor's cameras see points.
func (sn *sensor) viewRule() string {
	if sn.cameras == nil {
		return ""
	}
	return sn.cameras.rule
}

// viewRules names the rules of all sensors' cameras.
func (s *survey) viewRules() string {
	var rules []string
	for _, sn := range s.sensors {
		if rule := sn.viewRule(); rule != "" && !slices.Contains(rules, rule) {
			rules = append(rules, rule)
		}
	}
	return strings.Join(rules, " and ")
}

// residualName names the rule that the raw cloud's rays are taken to be intersected by.
func (sn *sensor) residualName() string {
	return map[correct.Residual]string{correct.Image: job.Image, correct.Angle: job.Angle, correct.Equal: job.Equal}[sn.cameras.bundle.Residual]
}

func (s *survey) hasMultiview() bool { return slices.ContainsFunc(s.sensors, (*sensor).isMultiview) }
