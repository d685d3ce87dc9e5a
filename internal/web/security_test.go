package web

import (
	"net"
	"net/http"
	"net/url"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/invented"
	"ionfall/internal/store"
)

// Goal: nobody but the pages that were let in sees results. Method: every address of the API
// without a key, with a wrong one, and as other schemes of authorization.
func TestKeyIsNeeded(t *testing.T) {
	s := viewed(t, results(t), &fakeLauncher{})
	paths := map[string]string{
		"/api/list": "GET", "/api/run?id=sound": "GET", "/api/figures?id=sound&kind=eepf": "GET",
		"/api/compare?id=sound": "GET", "/api/scan?id=sound": "GET", "/api/events": "GET",
		"/api/report?id=sound": "GET", "/api/invite": "POST", "/api/check": "POST",
		"/api/start": "POST",
	}
	for path, method := range paths {
		for _, header := range []map[string]string{
			{},
			{"Authorization": "Bearer "},
			{"Authorization": "Bearer " + strings.Repeat("0", 64)},
			{"Authorization": "Basic Og=="},
			{"Cookie": "key=1"},
		} {
			a := ask(t, method, site(s)+path, "{}", with(header, "Content-Type", "application/json"))
			if a.status != http.StatusUnauthorized || strings.Contains(a.body, "sound") {
				t.Errorf("%s %s with %v: %d %.60s", method, path, header, a.status, a.body)
			}
		}
	}
}

// Goal: the address works once. Method: enter twice with the same token, and with wrong ones.
func TestTokenWorksOnce(t *testing.T) {
	s := viewed(t, results(t), nil)
	address, err := s.Address()
	if err != nil {
		t.Fatal(err)
	}
	_, token, _ := strings.Cut(address, "#token=")
	if len(token) != 64 {
		t.Errorf("token of %d digits, want 64", len(token))
	}
	for i, want := range []int{200, 403, 403} {
		if a := ask(t, "POST", site(s)+"/api/session", `{"token":"`+token+`"}`, nil); a.status != want {
			t.Errorf("attempt %d: status %d, want %d", i+1, a.status, want)
		}
	}
	for _, body := range []string{`{"token":""}`, `{"token":"x"}`} {
		if a := ask(t, "POST", site(s)+"/api/session", body, nil); a.status != 403 {
			t.Errorf("%s: status %d", body, a.status)
		}
	}
	for _, body := range []string{`{}x`, `[`, `{"tocken":"x"}`, ``} {
		a := ask(t, "POST", site(s)+"/api/session", body, nil)
		if a.status != 400 && a.status != 403 {
			t.Errorf("%s: status %d", body, a.status)
		}
	}
}

// Goal: a name that is bound to 127.0.0.1 later cannot be used to look in (DNS rebinding), nor can
// other sites send requests. Method: foreign Host, Origin and Sec-Fetch-Site headers, with a key.
func TestOtherSitesAreRefused(t *testing.T) {
	s := viewed(t, results(t), &fakeLauncher{})
	key := keyOf(t, s)
	if a := ask(t, "GET", site(s)+"/api/list", "", key); a.status != 200 {
		t.Fatalf("with a key: %d", a.status)
	}
	port := s.hosts[0][strings.LastIndexByte(s.hosts[0], ':'):]
	for _, host := range []string{
		"evil.example", "evil.example" + port, "127.0.0.1", "127.0.0.1.evil.example" + port,
		"[::1]" + port, "0.0.0.0" + port, "127.0.0.1:1", "LOCALHOST.evil.example",
	} {
		for _, path := range []string{"/", "/app.js", "/api/list"} {
			a := ask(t, "GET", site(s)+path, "", with(key, "Host", host))
			if a.status != http.StatusMisdirectedRequest {
				t.Errorf("host %s, %s: status %d", host, path, a.status)
			}
		}
	}
	for _, origin := range []string{
		"http://evil.example", "null", "https://127.0.0.1" + port, "http://127.0.0.1:1",
	} {
		a := ask(t, "POST", site(s)+"/api/start", `{}`, with(key, "Origin", origin))
		if a.status != 403 {
			t.Errorf("origin %s: status %d", origin, a.status)
		}
		if got := a.header.Get("Access-Control-Allow-Origin"); got != "" {
			t.Errorf("origin %s is allowed: %s", origin, got)
		}
	}
	for _, where := range []string{"cross-site", "same-site"} {
		a := ask(t, "GET", site(s)+"/api/list", "", with(key, "Sec-Fetch-Site", where))
		if a.status != 403 {
			t.Errorf("%s: status %d", where, a.status)
		}
	}
	form := with(key, "Content-Type", "application/x-www-form-urlencoded")
	if a := ask(t, "POST", site(s)+"/api/start", "input=x", form); a.status != 415 {
		t.Errorf("a form: status %d", a.status)
	}
}

