package page

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"net"
	"net/http"
	"net/http/httptest"
	"net/url"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"tayra/dose"
)

const testHost = "127.0.0.1:8420"

// examples is the folder of the repository's example cases.
var examples = filepath.Join("..", "..", "..", "testdata")

func example(t testing.TB, name string) []byte {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(examples, name))
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// caseNames are all example cases.
func caseNames(t testing.TB) []string {
	t.Helper()
	paths, err := filepath.Glob(filepath.Join(examples, "*.yaml"))
	if err != nil || len(paths) < 8 {
		t.Fatalf("%d example cases: %v", len(paths), err)
	}
	for i, p := range paths {
		paths[i] = filepath.Base(p)
	}
	return paths
}

// pairsOfCase are the fields of the form after a case file was opened.
func pairsOfCase(t testing.TB, name string) []pair {
	t.Helper()
	in, _, err := dose.ReadCase(name, example(t, name))
	if err != nil {
		t.Fatal(err)
	}
	return pairsOf(in)
}

// with replaces the text of a field, or adds the field.
func with(pairs []pair, path, text string) []pair {
	out := append([]pair{}, pairs...)
	for i := range out {
		if out[i][0] == path {
			out[i][1] = text
			return out
		}
	}
	return append(out, pair{path, text})
}

// request is one as the page sends it.
func request(method, path, kind string, body []byte) *http.Request {
	r := httptest.NewRequest(method, "http://"+testHost+path, bytes.NewReader(body))
	r.Header.Set("Origin", "http://"+testHost)
	r.Header.Set("Sec-Fetch-Site", "same-origin")
	if kind != "" {
		r.Header.Set("Content-Type", kind)
	}
	return r
}

func answer(r *http.Request) *httptest.ResponseRecorder {
	w := httptest.NewRecorder()
	Handler(testHost).ServeHTTP(w, r)
	return w
}

// post sends the fields of the form.
func post(t testing.TB, path string, v any) *httptest.ResponseRecorder {
	t.Helper()
	body, err := json.Marshal(v)
	if err != nil {
		t.Fatal(err)
	}
	return answer(request("POST", path, "application/json", body))
}

func decode[T any](t testing.TB, w *httptest.ResponseRecorder, status int) (v T) {
	t.Helper()
	if w.Code != status {
		t.Fatalf("status %d, want %d: %s", w.Code, status, w.Body)
	}
	if err := json.Unmarshal(w.Body.Bytes(), &v); err != nil {
		t.Fatalf("%v: %s", err, w.Body)
	}
	return v
}

func draftOf(t testing.TB, pairs []pair) drafted {
	t.Helper()
	return decode[drafted](t, post(t, "/draft", pairs), http.StatusOK)
}

var tags = regexp.MustCompile(`<[^>]*>`)

// seen is the text of a piece of a page.
func seen(html string) string {
	s := strings.NewReplacer("&#39;", "'", "&#34;", `"`, "&amp;", "&", "&lt;", "<", "&gt;", ">", "&#43;", "+", "\u00a0", " ").Replace(tags.ReplaceAllString(html, " "))
	return strings.Join(strings.Fields(s), " ")
}

func TestThePageOpens(t *testing.T) {
	w := answer(httptest.NewRequest("GET", "http://"+testHost+"/", nil))
	if w.Code != 200 || !strings.HasPrefix(w.Header().Get("Content-Type"), "text/html") {
		t.Fatalf("status %d, %s", w.Code, w.Header().Get("Content-Type"))
	}
	page := w.Body.String()
	for _, s := range []string{"DRAFT for a licensed veterinarian's judgement.", "Not a prescription.", "Local law on off-label use, controlled drugs and food animals applies."} {
		if !strings.Contains(page, s) {
			t.Errorf("the page does not say %q", s)
		}
	}
	// What the content policy forbids would be dead on the page.
	for _, no := range []string{"<style", " style=", "<script>", "onclick=", "oninput=", "http://", "https://", "javascript:"} {
		if strings.Contains(page, no) {
			t.Errorf("the page holds %q", no)
		}
	}
	for _, m := range regexp.MustCompile(`(?:href|src)="([^"]+)"`).FindAllStringSubmatch(page, -1) {
		if strings.HasPrefix(m[1], "#") {
			continue
		}
		if w := answer(httptest.NewRequest("GET", "http://"+testHost+m[1], nil)); w.Code != 200 || w.Header().Get("Content-Type") == "" {
			t.Errorf("%s: status %d", m[1], w.Code)
		}
	}
	ids := map[string]bool{}
	for _, m := range regexp.MustCompile(` id="([^"]+)"`).FindAllStringSubmatch(page, -1) {
		if ids[m[1]] {
			t.Errorf("two elements are called %s", m[1])
		}
		ids[m[1]] = true
	}
	for _, m := range regexp.MustCompile(` (?:for|aria-describedby|aria-controls|aria-labelledby)="([^"]+)"`).FindAllStringSubmatch(page, -1) {
		for _, id := range strings.Fields(m[1]) {
			if !ids[id] {
				t.Errorf("something belongs to %s, which is not there", id)
			}
		}
	}
}

