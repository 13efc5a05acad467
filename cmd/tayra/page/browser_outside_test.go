//go:build outside

package page

import (
	"context"
	"fmt"
	"net/http/httptest"
	"net/url"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/chromedp/cdproto/browser"
	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/page"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// screen is what a browser shows the page on.
type screen struct {
	width, height int64
	dark          bool
}

var (
	desk  = screen{width: 1280, height: 900}
	phone = screen{width: 390, height: 844}
)

func (s screen) inTheDark() screen { s.dark = true; return s }

func (s screen) String() string {
	scheme := "light"
	if s.dark {
		scheme = "dark"
	}
	return fmt.Sprintf("%d-%s", s.width, scheme)
}

// patience is how long a browser may take for one thing. Nothing is measured
// by it: it ends a test that waits for what never comes.
const patience = 60 * time.Second

// tab is the page in a browser of its own, with everything that the browser
// wrote to its console and asked for.
type tab struct {
	*testing.T
	screen  screen
	ctx     context.Context
	address string
	folder  string // where downloads arrive

	mu      sync.Mutex
	console []string
	asked   []string          // addresses
	names   map[string]string // of downloads, by their id
	arrived chan string
}

// newTab opens the page. A browser that is missing is a failure: these tests are
// asked for by their tag.
func newTab(t *testing.T, s screen) *tab {
	t.Helper()
	srv := httptest.NewUnstartedServer(nil)
	srv.Config.Handler = Handler(srv.Listener.Addr().String())
	Limits(srv.Config)
	srv.Start()
	t.Cleanup(srv.Close)

	options := append(chromedp.DefaultExecAllocatorOptions[:],
		chromedp.NoSandbox, chromedp.UserDataDir(t.TempDir()),
		chromedp.Flag("disable-component-update", true), chromedp.Flag("disable-background-networking", true),
		// Whatever still asks for another machine finds none.
		chromedp.Flag("host-resolver-rules", "MAP * ~NOTFOUND, EXCLUDE 127.0.0.1"))
	allocator, cancel := chromedp.NewExecAllocator(context.Background(), options...)
	t.Cleanup(cancel)
	ctx, cancel := chromedp.NewContext(allocator)
	t.Cleanup(cancel)
	b := &tab{T: t, screen: s, ctx: ctx, address: srv.URL + "/", folder: t.TempDir(), names: map[string]string{}, arrived: make(chan string, 10)}
	if err := chromedp.Do(ctx); err != nil { // starts the browser
		t.Fatal(err)
	}
	for _, err := range []error{chromedp.Listen(ctx, b.hear), chromedp.ListenBrowser(ctx, b.hear)} {
		if err != nil {
			t.Fatal(err)
		}
	}
	scheme := "light"
	if s.dark {
		scheme = "dark"
	}
	call(b, network.Enable, network.EnableParams{})
	call(b, log.Enable, cdp.Empty{})
	call(b, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}}})
	if _, err := chromedp.CallBrowser(ctx, browser.SetDownloadBehavior, browser.SetDownloadBehaviorParams{
		Behavior: browser.SetDownloadBehaviorBehaviorAllow, DownloadPath: b.folder, EventsEnabled: new(true),
	}); err != nil {
		t.Fatal(err)
	}
	b.do(chromedp.EmulateViewport(s.width, s.height), chromedp.Navigate(b.address))
	b.settled()
	t.Cleanup(b.quiet)
	return b
}

