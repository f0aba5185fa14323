//go:build browser

package page

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"os/exec"
	"strings"
	"testing"
	"time"
)

// browser is a headless Chromium with a page, driven by the Chrome DevTools Protocol over
// its two pipes: messages are JSON, each ends with a zero byte.
type browser struct {
	t       *testing.T
	to      io.Writer
	from    *bufio.Reader
	session string
	last    int
	events  []event
}

// event is a message that the browser sends by itself.
type event struct {
	Method string
	Params json.RawMessage
}

// reply is any message of the browser.
type reply struct {
	ID        int
	SessionID string // of the page that an event is from
	Result    json.RawMessage
	Error     json.RawMessage
	event
}

// openBrowser starts Chromium. Without one the test is skipped.
func openBrowser(t *testing.T) *browser {
	t.Helper()
	program, err := exec.LookPath("chromium")
	if err != nil {
		t.Skip("chromium is not installed (Debian: apt-get install chromium)")
	}
	theirIn, to, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	from, theirOut, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(program, "--headless=new", "--no-sandbox", "--disable-gpu", "--hide-scrollbars", "--remote-debugging-pipe",
		"--disable-background-networking", "--no-first-run", "--user-data-dir="+t.TempDir(), "about:blank")
	cmd.ExtraFiles = []*os.File{theirIn, theirOut} // 3 and 4, as the program expects them
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	_, _ = theirIn.Close(), theirOut.Close()
	b := &browser{t: t, to: to, from: bufio.NewReader(from)}
	t.Cleanup(func() {
		b.t, b.session = t, ""
		b.call("Browser.close", nil, nil)
		_ = cmd.Wait() // it has nothing more to say
	})
	stuck := time.AfterFunc(2*time.Minute, func() { _ = cmd.Process.Kill() })
	t.Cleanup(func() { stuck.Stop() })
	return b
}

// attach opens another page, for a test, and asks for all that it reports.
func (b *browser) attach(t *testing.T) {
	b.t, b.session = t, ""
	var target struct{ TargetID string }
	b.call("Target.createTarget", map[string]any{"url": "about:blank"}, &target)
	var session struct{ SessionID string }
	b.call("Target.attachToTarget", map[string]any{"targetId": target.TargetID, "flatten": true}, &session)
	b.session = session.SessionID
	for _, domain := range []string{"Page", "Network", "Log", "Runtime"} {
		b.call(domain+".enable", nil, nil)
	}
}

// call sends a command and waits for its result; events that come before are kept.
func (b *browser) call(method string, params, result any) {
	b.t.Helper()
	b.last++
	command := map[string]any{"id": b.last, "method": method}
	if params != nil {
		command["params"] = params
	}
	if b.session != "" {
		command["sessionId"] = b.session
	}
	data, err := json.Marshal(command)
	if err != nil {
		b.t.Fatal(err)
	}
	if _, err := b.to.Write(append(data, 0)); err != nil {
		b.t.Fatalf("chromium: %s: %v", method, err)
	}
	for {
		r := b.read(method)
		if r.ID != b.last {
			b.keep(r)
			continue
		}
		if r.Error != nil {
			b.t.Fatalf("chromium: %s: %s", method, r.Error)
		}
		if result != nil {
			if err := json.Unmarshal(r.Result, result); err != nil {
				b.t.Fatalf("chromium: %s: %v", method, err)
			}
		}
		return
	}
}

func (b *browser) read(waiting string) (r reply) {
	b.t.Helper()
	data, err := b.from.ReadBytes(0)
	if err != nil {
		b.t.Fatalf("chromium: waiting for %s: %v", waiting, err)
	}
	if err := json.Unmarshal(data[:len(data)-1], &r); err != nil {
		b.t.Fatalf("chromium: %s: %v", data, err)
	}
	return r
}

// keep keeps an event of this page.
func (b *browser) keep(r reply) {
	if r.SessionID == b.session {
		b.events = append(b.events, r.event)
	}
}

// open loads a file and waits until all of it is there.
func (b *browser) open(path string) {
	b.t.Helper()
	b.events = nil
	b.call("Page.navigate", map[string]any{"url": "file://" + path}, nil)
	for {
		for _, e := range b.events {
			if e.Method == "Page.loadEventFired" {
				return
			}
		}
		b.keep(b.read("the page to load"))
	}
}

// evaluate runs an expression in the page and reads its value.
func (b *browser) evaluate(expression string, value any) {
	b.t.Helper()
	var got struct {
		Result           struct{ Value json.RawMessage }
		ExceptionDetails json.RawMessage
	}
	b.call("Runtime.evaluate", map[string]any{"expression": expression, "returnByValue": true, "awaitPromise": true}, &got)
	if got.ExceptionDetails != nil {
		b.t.Fatalf("%s: %s", expression, got.ExceptionDetails)
	}
	if err := json.Unmarshal(got.Result.Value, value); err != nil {
		b.t.Fatalf("%s: %v", expression, err)
	}
}

// requests are the addresses that were asked for, other than the page's own data.
func (b *browser) requests() (list []string) {
	for _, e := range b.events {
		var request struct{ Request struct{ URL string } }
		if e.Method == "Network.requestWillBeSent" && json.Unmarshal(e.Params, &request) == nil && !strings.HasPrefix(request.Request.URL, "data:") {
			list = append(list, request.Request.URL)
		}
	}
	return list
}

// complaints are messages of the console and of the browser about the page.
func (b *browser) complaints() (list []string) {
	for _, e := range b.events {
		switch e.Method {
		case "Log.entryAdded", "Runtime.consoleAPICalled", "Runtime.exceptionThrown":
			list = append(list, fmt.Sprintf("%s: %s", e.Method, e.Params))
		}
	}
	return list
}