// The goal is a page that opens at once on an old computer: 150 kB in all, with
// the fonts of the system; of that the script, which should stay readable in one
// sitting, 25 kB.
func TestThePageIsLight(t *testing.T) {
	total := len(emptyForm())
	for name := range contentTypes {
		data, err := files.ReadFile("static/" + name)
		if err != nil {
			t.Fatal(err)
		}
		total += len(data)
		if name == "page.js" && len(data) > 25_000 {
			t.Errorf("%s has %d bytes", name, len(data))
		}
	}
	t.Logf("%d bytes", total)
	if total > 150_000 {
		t.Errorf("the page has %d bytes", total)
	}
	if a := draftOf(t, pairsOfCase(t, "severalmodels.yaml")); len(a.Top)+len(a.Rest) > 150_000 {
		t.Errorf("a worksheet has %d bytes", len(a.Top)+len(a.Rest))
	}
}

func TestOnlyOneselfMayAsk(t *testing.T) {
	body, _ := json.Marshal(pairsOfCase(t, "anteater.yaml"))
	for _, tt := range []struct {
		name, method, path, host string
		header                   map[string]string
		want                     int
	}{
		{"the page itself", "POST", "/draft", testHost, map[string]string{"Origin": "http://" + testHost, "Sec-Fetch-Site": "same-origin"}, 200},
		{"under localhost", "POST", "/draft", "localhost:8420", map[string]string{"Origin": "http://localhost:8420", "Sec-Fetch-Site": "same-origin"}, 200},
		{"a program without an origin", "POST", "/draft", testHost, nil, 200},
		{"the address bar", "GET", "/", testHost, map[string]string{"Sec-Fetch-Site": "none"}, 200},
		{"a link elsewhere", "GET", "/", testHost, map[string]string{"Sec-Fetch-Site": "cross-site", "Sec-Fetch-Mode": "navigate", "Sec-Fetch-Dest": "document"}, 200},
		{"a frame elsewhere", "GET", "/", testHost, map[string]string{"Sec-Fetch-Site": "cross-site", "Sec-Fetch-Mode": "navigate", "Sec-Fetch-Dest": "iframe"}, 403},
		{"a script tag elsewhere", "GET", "/static/page.js", testHost, map[string]string{"Sec-Fetch-Site": "cross-site", "Sec-Fetch-Mode": "no-cors"}, 403},
		{"another page of the site", "POST", "/draft", testHost, map[string]string{"Sec-Fetch-Site": "same-site"}, 403},
		{"another origin", "POST", "/draft", testHost, map[string]string{"Origin": "http://example.com"}, 403},
		{"another port", "POST", "/draft", testHost, map[string]string{"Origin": "http://127.0.0.1:9999"}, 403},
		{"another scheme", "POST", "/draft", testHost, map[string]string{"Origin": "https://" + testHost}, 403},
		{"a sandboxed page", "POST", "/draft", testHost, map[string]string{"Origin": "null"}, 403},
		{"an empty origin", "POST", "/draft", testHost, map[string]string{"Origin": ""}, 403},
		{"localhost for the number", "POST", "/draft", testHost, map[string]string{"Origin": "http://localhost:8420"}, 403},
		{"a rebound name", "GET", "/", "rebound.example.com:8420", nil, 403},
		{"a rebound name without a port", "GET", "/", "rebound.example.com", nil, 403},
		{"the number without the port", "GET", "/", "127.0.0.1", nil, 403},
		{"localhost with another port", "GET", "/", "localhost:9999", nil, 403},
		{"a name that begins like it", "GET", "/", testHost + ".example.com", nil, 403},
		{"every address", "GET", "/", "0.0.0.0:8420", nil, 403},
		{"no host", "GET", "/", "", nil, 403},
		{"a rebound name, a file", "POST", "/open", "rebound.example.com:8420", nil, 403},
	} {
		t.Run(tt.name, func(t *testing.T) {
			r := httptest.NewRequest(tt.method, "http://"+testHost+tt.path, bytes.NewReader(body))
			r.Host = tt.host
			r.Header.Set("Content-Type", "application/json")
			for k, v := range tt.header {
				r.Header.Set(k, v)
			}
			w := answer(r)
			if w.Code != tt.want {
				t.Errorf("status %d, want %d", w.Code, tt.want)
			}
			if w.Code == 403 && (!strings.HasPrefix(w.Body.String(), "refused: ") || strings.Contains(w.Body.String(), "anteater")) {
				t.Errorf("said %q", w.Body)
			}
		})
	}
}

