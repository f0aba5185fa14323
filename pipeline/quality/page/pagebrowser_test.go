//go:build browser

package page

import (
	"bytes"
	"encoding/base64"
	"image"
	"image/png"
	"os"
	"path/filepath"
	"regexp"
	"testing"
)

func writePage(t *testing.T, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "report.html")
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// TestBrowser opens pages in one browser, each as a tab of its own.
func TestBrowser(t *testing.T) {
	b := openBrowser(t)
	for _, c := range []struct {
		name string
		test func(*browser, *testing.T)
	}{
		{"loads nothing, complains of nothing, and is drawn", (*browser).testContent},
		{"prints on A4 with whole pictures", (*browser).testPrint},
		{"names run nothing", (*browser).testNames},
		{"faults are noticed", (*browser).testNotices},
	} {
		t.Run(c.name, func(t *testing.T) {
			b.attach(t)
			c.test(b, t)
		})
	}
}

// The page asks for nothing but itself, and the browser has nothing to say of it.
func (b *browser) testContent(t *testing.T) {
	path := writePage(t, render(t, full()))
	b.open(path)
	b.settle()
	if got := b.requests(); len(got) != 1 || got[0] != "file://"+path {
		t.Errorf("the page asks for %q, want itself alone", got)
	}
	for _, complaint := range b.complaints() {
		t.Error(complaint)
	}
	var title string
	if b.evaluate("document.title", &title); title != "Quality of true" {
		t.Errorf("the title is %q", title)
	}
	b.checkPictures(8)
}

// settle lets the page paint twice, so that all it asks for is asked for.
func (b *browser) settle() {
	var done bool
	b.evaluate("new Promise(r => requestAnimationFrame(() => requestAnimationFrame(() => r(true))))", &done)
}

type rectangle struct{ X, Y, Width, Height float64 }

// checkPictures wants so many pictures, each with shapes, of a size to be seen, and
// with ink on paper.
func (b *browser) checkPictures(want int) {
	b.t.Helper()
	var pictures []struct {
		rectangle
		Label  string
		Shapes int
		Frame  rectangle // of what is drawn, in its own units
	}
	b.evaluate(`[...document.querySelectorAll("figure svg")].map(s => { const r = s.getBoundingClientRect(), f = s.getBBox();
		return {x: r.x + scrollX, y: r.y + scrollY, width: r.width, height: r.height, label: s.getAttribute("aria-label"),
		shapes: s.querySelectorAll("path, image").length, frame: {x: f.x, y: f.y, width: f.width, height: f.height}} })`, &pictures)
	if len(pictures) != want {
		b.t.Errorf("there are %d pictures, want %d", len(pictures), want)
	}
	for _, p := range pictures {
		if p.Width < 500 || p.Height < 100 || p.Shapes < 10 || p.Frame.Width < 400 || p.Frame.Height < 100 || p.Label == "" {
			b.t.Errorf("picture %+v is not drawn", p)
		}
		if share := inked(b.shot(p.rectangle)); share < 0.01 || share > 0.9 {
			b.t.Errorf("%.1f %% of picture %q is not white", 100*share, p.Label)
		}
	}
}

// shot is what the screen shows of a part of the page.
func (b *browser) shot(r rectangle) image.Image {
	b.t.Helper()
	var shot struct{ Data string }
	b.call("Page.captureScreenshot", map[string]any{
		"captureBeyondViewport": true, "clip": map[string]any{"x": r.X, "y": r.Y, "width": r.Width, "height": r.Height, "scale": 1},
	}, &shot)
	data, err := base64.StdEncoding.DecodeString(shot.Data)
	if err != nil {
		b.t.Fatal(err)
	}
	picture, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		b.t.Fatal(err)
	}
	return picture
}

// inked is the share of pixels that are not white.
func inked(m image.Image) float64 {
	bounds, dark := m.Bounds(), 0
	for y := bounds.Min.Y; y < bounds.Max.Y; y++ {
		for x := bounds.Min.X; x < bounds.Max.X; x++ {
			if r, g, b, _ := m.At(x, y).RGBA(); r+g+b < 3*0xf000 {
				dark++
			}
		}
	}
	return float64(dark) / float64(bounds.Dx()*bounds.Dy())
}

// The sheets are A4, and no picture is higher than one, nor may be cut.
func (b *browser) testPrint(t *testing.T) {
	b.open(writePage(t, render(t, full())))
	var sheet struct{ Data string }
	b.call("Page.printToPDF", map[string]any{"preferCSSPageSize": true, "printBackground": true}, &sheet)
	pdf, err := base64.StdEncoding.DecodeString(sheet.Data)
	if err != nil {
		t.Fatal(err)
	}
	boxes := regexp.MustCompile(`/MediaBox \[0 0 59[45][.\d]* 84[12][.\d]*\]`).FindAll(pdf, -1) // 210 mm by 297 mm are 595.3 by 841.9 points
	if all := bytes.Count(pdf, []byte("/MediaBox")); len(boxes) != all || all < 4 || all > 12 {
		t.Errorf("%d of %d sheets are A4, want all of 4 to 12", len(boxes), all)
	}
	wide, high := 180/25.4*96, 265/25.4*96 // of the text on a sheet, CSS pixels
	b.call("Emulation.setEmulatedMedia", map[string]any{"media": "print"}, nil)
	b.call("Emulation.setDeviceMetricsOverride", map[string]any{"width": int(wide), "height": int(high), "deviceScaleFactor": 1, "mobile": false}, nil)
	var figures []struct {
		Height float64
		Break  string
	}
	b.evaluate(`[...document.querySelectorAll("figure")].map(f => ({height: f.getBoundingClientRect().height, break: getComputedStyle(f).breakInside}))`, &figures)
	for i, f := range figures {
		if f.Height > high || f.Break != "avoid" {
			t.Errorf("figure %d is %.0f pixels high of %.0f, and may break: %s", i, f.Height, high, f.Break)
		}
	}
	var wider bool
	if b.evaluate("document.documentElement.scrollWidth > innerWidth", &wider); wider {
		t.Error("the page is wider than the sheet")
	}
}

// What the tests above look for is seen where it is.
func (b *browser) testNotices(t *testing.T) {
	b.open(writePage(t, `<!DOCTYPE html><img hidden src="http://127.0.0.1:9/pixel.png"><figure><svg viewBox="0 0 500 100" aria-label="empty"></svg></figure><script>console.error("no")</script>`))
	b.settle()
	if got := b.requests(); len(got) != 2 {
		t.Errorf("the page asks for %q, want the page and a pixel", got)
	}
	if len(b.complaints()) == 0 {
		t.Error("an error of the console is not seen")
	}
	if share := inked(b.shot(rectangle{0, 0, 300, 100})); share > 0.005 {
		t.Errorf("%.1f %% of an empty picture are not white", 100*share)
	}
}

// Evil names run nothing, even where the policy would let them.
func (b *browser) testNames(t *testing.T) {
	r := full()
	r.Raw, r.Check.File = `"><script>document.title = "run"</script>`, `<img src=x onerror="document.title = 'run'">`
	page := regexp.MustCompile(`<meta http-equiv[^>]*>`).ReplaceAllString(render(t, r), "")
	b.open(writePage(t, page))
	b.settle()
	var title string
	if b.evaluate("document.title", &title); title != "Quality of true" {
		t.Errorf("the title is %q: a name was run", title)
	}
	if got := b.requests(); len(got) != 1 {
		t.Errorf("the page asks for %q, want itself alone", got)
	}
}
