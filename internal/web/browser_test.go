package web

import (
	"bytes"
	"context"
	"flag"
	"fmt"
	"image"
	"image/png"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// screens is where the tests leave pictures of the pages, to be looked at.
var screens = flag.String("screens", "", "leave pictures of the pages in this folder")

// tab is a page of a real browser.
type tab struct {
	t   *testing.T
	ctx context.Context
	own string // what addresses may begin with, other than data

	mu              sync.Mutex
	errors, outside []string
}

// browser opens a window of that size, or skips the test where there is no browser, unless
// IONFALL_BROWSER=required.
func browser(t *testing.T, width, height int, own string) *tab {
	t.Helper()
	path, err := exec.LookPath("chromium")
	if err != nil {
		if os.Getenv("IONFALL_BROWSER") == "required" {
			t.Fatal("no chromium")
		}
		t.Skip("no chromium")
	}
	options := append(chromedp.DefaultExecAllocatorOptions[:], chromedp.ExecPath(path),
		chromedp.NoSandbox, chromedp.DisableGPU, chromedp.Flag("disable-quic", true),
		chromedp.Flag("disable-component-update", true),
		// every name fails, so that a request off the machine shows as an error
		chromedp.Flag("host-resolver-rules", "MAP * ~NOTFOUND , EXCLUDE 127.0.0.1"),
		chromedp.UserDataDir(t.TempDir()), chromedp.WindowSize(width, height))
	ctx, cancel := chromedp.NewExecAllocator(t.Context(), options...)
	t.Cleanup(cancel)
	ctx, cancel = chromedp.NewContext(ctx, chromedp.WithErrorf(func(string, ...any) {}))
	t.Cleanup(cancel)
	ctx, cancel = context.WithTimeout(ctx, 2*time.Minute)
	t.Cleanup(cancel)
	b := &tab{t: t, ctx: ctx, own: own}
	b.must(chromedp.Do(ctx, chromedp.Navigate("about:blank")))
	b.must(chromedp.Listen(ctx, b.note))
	_, err = chromedp.Call(ctx, network.Enable, network.EnableParams{})
	b.must(err)
	return b
}

func (b *tab) must(err error) {
	b.t.Helper()
	if err != nil {
		b.t.Fatal(err)
	}
}

// note keeps errors and requests that go elsewhere.
func (b *tab) note(event any) {
	b.mu.Lock()
	defer b.mu.Unlock()
	switch e := event.(type) {
	case *runtime.EventExceptionThrown:
		b.errors = append(b.errors, fmt.Sprint(e.ExceptionDetails.Text, " ", e.ExceptionDetails.Exception))
	case *runtime.EventConsoleAPICalled:
		if string(e.Type) == "error" {
			b.errors = append(b.errors, fmt.Sprint(e.Args))
		}
	case *network.EventLoadingFailed:
		if !e.Canceled {
			b.errors = append(b.errors, "failed to load: "+e.ErrorText)
		}
	case *network.EventRequestWillBeSent:
		url := e.Request.URL
		if !strings.HasPrefix(url, b.own) && !strings.HasPrefix(url, "data:") &&
			!strings.HasPrefix(url, "blob:") {
			b.outside = append(b.outside, url)
		}
	}
}

// clean fails the test if the page complained or asked for something elsewhere.
func (b *tab) clean() {
	b.t.Helper()
	b.mu.Lock()
	defer b.mu.Unlock()
	if len(b.errors) > 0 || len(b.outside) > 0 {
		b.t.Errorf("errors %v, requests elsewhere %v", b.errors, b.outside)
	}
}

func (b *tab) visit(url string) {
	b.t.Helper()
	b.must(chromedp.Do(b.ctx, chromedp.Navigate(url)))
}

// value evaluates a script.
func value[T any](b *tab, script string) T {
	b.t.Helper()
	v, err := chromedp.Run(b.ctx, chromedp.Evaluate[T](script))
	if err != nil {
		b.t.Fatalf("%s: %v", script, err)
	}
	return v
}

// until waits for a script to say true.
func (b *tab) until(script string) {
	b.t.Helper()
	for deadline := time.Now().Add(20 * time.Second); time.Now().Before(deadline); {
		if value[bool](b, "!!("+script+")") {
			return
		}
		time.Sleep(20 * time.Millisecond)
	}
	b.t.Fatalf("waited in vain for %s; the page says: %.600s; %v", script,
		value[string](b, "document.body.innerText"), b.errors)
}

// picture is a screenshot of the whole page; it is left with the screens under a name.
func (b *tab) picture(name string) image.Image {
	b.t.Helper()
	width := value[float64](b, "document.documentElement.clientWidth")
	height := value[float64](b, "document.documentElement.scrollHeight")
	beyond := true
	shot, err := chromedp.Call(b.ctx, page.CaptureScreenshot, page.CaptureScreenshotParams{
		CaptureBeyondViewport: &beyond,
		Clip:                  &page.Viewport{Width: width, Height: height, Scale: 1},
	})
	b.must(err)
	if *screens != "" {
		b.must(os.WriteFile(filepath.Join(*screens, name+".png"), shot.Data, 0o644))
	}
	img, err := png.Decode(bytes.NewReader(shot.Data))
	b.must(err)
	return img
}

// drawn checks that every figure of the page shows something: pixels of many colours where its
// curves are, not only elements.
func (b *tab) drawn(name string, least int) {
	b.t.Helper()
	img := b.picture(name)
	type place struct {
		ID         string
		X, Y, W, H float64
	}
	places := value[[]place](b, `[...document.querySelectorAll("figure")].map((f) => {
		const r = f.querySelector("svg.figure").getBoundingClientRect();
		return {ID: f.id, X: r.x + scrollX, Y: r.y + scrollY, W: r.width, H: r.height};
	})`)
	if len(places) < least {
		b.t.Errorf("%s: %d figures, want at least %d", name, len(places), least)
	}
	for _, p := range places {
		box := image.Rect(int(p.X), int(p.Y), int(p.X+p.W), int(p.Y+p.H)).Intersect(img.Bounds())
		if box.Dx() < 250 || box.Dy() < 80 {
			b.t.Errorf("%s: %s is %v on the page", name, p.ID, box)
			continue
		}
		if n := inked(img, box); n < 0.004 {
			b.t.Errorf("%s: %s has %.2f %% of its pixels in colour", name, p.ID, 100*n)
		}
	}
}

// inked is the part of the pixels that are neither paper nor grey: those of curves and maps.
func inked(img image.Image, box image.Rectangle) float64 {
	count := 0
	var at func(x, y int) []uint8
	switch p := img.(type) {
	case *image.RGBA:
		at = func(x, y int) []uint8 { return p.Pix[p.PixOffset(x, y):] }
	case *image.NRGBA:
		at = func(x, y int) []uint8 { return p.Pix[p.PixOffset(x, y):] }
	}
	for y := box.Min.Y; y < box.Max.Y; y++ {
		for x := box.Min.X; x < box.Max.X; x++ {
			if c := at(x, y); max(c[0], c[1], c[2])-min(c[0], c[1], c[2]) > 24 {
				count++
			}
		}
	}
	return float64(count) / float64(box.Dx()*box.Dy())
}

// dark makes the page believe that the visitor likes it dark.
func (b *tab) dark(on bool) {
	b.t.Helper()
	v := "light"
	if on {
		v = "dark"
	}
	_, err := chromedp.Call(b.ctx, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
		Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: v}},
	})
	b.must(err)
}