func TestEveryAnswerHasThePolicy(t *testing.T) {
	pairs, _ := json.Marshal(pairsOfCase(t, "anteater.yaml"))
	foreign := request("POST", "/draft", "application/json", pairs)
	foreign.Host = "example.com"
	for name, r := range map[string]*http.Request{
		"page":      request("GET", "/", "", nil),
		"script":    request("GET", "/static/page.js", "", nil),
		"nothing":   request("GET", "/nothing", "", nil),
		"draft":     request("POST", "/draft", "application/json", pairs),
		"record":    request("POST", "/record", "application/json", pairs),
		"worksheet": request("POST", "/worksheet/a4", "application/json", pairs),
		"faulty":    request("POST", "/draft", "application/json", []byte("{")),
		"foreign":   foreign,
	} {
		h := answer(r).Header()
		csp := h.Get("Content-Security-Policy")
		for _, want := range []string{"default-src 'none'", "script-src 'self'", "connect-src 'self'", "form-action 'none'", "base-uri 'none'", "frame-ancestors 'none'"} {
			if !strings.Contains(csp, want) {
				t.Errorf("%s: the policy lacks %s", name, want)
			}
		}
		if strings.Contains(csp, "unsafe") || strings.Contains(csp, "*") || strings.Contains(csp, "data:") {
			t.Errorf("%s: the policy is %s", name, csp)
		}
		for k, want := range map[string]string{"X-Content-Type-Options": "nosniff", "Cache-Control": "no-store", "Referrer-Policy": "no-referrer",
			"X-Frame-Options": "DENY", "Cross-Origin-Resource-Policy": "same-origin", "Cross-Origin-Opener-Policy": "same-origin"} {
			if h.Get(k) != want {
				t.Errorf("%s: %s is %q", name, k, h.Get(k))
			}
		}
	}
}

func TestRequestsThatThePageDoesNotSend(t *testing.T) {
	long := func(n int) []byte { return []byte(`[["case","` + strings.Repeat("a", n) + `"]]`) }
	for _, tt := range []struct {
		name, method, path, kind string
		body                     []byte
		want                     int
		says                     string
	}{
		{"a form of another page", "POST", "/draft", "application/x-www-form-urlencoded", []byte("a=b"), 415, "application/json"},
		{"text that looks like JSON", "POST", "/draft", "text/plain", []byte("[]"), 415, "application/json"},
		{"no JSON", "POST", "/draft", "application/json", []byte("{"), 400, "cannot be read"},
		{"an object", "POST", "/draft", "application/json", []byte(`{"case":"x"}`), 400, "cannot be read"},
		{"two values", "POST", "/draft", "application/json", []byte(`[] []`), 400, "cannot be read"},
		{"an unknown field", "POST", "/draft", "application/json", []byte(`[["patient.weight","41 kg"]]`), 400, "no such field"},
		{"the file's place", "POST", "/draft", "application/json", []byte(`[["File","/etc/passwd"]]`), 400, "no such field"},
		{"a fitted line", "POST", "/draft", "application/json", []byte(`[["fit.target","41 kg"]]`), 400, "no such field"},
		{"a list without end", "POST", "/draft", "application/json", []byte(`[["models[999999999].dose","1 mg/kg"]]`), 400, "no such field"},
		{"a place before the first", "POST", "/draft", "application/json", []byte(`[["models[-1].dose","1 mg/kg"]]`), 400, "no such field"},
		{"too long", "POST", "/draft", "application/json", long(maxCase), 413, "too large"},
		{"too long a file", "POST", "/open", "application/octet-stream", make([]byte, maxFile+1), 413, "at most 16 MB"},
		{"a file as something else", "POST", "/open", "application/json", []byte("case: x"), 415, "application/octet-stream"},
		{"too long a name", "POST", "/animals", "application/json", long(maxWords), 400, "cannot be read"},
		{"paper of another size", "POST", "/worksheet/a3", "application/json", []byte("[]"), 404, "paper"},
		{"a case in the address", "GET", "/draft?patient.mass=41", "", nil, 405, ""},
		{"a file out of the program", "GET", "/static/..%2fpage.go", "", nil, 404, ""},
		{"a template", "GET", "/static/index.html", "", nil, 404, ""},
	} {
		t.Run(tt.name, func(t *testing.T) {
			w := answer(request(tt.method, tt.path, tt.kind, tt.body))
			if w.Code != tt.want || !strings.Contains(w.Body.String(), tt.says) {
				t.Errorf("status %d, want %d; said %.300s", w.Code, tt.want, w.Body)
			}
		})
	}
}

