package web

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/chromedp"

	"ionfall/internal/invented"
	"ionfall/internal/report"
	"ionfall/internal/store"
)

// written is the report of an invented run as a file.
func written(t *testing.T, name string, o invented.Options) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), name)
	if err := invented.Run(dir, o); err != nil {
		t.Fatal(err)
	}
	r, err := report.Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	text, err := report.Page([]*report.Run{r})
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(dir, report.File)
	if err := os.WriteFile(path, text, 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

// Goal: the report opens from disk without a network, draws every figure, and can be used with the
// keyboard, on a narrow screen, in the dark, and on paper; accessibility rules hold. Method: a real
// browser with the network off, on a report of one kind of ion and of many, sound and failed.
func TestReportInBrowser(t *testing.T) {
	for name, o := range map[string]invented.Options{
		"one-ion":   {Verdict: store.OK, Ions: []string{"Ar+"}},
		"many-ions": {Verdict: store.Warn, Ions: []string{"Ar+", "ArH+", "H2+", "H3+"}},
		"failed":    {Verdict: store.Fail, Ions: []string{"Ar+"}},
	} {
		t.Run(name, func(t *testing.T) {
			path := written(t, name, o)
			b := browser(t, 1280, 900, "file://")
			_, err := chromedp.Call(b.ctx, network.OverrideNetworkState,
				network.OverrideNetworkStateParams{Offline: true})
			b.must(err)
			b.visit("file://" + filepath.ToSlash(path))
			b.dark(false)
			if got := value[int](b, `document.querySelectorAll("svg .stamp").length`); (got > 0) !=
				(o.Verdict == store.Fail) {
				t.Errorf("%d stamps with verdict %s", got, o.Verdict)
			}
			b.drawn("report-"+name, 12)
			b.accessible("report " + name)
			if name != "one-ion" {
				b.clean()
				return
			}
			light := b.shade()
			b.dark(true)
			if dark := b.shade(); dark > 80 || light < 200 {
				t.Errorf("paper of %g in the light and %g in the dark", light, dark)
			}
			b.drawn("report-"+name+"-dark", 12)
			b.accessible("report in the dark")
			b.dark(false)
			b.narrow("report-" + name + "-narrow")
			reportByKeyboard(b)
			printed(b)
			b.clean()
		})
	}
}

// Goal: the report of a scan opens from disk, is drawn, and accessible. Method: as above, on an
// invented scan.
func TestScanReportInBrowser(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "grid")
	if err := invented.Scan(dir, 60, 0); err != nil {
		t.Fatal(err)
	}
	scan, err := report.OpenScan(dir)
	if err != nil {
		t.Fatal(err)
	}
	text, err := report.ScanPage(scan)
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(dir, report.File)
	if err := os.WriteFile(path, text, 0o600); err != nil {
		t.Fatal(err)
	}
	b := browser(t, 1280, 900, "file://")
	b.visit("file://" + filepath.ToSlash(path))
	b.dark(false)
	b.drawn("report-scan", 2)
	b.accessible("report of a scan")
	b.narrow("report-scan-narrow")
	b.clean()
}

func ptr[T any](v T) *T { return &v }

// reportByKeyboard opens a data table without a mouse.
func reportByKeyboard(b *tab) {
	b.t.Helper()
	b.until(`(document.querySelector("details[data-table] summary").focus(), true)`)
	b.must(chromedp.Do(b.ctx, chromedp.KeyEvent("\r")))
	b.until(`document.querySelectorAll("details[data-table] td").length > 100`)
	// The first thing that Tab reaches leads past the contents.
	value[bool](b, `(document.activeElement.blur(), scrollTo(0, 0), true)`)
}