// Goal: requests reach the results below the folder and nothing else. Method: a secret beside the
// folder, one inside that is no result, and a link to a run elsewhere; every spelling of a way.
func TestPathsStayInside(t *testing.T) {
	root := results(t)
	outside := filepath.Join(t.TempDir(), "outside")
	o := invented.Options{Verdict: store.OK, Ions: []string{"Ar+"}}
	if err := invented.Run(outside, o); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(outside, filepath.Join(root, "link")); err != nil {
		t.Skip("no links here: ", err)
	}
	s := viewed(t, root, nil)
	key := keyOf(t, s)
	base := filepath.Base(root)
	for _, id := range []string{
		"..", "../" + base + "/sound", "sound/../sound", "./sound", "sound/", "/sound", "sound\x00",
		outside, "/etc/passwd", "../../../../etc/passwd", "..%2fsound", `..\sound`, "link",
		"sound/summary.json", "sound.running", "", "sound/points/point=0", "going/../sound",
	} {
		for _, path := range []string{"run", "scan", "report"} {
			a := ask(t, "GET", site(s)+"/api/"+path+"?id="+url.QueryEscape(id), "", key)
			if a.status != 404 && a.status != 400 {
				t.Errorf("%s of %q: status %d", path, id, a.status)
			}
		}
	}
	for _, path := range []string{
		"/../server.go", "/assets/index.html", "/..%2f..%2fetc/passwd", "/app.js/..", "//etc/passwd",
		"/api", "/api/", "/.git/config", "/sound/summary.json", "/index.html",
	} {
		if a := ask(t, "GET", site(s)+path, "", key); a.status < 300 {
			t.Errorf("%s: status %d %.80s", path, a.status, a.body)
		}
	}
}

// Goal: what is too large or has a wrong form is refused and hurts nothing. Method: bodies, headers
// and lists beyond the limits; the viewer answers afterwards.
func TestOversizedIsRefused(t *testing.T) {
	s := viewed(t, results(t), &fakeLauncher{})
	key := keyOf(t, s)
	body := `{"name":"x","input":"` + strings.Repeat("a", maxBody) + `"}`
	for _, path := range []string{"/api/check", "/api/start"} {
		if a := ask(t, "POST", site(s)+path, body, key); a.status != 413 {
			t.Errorf("%s: status %d, want 413", path, a.status)
		}
	}
	long := with(key, "X-Long", strings.Repeat("a", 2*maxHeader))
	if a := ask(t, "GET", site(s)+"/api/list", "", long); a.status != 431 {
		t.Errorf("header: status %d, want 431", a.status)
	}
	many := strings.Repeat("id=sound&", maxOverlay+1)
	if a := ask(t, "GET", site(s)+"/api/figures?kind=eepf&"+many, "", key); a.status != 400 {
		t.Errorf("many runs: status %d", a.status)
	}
	for _, path := range []string{
		"figures?id=sound&kind=nothing", "figures?kind=eepf", "run?id=sound&id=sound", "scan?id=sound",
		"compare?id=going&id=nowhere",
	} {
		if a := ask(t, "GET", site(s)+"/api/"+path, "", key); a.status != 400 && a.status != 404 {
			t.Errorf("%s: status %d", path, a.status)
		}
	}
	if a := ask(t, "DELETE", site(s)+"/api/run?id=sound", "", key); a.status != 405 {
		t.Errorf("DELETE: status %d", a.status)
	}
	if a := ask(t, "GET", site(s)+"/api/list", "", key); a.status != 200 {
		t.Errorf("afterwards: status %d", a.status)
	}
}