// The file of a page that is served has no other way out than the answer: no
// address that the script asks for carries anything that was typed.
func TestAddressesHoldNothingTyped(t *testing.T) {
	script, err := files.ReadFile("static/page.js")
	if err != nil {
		t.Fatal(err)
	}
	for _, no := range []string{"localStorage", "sessionStorage", "indexedDB", "document.cookie", "location.", "history.", "XMLHttpRequest", "sendBeacon", "WebSocket", "import(", "eval(", "new Function"} {
		if bytes.Contains(script, []byte(no)) {
			t.Errorf("the script uses %s", no)
		}
	}
	for _, m := range regexp.MustCompile(`fetch\(([^,]+),`).FindAllStringSubmatch(string(script), -1) {
		if m[1] != "path" {
			t.Errorf("the script fetches %s", m[1])
		}
	}
}

// Requests that never end hold no place in line: with many of them open, a case
// is drafted all the same. The server has no time limits here, so that nothing
// but the order of the work can end the test.
func TestSlowRequestsKeepNobodyWaiting(t *testing.T) {
	srv := httptest.NewUnstartedServer(nil)
	srv.Config.Handler = Handler(srv.Listener.Addr().String())
	srv.Start()
	defer srv.Close()
	host := srv.Listener.Addr().String()
	for range 40 {
		conn, err := net.Dial("tcp", host)
		if err != nil {
			t.Fatal(err)
		}
		defer conn.Close()
		fmt.Fprintf(conn, "POST /draft HTTP/1.1\r\nHost: %s\r\nContent-Type: application/json\r\nContent-Length: 1000\r\n\r\n[", host)
	}
	body, _ := json.Marshal(pairsOfCase(t, "anteater.yaml"))
	r, err := http.Post(srv.URL+"/draft", "application/json", bytes.NewReader(body))
	if err != nil || r.StatusCode != 200 {
		t.Fatal(err)
	}
	r.Body.Close()
}

func ExampleHandler() {
	server := httptest.NewUnstartedServer(nil)
	server.Config.Handler = Handler(server.Listener.Addr().String())
	server.Start()
	defer server.Close()
	fields := `[["date","2026-11-30"],
		["patient.species","giant anteater"],["patient.mass","41"],
		["drug.name","examplicillin"],
		["models[0].species","dog"],["models[0].mass","18 kg"],["models[0].dose","10 mg/kg"],["models[0].interval","q12h"],
		["models[0].source","practice protocol 7, invented"]]`
	response, err := http.Post(server.URL+"/draft", "application/json", strings.NewReader(fields))
	if err != nil {
		fmt.Println(err)
		return
	}
	defer response.Body.Close()
	var answer struct{ Say string }
	body, _ := io.ReadAll(response.Body)
	json.Unmarshal(body, &answer)
	fmt.Println(answer.Say)
	// Output: No draft: 1 field is wrong. Body mass: "41" has no unit; write the number with its unit, like "41 kg".
}

// fileRequest is one as the page sends it for a file that was dropped.
func fileRequest(path, name string, data []byte) *http.Request {
	r := request("POST", path, "application/octet-stream", data)
	r.Header.Set("X-File-Name", url.PathEscape(name))
	return r
}
