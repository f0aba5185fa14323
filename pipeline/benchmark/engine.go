package main

import (
	_ "embed"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
)

// enginePackage is the engine's npm package, pinned so that floors keep their
// meaning.
const (
	enginePackage = "@duckdb/node-api"
	engineVersion = "1.5.6-r.1"
)

//go:embed engine.mjs
var engineScript []byte

// engine runs the script that stands beside the installed package.
type engine struct {
	script  string
	threads int
}

// setting holds the constants of the formula and of the output's columns.
type setting struct {
	Level       float64 `json:"level"`
	Slope       float64 `json:"slope"`
	Temperature float64 `json:"temperature"`
	Salinity    float64 `json:"salinity"`
	NAir        float64 `json:"n_air"`
	NWater      float64 `json:"n_water"`
	NgAir       float64 `json:"ng_air"`
	NgWater     float64 `json:"ng_water"`
	Run         string  `json:"run"` // as wide as bentray's
}

var ofSurvey = setting{
	Level: levelM, Temperature: temperatureC, Salinity: salinityPSU,
	NAir: nAir, NWater: nWater, NgAir: ngAir, NgWater: ngWater, Run: "000000000000",
}

// task is one call of the script; see engine.mjs.
type task struct {
	Do        string  `json:"do"`
	Format    string  `json:"format,omitempty"`
	Input     string  `json:"input"`
	Output    string  `json:"output"`
	GroupRows int64   `json:"groupRows,omitempty"` // of a converted survey; 0 leaves them to the engine
	Every     int64   `json:"every,omitempty"`
	Threads   int     `json:"threads"`
	Setting   setting `json:"setting"`
}

// installEngine puts the package and the script into folder. An error means
// that there is no engine here, and says why.
func installEngine(folder string, threads int) (*engine, error) {
	for _, tool := range []string{"node", "npm"} {
		if _, err := exec.LookPath(tool); err != nil {
			return nil, fmt.Errorf("%s is not installed", tool)
		}
	}
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return nil, err
	}
	install := exec.Command("npm", "install", "--prefix", folder, "--prefer-offline", "--no-audit", "--no-fund",
		"--ignore-scripts", enginePackage+"@"+engineVersion)
	if out, err := install.CombinedOutput(); err != nil {
		return nil, fmt.Errorf("npm cannot install %s: %w\n%s", enginePackage, err, strings.TrimSpace(string(out)))
	}
	script := filepath.Join(folder, "engine.mjs")
	return &engine{script, threads}, os.WriteFile(script, engineScript, 0o644)
}

// run does one task. The seconds are those of the query.
func (e *engine) run(t task) (usage, error) {
	t.Threads, t.Setting = e.threads, ofSurvey
	call, err := json.Marshal(t)
	if err != nil {
		return usage{}, err
	}
	u, out, err := measure(exec.Command("node", e.script, string(call)))
	if err != nil {
		return u, err
	}
	var report struct{ Seconds float64 }
	if err := json.Unmarshal(out, &report); err != nil {
		return u, fmt.Errorf("engine printed %q, want its seconds: %w", out, err)
	}
	u.seconds = report.Seconds
	return u, nil
}
