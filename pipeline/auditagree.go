package pipeline

import (
	"math"
	"strconv"
	"strings"

	"bentray/io/cloud"
)

// agreement says when a number of an output is the computed one.
type agreement struct {
	isText   bool
	decimals int       // that a text has; -1 where it has as many as it takes
	half     float64   // half a unit of them
	slack    float64   // for another processor's rounding
	byClass  []float64 // the numbers, where they go by class
	labels   [][]byte  // the texts, where they go by class, or the names of a label held by row
}

const (
	processorSlack = 1e-9  // what another processor's rounding may make of a length in metres, an angle in degrees or an index
	stepSlack      = meetM // the same where entries or depths are found in steps, of which it may take one more or less
)

// slack is what another processor may make of the survey's numbers.
func (s *survey) slack() float64 {
	if s.surface.curved || s.hasCasts() {
		return stepSlack
	}
	return processorSlack
}

// agree says how the columns agree: the coordinates, then the added ones.
func (c *recheck) agree() {
	for range c.xyz {
		c.columns = append(c.columns, c.byRow(c.layout.Decimals))
	}
	for i := range c.layout.Added {
		switch a := &c.layout.Added[i]; {
		case a.ByClass != nil:
			c.columns = append(c.columns, c.ofClasses(a))
		case a.Type == cloud.Label:
			c.columns = append(c.columns, agreement{labels: c.labels(a.Names)})
		case a.Type == cloud.Count:
			c.columns = append(c.columns, agreement{isText: c.isText})
		default:
			c.columns = append(c.columns, c.byRow(a.Decimals))
		}
	}
}

// labels are texts as they are read again: a text file's without blanks around them.
func (c *recheck) labels(texts []string) (list [][]byte) {
	for _, text := range texts {
		if c.isText {
			text = strings.Trim(text, " \t")
		}
		list = append(list, []byte(text))
	}
	return list
}

// byRow is the agreement of numbers that differ from row to row. In all it is never more
// than a unit of the decimals.
func (c *recheck) byRow(decimals int) agreement {
	if !c.isText {
		return agreement{slack: c.slack()}
	}
	half := 0.5 / math.Pow10(decimals)
	return agreement{isText: true, decimals: decimals, half: half, slack: min(half, c.slack())}
}

// ofClasses is the agreement of values that rows of a class share: in a text they are as
// it has them.
func (c *recheck) ofClasses(a *cloud.Added) agreement {
	g := agreement{isText: c.isText, decimals: -1, slack: processorSlack}
	var texts []string
	for _, v := range a.ByClass {
		number := v.Number
		if c.isText && a.Type != cloud.Label && v.Set {
			number, _ = strconv.ParseFloat(v.Text, 64) // it was formatted as one
		}
		if !v.Set {
			number, v.Text = math.NaN(), ""
		}
		g.byClass, texts = append(g.byClass, number), append(texts, v.Text)
	}
	g.labels = c.labels(texts)
	return g
}

// holds tells whether a number of the output is the computed one. NaN is none.
func (g *agreement) holds(got, want float64) bool {
	if got == want || got != got && want != want {
		return true
	}
	if g.isText && want-want != 0 { // infinite: not written
		return got != got
	}
	const digits = 0x1p-50 // the last ones of a double
	return math.Abs(got-want) <= g.half+g.slack+digits*math.Abs(want)
}

// show writes a computed number as the output should have it.
func (g *agreement) show(v float64) string {
	switch {
	case v-v != 0 && (g.isText || v != v):
		return "empty"
	case g.isText && g.decimals >= 0:
		return strconv.FormatFloat(v, 'f', g.decimals, 64)
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

func showNumber(v float64) string {
	if v != v {
		return "empty"
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

func showText(text []byte) string {
	if len(text) == 0 {
		return "empty"
	}
	return strconv.Quote(string(text))
}