// printed prints on A4.
func printed(b *tab) {
	b.t.Helper()
	result, err := chromedp.Call(b.ctx, page.PrintToPDF, page.PrintToPDFParams{
		PreferCSSPageSize: ptr(true), PrintBackground: ptr(true),
	})
	b.must(err)
	if !bytes.HasPrefix(result.Data, []byte("%PDF")) || len(result.Data) < 50_000 {
		b.t.Errorf("printed %d bytes %.8q", len(result.Data), result.Data)
	}
	if *screens != "" {
		b.must(os.WriteFile(filepath.Join(*screens, "report.pdf"), result.Data, 0o644))
	}
}

// reach scrolls until no figure is waiting any more.
func (b *tab) reach() {
	b.t.Helper()
	b.until(`(() => {
		const next = document.querySelector(".waiting");
		if (next) next.scrollIntoView();
		else scrollTo(0, 0);
		return !next;
	})()`)
}

// Goal: the viewer lists, shows, compares and follows runs, with mouse and keyboard, and keeps to
// its own address. Method: a real browser on a sound run, a failed one, and one in progress.
func TestViewerInBrowser(t *testing.T) {
	root := results(t)
	measuredBeside(t, filepath.Join(root, "sound"))
	s := viewed(t, root, nil)
	address, err := s.Address()
	if err != nil {
		t.Fatal(err)
	}
	b := browser(t, 1280, 900, site(s))
	b.visit(address)
	b.until(`document.querySelectorAll(".list tbody tr").length === 3`)
	if got := value[string](b, "location.href"); got != site(s)+"/#/" {
		t.Errorf("the token is left in the address: %s", got)
	}
	b.dark(false)
	b.accessible("list")
	b.narrow("viewer-list-narrow")
	b.picture("viewer-list")

	b.until(`(document.querySelector('a[href="#/run/sound"]').click(), true)`)
	b.until(`document.querySelectorAll("figure").length >= 1`)
	b.reach()
	b.drawn("viewer-run", 13)
	b.accessible("run")
	measuredIsShown(b)
	viewerByKeyboard(b)
	viewerByMouse(b)
	b.dark(true)
	if got := b.shade(); got > 80 {
		t.Errorf("paper of %g in the dark", got)
	}
	b.drawn("viewer-run-dark", 12)
	b.accessible("run in the dark")
	b.dark(false)
	b.narrow("viewer-run-narrow")

	value[bool](b, `(location.hash = "#/compare/sound&failed", true)`)
	b.until(`document.querySelector("h1").textContent.includes("2 runs")`)
	b.reach()
	b.drawn("viewer-compare", 12)
	b.accessible("comparison")
	failedIsMarked(b)

	value[bool](b, `(location.hash = "#/run/going", true)`)
	b.until(`document.querySelector(".progress")?.textContent.includes("period 12")`)
	b.accessible("run in progress")
	b.clean()
}

// measuredBeside gives a run an invented measurement to stand beside.
func measuredBeside(t *testing.T, dir string) {
	t.Helper()
	unknown := store.Number(math.NaN())
	err := report.KeepBeside(dir, report.Beside{
		Name: "mid-gap", Sweeps: "sweeps.csv", Where: "20 mm from the powered electrode",
		Verdict: "They <disagree> in one of two.",
		Rows: []report.BesideRow{
			{
				Label: "electron density", Unit: "1/m3", Measured: report.BesideValue{Value: 3e15, SE: 3e13},
				Simulated: report.BesideValue{Value: 3.3e15, SE: 4e13}, Sigma: 6,
			},
			{
				Label: "plasma potential", Unit: "V",
				Measured:  report.BesideValue{Value: unknown, SE: unknown, Reason: "no knee"},
				Simulated: report.BesideValue{Value: 60, SE: 0.1}, Sigma: unknown,
			},
		},
		Cautions: []string{"an invented caution"},
		Figures: []report.Figure{{
			Title: "characteristic of the probe mid-gap",
			X:     report.Axis{Name: "voltage_V", Label: "voltage", Unit: "V"},
			Y:     report.Axis{Name: "current_A", Label: "current", Unit: "A"},
			Series: []report.Series{
				{
					Label: "measured", Run: -1, Dots: true, X: report.Numbers{0, 1, 2},
					Y: report.Numbers{1, 2.2, 3}, SE: report.Numbers{0.1, 0.1, 0.1},
				},
				{
					Label: "simulated", X: report.Numbers{0, 1, 2}, Y: report.Numbers{1.1, 2.1, 3.1},
				},
			},
		}},
	})
	if err != nil {
		t.Fatal(err)
	}
}