func (b *tab) resize(width, height int64) {
	b.t.Helper()
	_, err := chromedp.Call(b.ctx, emulation.SetDeviceMetricsOverride,
		emulation.SetDeviceMetricsOverrideParams{Width: width, Height: height, DeviceScaleFactor: 1})
	b.must(err)
}

// narrow checks that a page 400 pixels wide need not be moved sideways.
func (b *tab) narrow(name string) {
	b.t.Helper()
	b.resize(400, 800)
	time.Sleep(100 * time.Millisecond) // for the figures to be drawn anew
	if w := value[float64](b, "document.documentElement.scrollWidth"); w > 400 {
		b.t.Errorf("%s: %g pixels wide on a screen of 400: %s", name, w, value[string](b,
			`[...document.querySelectorAll("body *")].filter((e) => e.getBoundingClientRect().right > 401 &&
			!e.closest(".scroll") && !e.closest("svg")).slice(0, 3).map((e) => e.outerHTML.slice(0, 90)).join(" | ")`))
	}
	b.picture(name)
	b.resize(1280, 900)
}

// shade is the lightness of the page's paper, from 0 to 255.
func (b *tab) shade() float64 {
	b.t.Helper()
	return value[float64](b, `(() => {
		const c = getComputedStyle(document.body).backgroundColor.match(/\d+/g).map(Number);
		return (c[0] + c[1] + c[2]) / 3;
	})()`)
}

// accessible runs the rules of axe-core.
func (b *tab) accessible(name string) {
	b.t.Helper()
	source, err := os.ReadFile(filepath.FromSlash("browser/node_modules/axe-core/axe.min.js"))
	if err != nil {
		if os.Getenv("IONFALL_BROWSER") == "required" {
			b.t.Fatal(err)
		}
		b.t.Log("axe-core is not installed: npm ci in internal/web/browser")
		return
	}
	value[bool](b, string(source)+";true")
	found, err := chromedp.Run(b.ctx, chromedp.Evaluate[[]string](`axe.run().then((r) =>
		r.violations.filter((v) => v.impact === "serious" || v.impact === "critical")
		.map((v) => v.id + ": " + v.help + " " + v.nodes.length + " times: " +
			v.nodes.slice(0, 2).map((n) => n.html.slice(0, 160)).join(" | ")))`,
		chromedp.EvalAwaitPromise))
	b.must(err)
	for _, v := range found {
		b.t.Errorf("%s: %s", name, v)
	}
}
