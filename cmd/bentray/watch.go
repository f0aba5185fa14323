package main

import (
	"fmt"
	"io"
	"log/slog"
	"os"
	"sync"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"

	"bentray/pipeline/receipt"
)

// watcher shows how a run goes on: a bar on a terminal, a line every 30 seconds
// elsewhere, or a log line a file.
type watcher struct {
	log *slog.Logger
	bar *progressbar.ProgressBar

	mu          sync.Mutex
	lines       io.Writer // nil: no lines
	stage       string
	files, done int
	bytes, read int64
	stop        chan struct{}
}

const lineEvery = 30 * time.Second

func newWatcher(w io.Writer, quiet bool, log string) *watcher {
	watch := &watcher{stop: make(chan struct{})}
	switch {
	case log == "json":
		watch.log = slog.New(slog.NewJSONHandler(w, nil))
	case log == "text":
		watch.log = slog.New(slog.NewTextHandler(w, nil))
	case quiet:
	case isTerminal(w):
		watch.bar = newBar(w)
	default:
		watch.lines = w
	}
	return watch
}

func isTerminal(w io.Writer) bool {
	f, ok := w.(*os.File)
	return ok && term.IsTerminal(int(f.Fd()))
}

func newBar(w io.Writer) *progressbar.ProgressBar {
	return progressbar.NewOptions64(-1,
		progressbar.OptionSetWriter(w),
		progressbar.OptionShowBytes(true),
		progressbar.OptionThrottle(100*time.Millisecond),
		progressbar.OptionEnableColorCodes(os.Getenv("NO_COLOR") == ""),
		progressbar.OptionClearOnFinish(),
		progressbar.OptionSetPredictTime(true),
	)
}

// Begin is told that a stage of the work begins, and its size.
func (w *watcher) Begin(stage string, files int, bytes int64) {
	w.mu.Lock()
	defer w.mu.Unlock()
	first := w.files == 0
	w.stage, w.files, w.bytes, w.done, w.read = stage, files, bytes, 0, 0
	if w.bar != nil {
		w.bar.Reset()
		w.bar.ChangeMax64(max(bytes, 1))
		w.bar.Describe(w.progress())
	}
	if w.lines != nil && first {
		go w.everyInterval()
	}
}

// Read is told of input that is done.
func (w *watcher) Read(bytes int64) {
	w.mu.Lock()
	defer w.mu.Unlock()
	w.read += bytes
	if w.bar != nil {
		_ = w.bar.Add64(bytes) // a bar that cannot be drawn is no fault of the run
	}
}

// End is told of a file that is done or has failed.
func (w *watcher) End(f receipt.FileSummary) {
	w.mu.Lock()
	defer w.mu.Unlock()
	w.done++
	if w.bar != nil {
		w.bar.Describe(w.progress())
	}
	if w.log == nil {
		return
	}
	attributes := []any{"input", f.Input, "output", f.Output, "rows", f.Rows.Read, "seconds", f.Seconds}
	if f.Status == receipt.Failed {
		w.log.Error(string(f.Status), append(attributes, "error", f.Error)...)
		return
	}
	for _, caution := range f.Cautions {
		w.log.Warn("caution", "output", f.Output, "caution", caution)
	}
	w.log.Info(string(f.Status), attributes...)
}

// progress says how far the stage has come.
func (w *watcher) progress() string {
	if w.stage != "" {
		return fmt.Sprintf("%s of %s", w.stage, plural(w.files, "file"))
	}
	return fmt.Sprintf("%d of %s", w.done, plural(w.files, "file"))
}

func (w *watcher) everyInterval() {
	ticker := time.NewTicker(lineEvery)
	defer ticker.Stop()
	for {
		select {
		case <-w.stop:
			return
		case <-ticker.C:
			w.mu.Lock()
			fmt.Fprintf(w.lines, "%s, %.0f %% of the input\n", w.progress(), 100*float64(w.read)/float64(max(w.bytes, 1)))
			w.mu.Unlock()
		}
	}
}

// close ends the progress.
func (w *watcher) close() {
	close(w.stop)
	if w.bar != nil && w.files > 0 {
		_ = w.bar.Finish()
	}
}