// measuredIsShown checks the section of the measurement: its table, sentence, caution and figure.
func measuredIsShown(b *tab) {
	b.t.Helper()
	text := value[string](b, `[...document.querySelectorAll("section")].find((s) =>
		s.querySelector("h2")?.textContent === "Does it agree with what was measured?")?.innerText ?? ""`)
	for _, want := range []string{
		"mid-gap", "They <disagree> in one of two.", "sweeps.csv, 20 mm from the powered electrode",
		"electron density", "(3.000 ± 0.030) × 10", "(3.300 ± 0.040) × 10", "+6.0", "no knee",
		"an invented caution",
	} {
		if !strings.Contains(text, want) {
			b.t.Errorf("what was measured: no %q in %q", want, text)
		}
	}
	if !value[bool](b, `[...document.querySelectorAll("figure")].some((f) =>
		f.textContent.includes("characteristic of the probe"))`) {
		b.t.Error("what was measured has no figure")
	}
}

// viewerByKeyboard reads values, zooms and changes the scale.
func viewerByKeyboard(b *tab) {
	b.t.Helper()
	const plot = `document.querySelector("#f-ion-energy-grounded .plot")`
	value[bool](b, `(`+plot+`.focus(), true)`)
	b.must(chromedp.Do(b.ctx, chromedp.KeyEvent("\u0303\u0303")))
	before := value[string](b, `document.querySelector("#f-ion-energy-grounded svg").innerHTML`)
	press := func(key string) {
		value[bool](b, plot+`.dispatchEvent(new KeyboardEvent("keydown", {key: "`+key+
			`", bubbles: true, cancelable: true})) || true`)
	}
	press("ArrowRight")
	b.until(`/Ar\+ .* ± .*eV/.test(document.querySelector("#f-ion-energy-grounded output").textContent)`)
	for _, key := range []string{"+", "l"} {
		press(key)
		now := value[string](b, `document.querySelector("#f-ion-energy-grounded svg").innerHTML`)
		if now == before {
			b.t.Errorf("key %s changes nothing", key)
		}
		before = now
	}
	press("0")
	press("l")
}

// viewerByMouse drags out a part of a figure.
func viewerByMouse(b *tab) {
	b.t.Helper()
	const figure = `document.querySelector("#f-potential svg")`
	before := value[string](b, figure+`.innerHTML`)
	value[bool](b, `(() => {
		const hit = document.querySelector("#f-potential .hit");
		hit.setPointerCapture = () => {};
		const r = hit.getBoundingClientRect();
		const at = (type, x) => hit.dispatchEvent(new PointerEvent(type,
			{clientX: r.left + x * r.width, clientY: r.top + 30, pointerId: 1, bubbles: true}));
		at("pointermove", 0.2);
		at("pointerdown", 0.2);
		at("pointermove", 0.6);
		at("pointerup", 0.6);
		return true;
	})()`)
	if value[string](b, figure+`.innerHTML`) == before {
		b.t.Error("dragging changes nothing")
	}
	b.until(`document.querySelector("#f-potential output").textContent.includes("potential")`)
}