// hear takes down what the browser says. A question of the page, whether what
// is filled in may be replaced, is answered with yes.
func (b *tab) hear(event any) {
	b.mu.Lock()
	defer b.mu.Unlock()
	switch e := event.(type) {
	case *runtime.EventConsoleAPICalled:
		b.console = append(b.console, fmt.Sprintf("%s: %v", e.Type, e.Args))
	case *runtime.EventExceptionThrown:
		b.console = append(b.console, "exception: "+e.ExceptionDetails.Text+" "+e.ExceptionDetails.Exception.Description)
	case *log.EventEntryAdded:
		b.console = append(b.console, string(e.Entry.Level)+": "+e.Entry.Text+" "+e.Entry.URL)
	case *network.EventRequestWillBeSent:
		b.asked = append(b.asked, e.Request.URL)
	case *page.EventJavascriptDialogOpening:
		go chromedp.Call(b.ctx, page.HandleJavaScriptDialog, page.HandleJavaScriptDialogParams{Accept: true})
	case *browser.EventDownloadWillBegin:
		b.names[e.GUID] = e.SuggestedFilename
	case *browser.EventDownloadProgress:
		if e.State == browser.DownloadProgressStateCompleted {
			b.arrived <- b.names[e.GUID]
		}
	}
}

// quiet is what must be true of every test: the console is empty, and nothing
// was asked of another machine, nor anything that was typed put into an address.
func (b *tab) quiet() {
	b.mu.Lock()
	defer b.mu.Unlock()
	for _, line := range b.console {
		b.Errorf("the console says %s", line)
	}
	home, _ := url.Parse(b.address)
	if len(b.asked) == 0 {
		b.Error("the browser's network log is empty")
	}
	for _, a := range b.asked {
		u, err := url.Parse(strings.TrimPrefix(a, "blob:"))
		if err != nil || u.Host != home.Host {
			b.Errorf("asked for %s", a)
		}
		if u != nil && u.RawQuery != "" && !strings.HasPrefix(u.RawQuery, "paper=") {
			b.Errorf("an address holds more than a place: %s", a)
		}
	}
}

func (b *tab) do(steps ...chromedp.Action[chromedp.Void]) {
	b.Helper()
	ctx, cancel := context.WithTimeout(b.ctx, patience)
	defer cancel()
	if err := chromedp.Do(ctx, steps...); err != nil {
		b.Fatal(err)
	}
}

func call[P, R any](b *tab, command cdp.Command[P, R], params P) R {
	b.Helper()
	r, err := chromedp.Call(b.ctx, command, params)
	if err != nil {
		b.Fatal(err)
	}
	return r
}

// eval gives the value of an expression in the page.
func eval[T any](b *tab, expression string) T {
	b.Helper()
	ctx, cancel := context.WithTimeout(b.ctx, patience)
	defer cancel()
	v, err := chromedp.Run(ctx, chromedp.Evaluate[T](expression, chromedp.EvalAwaitPromise))
	if err != nil {
		b.Fatalf("%s: %v", expression, err)
	}
	return v
}

// until waits for an expression to be true.
func (b *tab) until(expression string) {
	b.Helper()
	ctx, cancel := context.WithTimeout(b.ctx, patience)
	defer cancel()
	if _, err := chromedp.Run(ctx, chromedp.Poll[bool]("!!("+expression+")")); err != nil {
		b.Fatalf("never true: %s: %v\nconsole: %q\nat the foot: %s\nin the box: %s", expression, err, b.console, b.text("#say"), b.text("#top"))
	}
}

// settled waits until the page has drafted from what stands in the form.
func (b *tab) settled() {
	b.Helper()
	b.until(`document.getElementById("stale").hidden && !document.getElementById("result").hasAttribute("aria-busy") && document.getElementById("top").childElementCount > 0`)
}

// text is what a reader sees of an element, with single spaces.
func (b *tab) text(selector string) string {
	b.Helper()
	s := eval[string](b, fmt.Sprintf(`(document.querySelector(%q)?.innerText || "")`, selector))
	return strings.Join(strings.Fields(s), " ")
}

// shows and hides say what a reader must see, and must not.
func (b *tab) shows(selector string, texts ...string) {
	b.Helper()
	seen := b.text(selector)
	for _, t := range texts {
		if !strings.Contains(seen, t) {
			b.Errorf("%s does not say %q: %s", selector, t, seen)
		}
	}
}