// Goal: the listener is on the loopback interface only. Method: its address, and a connection by
// every other address of this machine.
func TestLoopbackOnly(t *testing.T) {
	s := viewed(t, results(t), nil)
	at := s.listener.Addr().(*net.TCPAddr)
	if !at.IP.Equal(net.IPv4(127, 0, 0, 1)) {
		t.Errorf("listens on %v", at)
	}
	addresses, err := net.InterfaceAddrs()
	if err != nil {
		t.Fatal(err)
	}
	for _, a := range addresses {
		n, ok := a.(*net.IPNet)
		if !ok || n.IP.IsLoopback() {
			continue
		}
		c, err := net.DialTCP("tcp", nil, &net.TCPAddr{IP: n.IP, Port: at.Port})
		if err == nil {
			t.Errorf("answers at %v", n.IP)
			_ = c.Close()
		}
	}
}

// Goal: browsers are told to keep the page to itself. Method: the headers of every kind of answer.
func TestHeaders(t *testing.T) {
	s := viewed(t, results(t), nil)
	for _, path := range []string{"/", "/app.js", "/app.css", "/api/list", "/none"} {
		h := ask(t, "GET", site(s)+path, "", nil).header
		for name, want := range map[string]string{
			"Content-Security-Policy": "default-src 'none'", "X-Content-Type-Options": "nosniff",
			"Referrer-Policy": "no-referrer", "Cross-Origin-Resource-Policy": "same-origin",
			"Cache-Control": "no-store",
		} {
			if !strings.Contains(h.Get(name), want) {
				t.Errorf("%s: %s is %q", path, name, h.Get(name))
			}
		}
		if strings.Contains(h.Get("Content-Security-Policy"), "unsafe") {
			t.Errorf("%s: the policy allows something unsafe", path)
		}
	}
}

// Goal: runs are started only where that is allowed, with a good name and a good input. Method: all
// ways to be refused, then one that is not.
func TestStarting(t *testing.T) {
	closed := viewed(t, results(t), nil)
	a := ask(t, "POST", site(closed)+"/api/start", `{"name":"a","input":"gap"}`, keyOf(t, closed))
	if a.status != 403 || !strings.Contains(a.body, "--allow-runs") {
		t.Errorf("not allowed: %d %s", a.status, a.body)
	}
	l := &fakeLauncher{}
	s := viewed(t, results(t), l)
	key := keyOf(t, s)
	for _, name := range []string{"", "../x", "a/b", ".hidden", "-rf", "a b", strings.Repeat("a", 61)} {
		a := ask(t, "POST", site(s)+"/api/start", `{"name":"`+name+`","input":"gap"}`, key)
		if a.status != 400 {
			t.Errorf("name %q: status %d", name, a.status)
		}
	}
	a = ask(t, "POST", site(s)+"/api/start", `{"name":"new","input":"nothing"}`, key)
	if !strings.Contains(a.body, "want a gap") || l.started.Len() > 0 {
		t.Errorf("wrong input: %s, started %q", a.body, l.started.String())
	}
	a = ask(t, "POST", site(s)+"/api/start", `{"name":"new","input":"gap"}`, key)
	if a.status != 200 || l.started.String() != "new:gap" {
		t.Errorf("right input: %d %s, started %q", a.status, a.body, l.started.String())
	}
}