// failedIsMarked: in a comparison, every figure and table that shows the failed run says so.
func failedIsMarked(b *tab) {
	b.t.Helper()
	bad := value[[]string](b, `[...document.querySelectorAll("figure")].filter((f) => {
		const other = f.querySelector("h3").textContent.endsWith(", sound");
		return !other && !(f.classList.contains("failed") && f.querySelector(".stamp"));
	}).map((f) => f.id)`)
	if len(bad) > 0 {
		b.t.Errorf("figures without the mark of the failed run: %v", bad)
	}
	cells := value[[]string](b, `[...document.querySelectorAll(".answers tbody tr")].map((r) =>
		[...r.cells].slice(1).map((c) => (c.textContent.includes("✗") ? "x" : "-")).join(""))`)
	heads := value[string](b, `document.querySelector(".answers thead").textContent`)
	want := "x-"
	if heads == "" || bytes.Index([]byte(heads), []byte("sound")) < bytes.Index([]byte(heads),
		[]byte("failed")) {
		want = "-x"
	}
	for _, row := range cells {
		if row != want && row != "--" {
			b.t.Errorf("marks of a row of answers: %s, want %s", row, want)
		}
	}
}

// Goal: a run that was given up is not taken for a running one. Method: it is closed while the page
// watches it.
func TestStoppedRun(t *testing.T) {
	root := t.TempDir()
	run, err := invented.Running(filepath.Join(root, "x"), map[string]any{"stage": "settling"})
	if err != nil {
		t.Fatal(err)
	}
	s := viewed(t, root, nil)
	key := keyOf(t, s)
	for _, want := range []string{`"running":true`, `"stopped":true`} {
		if a := ask(t, "GET", site(s)+"/api/list", "", key); !strings.Contains(a.body, want) {
			t.Errorf("got %s, want %s", a.body, want)
		}
		if err := run.Close(); err != nil {
			t.Fatal(err)
		}
	}
	a := ask(t, "GET", site(s)+"/api/run?id=x", "", key)
	if !strings.Contains(a.body, `"stopped":true`) {
		t.Errorf("the page of the run: %.100s", a.body)
	}
}

// Goal: a finished run shows by itself on the page that watches it. Method: a run in progress
// reports once more and is then finished; the page is not touched.
func TestViewerFollows(t *testing.T) {
	root := t.TempDir()
	run, err := invented.Running(filepath.Join(root, "new"), map[string]any{
		"stage": "settling", "periods": 3, "ion_mean_energy_eV": 20.0,
	})
	if err != nil {
		t.Fatal(err)
	}
	s := viewed(t, root, nil)
	address, err := s.Address()
	if err != nil {
		t.Fatal(err)
	}
	b := browser(t, 1000, 800, site(s))
	b.visit(address)
	b.until(`document.querySelector(".list tbody")?.textContent.includes("period 3")`)
	value[bool](b, `(location.hash = "#/run/new", true)`)
	b.until(`document.querySelector(".progress")?.textContent.includes("period 3")`)
	time.Sleep(20 * time.Millisecond) // so that the file's time differs on coarse clocks
	if err := run.WriteJSON("state.json", map[string]any{
		"stage": "averaging", "periods": 77, "ion_mean_energy_eV": 21.0,
	}); err != nil {
		t.Fatal(err)
	}
	b.until(`document.querySelector(".progress")?.textContent.includes("period 77")`)
	o := invented.Options{Verdict: store.OK, Ions: []string{"Ar+"}}
	if err := invented.Finish(run, "new", o); err != nil {
		t.Fatal(err)
	}
	b.until(`document.querySelectorAll("figure").length >= 1`)
	b.clean()
}

