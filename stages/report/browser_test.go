package report

import (
	"context"
	"fmt"
	"net/url"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// One browser serves all tests of the package; each test opens a page of its own in it.
var browser struct {
	once    sync.Once
	context context.Context
	stop    func()
	err     error
}

func TestMain(m *testing.M) {
	code := m.Run()
	if browser.stop != nil {
		browser.stop()
	}
	os.Exit(code)
}

func openBrowser() {
	var path string
	for _, name := range []string{"chromium", "chromium-browser", "google-chrome", "chrome"} {
		if p, err := exec.LookPath(name); err == nil {
			path = p
			break
		}
	}
	if path == "" {
		browser.err = fmt.Errorf("no browser: chromium is not installed")
		return
	}
	options := append(chromedp.DefaultExecAllocatorOptions[:], chromedp.ExecPath(path), chromedp.NoSandbox,
		chromedp.Flag("use-angle", "swiftshader"), chromedp.Flag("enable-unsafe-swiftshader", true), chromedp.Flag("mute-audio", true))
	allocator, end := chromedp.NewExecAllocator(context.Background(), options...)
	ctx, cancel := chromedp.NewContext(allocator)
	browser.context, browser.stop = ctx, func() { cancel(); end() }
	_, browser.err = chromedp.Run(ctx, chromedp.Title())
}

// sample is the page of the sample, made once for all tests that do not change it.
var sample struct {
	once    sync.Once
	content *content
	page    []byte
}

func samplePage(t *testing.T) (*content, []byte) {
	t.Helper()
	sample.once.Do(func() {
		c := sampleContent(t)
		page, _ := render(t, c)
		sample.content, sample.page = c, []byte(page)
	})
	return sample.content, sample.page
}

// tab is a page in the browser with what went wrong on it.
type tab struct {
	t   *testing.T
	ctx context.Context

	mutex    sync.Mutex
	trouble  []string // messages of the console, errors of scripts, broken policies
	requests []string // whatever was asked for besides the page itself
}

// screen is the window that a page is shown in.
type screen struct {
	width, height int64
	dark, still   bool // wishes of the reader: a dark page, less motion
	print         bool
	noScript      bool
}

// visit opens a page in the browser. On a desk without one the test says so and is skipped; it fails where
// HUSHFRAME_BROWSER is "required".
func visit(t *testing.T, page []byte, s screen) *tab {
	t.Helper()
	browser.once.Do(openBrowser)
	if browser.err != nil {
		if os.Getenv("HUSHFRAME_BROWSER") == "required" {
			t.Fatal(browser.err)
		}
		t.Skipf("not tested: %v", browser.err)
	}
	ctx, cancel := chromedp.NewContext(browser.context)
	t.Cleanup(cancel)
	if _, err := chromedp.Run(ctx, chromedp.Title()); err != nil { // the first use must be without a time limit
		t.Fatal(err)
	}
	ctx, stop := context.WithTimeout(ctx, 40*time.Second)
	t.Cleanup(stop)
	file := filepath.Join(t.TempDir(), "page.html")
	if err := os.WriteFile(file, page, 0o600); err != nil {
		t.Fatal(err)
	}
	address := (&url.URL{Scheme: "file", Path: filepath.ToSlash(file)}).String()
	b := &tab{t: t, ctx: ctx}
	err := chromedp.Listen(ctx, func(e any) {
		b.mutex.Lock()
		defer b.mutex.Unlock()
		switch e := e.(type) {
		case *runtime.EventConsoleAPICalled:
			var words []string
			for _, a := range e.Args {
				words = append(words, string(a.Value)+a.Description)
			}
			b.trouble = append(b.trouble, fmt.Sprintf("console: %s: %s", e.Type, strings.Join(words, " ")))
		case *runtime.EventExceptionThrown:
			x := e.ExceptionDetails
			b.trouble = append(b.trouble, fmt.Sprintf("exception: %s %+v", x.Text, x.Exception))
		case *log.EventEntryAdded:
			// The software renderer of a machine without graphics speaks of its own speed when pictures are read back.
			if !strings.Contains(e.Entry.Text, "GPU stall due to ReadPixels") {
				b.trouble = append(b.trouble, "log: "+e.Entry.Text)
			}
		case *network.EventRequestWillBeSent:
			if e.Request.URL != address && !strings.HasPrefix(e.Request.URL, "blob:") && !strings.HasPrefix(e.Request.URL, "data:") {
				b.requests = append(b.requests, e.Request.URL)
			}
		}
	})
	if err != nil {
		t.Fatal(err)
	}
	scheme, motion, media := "light", "no-preference", "screen"
	if s.dark {
		scheme = "dark"
	}
	if s.still {
		motion = "reduce"
	}
	if s.print {
		media = "print"
	}
	call(b, network.Enable, network.EnableParams{})
	call(b, log.Enable, cdp.Empty{})
	call(b, runtime.Enable, cdp.Empty{})
	call(b, emulation.SetDeviceMetricsOverride, emulation.SetDeviceMetricsOverrideParams{Width: s.width, Height: s.height, DeviceScaleFactor: 1, Mobile: s.width < 600})
	call(b, emulation.SetScriptExecutionDisabled, emulation.SetScriptExecutionDisabledParams{Value: s.noScript})
	call(b, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{Media: media, Features: []*emulation.MediaFeature{
		{Name: "prefers-color-scheme", Value: scheme}, {Name: "prefers-reduced-motion", Value: motion}}})
	b.run(chromedp.Navigate(address))
	return b
}

// call sends a command to the page.
func call[P, R any](b *tab, command cdp.Command[P, R], parameters P) {
	b.t.Helper()
	if _, err := chromedp.Call(b.ctx, command, parameters); err != nil {
		b.t.Fatal(err)
	}
}

// run does steps on the page.
func (b *tab) run(steps ...chromedp.Action[chromedp.Void]) {
	b.t.Helper()
	if err := chromedp.Do(b.ctx, steps...); err != nil {
		b.t.Fatal(err)
	}
}

// ask evaluates an expression of the page.
func ask[T any](b *tab, expression string) T {
	b.t.Helper()
	out, err := chromedp.Run(b.ctx, chromedp.Evaluate[T](expression, chromedp.EvalAwaitPromise))
	if err != nil {
		b.t.Fatalf("%s: %v", expression, err)
	}
	return out
}

// until waits for a condition of the page.
func (b *tab) until(expression string) {
	b.t.Helper()
	for end := time.Now().Add(15 * time.Second); ; time.Sleep(20 * time.Millisecond) {
		if ask[bool](b, expression) {
			return
		}
		if time.Now().After(end) {
			b.t.Fatalf("never came true: %s", expression)
		}
	}
}

// clean fails the test if anything went wrong on the page, or anything was asked of a network.
func (b *tab) clean() {
	b.t.Helper()
	b.mutex.Lock()
	defer b.mutex.Unlock()
	for _, x := range b.trouble {
		b.t.Error(x)
	}
	for _, x := range b.requests {
		b.t.Errorf("the page asked for %s", x)
	}
}