func (b *tab) hides(selector string, texts ...string) {
	b.Helper()
	seen := b.text(selector)
	for _, t := range texts {
		if strings.Contains(seen, t) {
			b.Errorf("%s says %q: %s", selector, t, seen)
		}
	}
}

// typeIn writes a text into a field as a person does, letter by letter, and
// leaves it.
func (b *tab) typeIn(path, text string) {
	b.Helper()
	b.do(chromedp.Focus(chromedp.ID(idOf(path))))
	eval[bool](b, `(document.activeElement.select?.(), true)`)
	b.do(chromedp.KeyEvent(text))
	eval[bool](b, `(document.activeElement.blur(), true)`)
}

// choose takes one of a few words.
func (b *tab) choose(path, word string) {
	b.Helper()
	eval[bool](b, fmt.Sprintf(`{ const el = document.getElementById(%q); el.value = %q; el.dispatchEvent(new Event("input", {bubbles: true})); true }`, idOf(path), word))
}

// fill writes several fields.
func (b *tab) fill(pairs ...pair) {
	b.Helper()
	for _, p := range pairs {
		b.typeIn(p[0], p[1])
	}
	b.settled()
}

// downloaded clicks and gives the file that arrives.
func (b *tab) downloaded(selector string) (name string, data []byte) {
	b.Helper()
	b.do(chromedp.Click(chromedp.CSS(selector)))
	select {
	case name = <-b.arrived:
	case <-time.After(patience):
		b.Fatalf("nothing arrives from %s; the page says %q", selector, b.text("#say"))
	}
	data, err := os.ReadFile(filepath.Join(b.folder, name))
	if err != nil {
		b.Fatal(err)
	}
	return name, data
}

// drop drops a file on the page.
func (b *tab) drop(name string, data []byte) {
	b.Helper()
	var bytes strings.Builder
	for i, x := range data {
		if i > 0 {
			bytes.WriteByte(',')
		}
		fmt.Fprint(&bytes, x)
	}
	eval[bool](b, fmt.Sprintf(`{
		const data = new DataTransfer();
		data.items.add(new File([new Uint8Array([%s])], %q));
		for (const type of ["dragover", "drop"]) document.body.dispatchEvent(new DragEvent(type, {dataTransfer: data, bubbles: true, cancelable: true}));
		true }`, bytes.String(), name))
}

// picture keeps what the page looks like, the window as it is and the whole of
// it, for whoever looks at the run.
func (b *tab) picture(name string) {
	b.Helper()
	b.shoot(name)
	tall := eval[int64](b, `Math.max(document.documentElement.scrollHeight, document.getElementById("result").scrollHeight + 200)`)
	b.do(chromedp.EmulateViewport(b.screen.width, min(tall, 16000)))
	b.shoot(name + "-whole")
	b.do(chromedp.EmulateViewport(b.screen.width, b.screen.height))
}

func (b *tab) shoot(name string) {
	b.Helper()
	ctx, cancel := context.WithTimeout(b.ctx, patience)
	defer cancel()
	png, err := chromedp.Run(ctx, chromedp.CaptureScreenshot())
	if err == nil {
		err = os.WriteFile(filepath.Join(b.artefacts(), "page-"+name+"-"+b.screen.String()+".png"), png, 0o666)
	}
	if err != nil {
		b.Fatal(err)
	}
}

// artefacts is the folder for what a run leaves to be looked at.
func (b *tab) artefacts() string {
	b.Helper()
	folder := os.Getenv("TAYRA_ARTEFACTS")
	if folder == "" {
		folder = b.TempDir()
	}
	if err := os.MkdirAll(folder, 0o777); err != nil {
		b.Fatal(err)
	}
	return folder
}

func clickID(id string) chromedp.Action[chromedp.Void] { return chromedp.Click(chromedp.ID(id)) }