// Goal: the map of a scan leads to its points, marks those that failed, and a scan of 500 points
// with long histories opens in under 1.5 s and 100 MB. Method: an invented scan of that size; the
// time from the address to the drawn map, the memory of the page's own objects, and of this process.
func TestScanInBrowser(t *testing.T) {
	root := t.TempDir()
	if err := invented.Scan(filepath.Join(root, "grid"), 500, 20); err != nil {
		t.Fatal(err)
	}
	o := invented.Options{Verdict: store.OK, Ions: []string{"Ar+"}, Periods: 1000}
	if err := invented.Run(filepath.Join(root, "long"), o); err != nil {
		t.Fatal(err)
	}
	s := viewed(t, root, nil)
	address, err := s.Address()
	if err != nil {
		t.Fatal(err)
	}
	b := browser(t, 1280, 900, site(s))
	b.dark(false)
	b.visit(address)
	b.until(`document.querySelectorAll(".list tbody tr").length === 2`)
	value[bool](b, `(location.hash = "#/scan/grid", true)`)
	begun := time.Now()
	b.until(`document.querySelectorAll("svg .point").length === 500`)
	took := time.Since(begun)
	if took > 1500*time.Millisecond {
		t.Errorf("the scan opened in %v, want under 1.5 s", took)
	}
	if n := value[int](b, `document.querySelectorAll("svg .cross").length`); n != 50 {
		t.Errorf("%d points marked as failed, want 50", n)
	}
	if n := value[int](b, `[...document.querySelectorAll("tr.v-fail .value")]
		.filter((c) => c.textContent.includes("✗")).length`); n != 100 {
		t.Errorf("%d cells marked as failed, want 100", n)
	}
	b.drawn("viewer-scan", 1)
	b.accessible("scan")
	b.narrow("viewer-scan-narrow")
	heap := value[float64](b, `performance.memory.usedJSHeapSize`)
	if heap > 100e6 {
		t.Errorf("the page holds %.0f MB, want under 100", heap/1e6)
	}
	value[bool](b, `(document.querySelector("svg .point").dispatchEvent(new MouseEvent("click")), true)`)
	b.until(`document.querySelectorAll("figure").length >= 1`)
	if got := value[string](b, "location.hash"); got != "#/run/grid%2Fpoints%2Fpoint%3D0000" {
		t.Errorf("the point leads to %s", got)
	}
	value[bool](b, `(location.hash = "#/run/long", true)`)
	begun = time.Now()
	b.until(`document.querySelector("h1").textContent.includes("long") &&
		document.querySelectorAll("figure").length >= 1`)
	opened := time.Since(begun)
	if opened > 1500*time.Millisecond {
		t.Errorf("the run opened in %v, want under 1.5 s", opened)
	}
	b.reach()
	t.Logf("scan drawn in %v, run in %v; the page holds %.1f MB", took, opened, heap/1e6)
	b.clean()
}

// Goal: an input is checked and started from the page, and what is wrong with it is told there.
// Method: a launcher that notes what it is told.
func TestStartInBrowser(t *testing.T) {
	l := &fakeLauncher{}
	s := viewed(t, results(t), l)
	address, err := s.Address()
	if err != nil {
		t.Fatal(err)
	}
	b := browser(t, 1000, 800, site(s))
	b.visit(address)
	b.until(`document.querySelectorAll(".list tbody tr").length === 3`)
	b.dark(false)
	value[bool](b, `(location.hash = "#/new/sound", true)`)
	b.until(`document.querySelector("#input")?.value.includes("invented plasma, sound")`)
	b.accessible("start")
	b.narrow("viewer-start-narrow")
	press := func(name string) {
		value[bool](b, `([...document.querySelectorAll("main button")]
			.find((x) => x.textContent === "`+name+`").click(), true)`)
	}
	value[bool](b, `(document.querySelector("#input").value = "nothing", true)`)
	press("Check")
	b.until(`document.querySelector(".problem")?.textContent.includes("want a gap")`)
	value[bool](b, `(document.querySelector("#input").value = "gap: 1 mm",
		document.querySelector("#name").value = "new", true)`)
	press("Check")
	b.until(`document.querySelector(".fine")?.textContent.includes("right")`)
	press("Start")
	b.until(`location.hash === "#/run/new"`)
	if got := l.started.String(); got != "new:gap: 1 mm" {
		t.Errorf("started %q", got)
	}
}
