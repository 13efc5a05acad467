// Package page is the local page: a worksheet that is filled in, in the browser
// of the practice's own computer.
//
//   - The page computes nothing. What is typed goes to the server as the case
//     file's keys with their texts, is written as a case file, and takes the
//     way of the command from there: [dose.ReadCase], [dose.CaseInput.Check],
//     [dose.Draft], a writer of package reports. So what the case file refuses
//     is refused here in the same words, and a downloaded case file gives the
//     command the same record.
//   - Nothing is kept. Each answer follows from its request alone; a case lives
//     in the open tab and in the files that the user saves. No address holds
//     anything that was typed.
//   - Nothing leaves the machine, and no other page gets in: see guard.go.
package page

import (
	"bytes"
	"embed"
	"encoding/json"
	"html/template"
	"io"
	"net/http"
	"runtime"
	"sync"
	"time"

	"tayra/dose"
)

//go:embed templates static
var files embed.FS

// Limits of one request. A case is refused by its own reader over 1 MB; the
// pairs that carry it here are a little longer.
const (
	maxCase  = 2 << 20
	maxWords = 4 << 10
	maxFile  = 16 << 20 // a worksheet as PDF, or a case file
)

// server holds what all requests share.
type server struct {
	host string // as the browser's address bar has it: 127.0.0.1:PORT

	// Many tabs wait in line for the cores rather than share them: the first in
	// line is answered as fast as if it were alone. Work that takes longer has
	// lines of its own.
	quick, papers, tables chan struct{}
}

// Handler serves the page to a browser that reaches it under host, such as
// "127.0.0.1:8420", or under localhost with the same port. Requests that name
// another host, or that another page sends, are refused.
func Handler(host string) http.Handler {
	cores := runtime.GOMAXPROCS(0)
	s := &server{
		host:   host,
		quick:  make(chan struct{}, cores),
		papers: make(chan struct{}, cores),
		tables: make(chan struct{}, 1), // one takes all cores
	}
	mux := http.NewServeMux()
	mux.HandleFunc("GET /{$}", s.index)
	mux.HandleFunc("GET /static/{name}", s.static)
	post := func(path string, line chan struct{}, limit int64, handle http.HandlerFunc) {
		mux.Handle("POST "+path, whole(limit, inLine(line, handle)))
	}
	post("/draft", s.quick, maxCase, s.draft)
	post("/animals", s.quick, maxWords, s.animals)
	post("/example", s.quick, maxWords, s.example)
	post("/open", s.papers, maxFile, s.open)
	post("/case", s.quick, maxCase, s.caseFile)
	post("/record", s.quick, maxCase, s.record)
	post("/worksheet/{paper}", s.papers, maxCase, s.worksheet)
	post("/batch/{what}", s.tables, maxTable, s.batch)
	return s.guard(mux)
}

// Limits are the time limits of a server that serves the page: no client on
// the machine can hold a connection open for nothing.
func Limits(srv *http.Server) {
	srv.ReadHeaderTimeout = 5 * time.Second
	srv.ReadTimeout = 30 * time.Second
	srv.WriteTimeout = 60 * time.Second
	srv.IdleTimeout = 2 * time.Minute
	srv.MaxHeaderBytes = 16 << 10
}

// whole reads a request to its end before it takes a place in line: one that
// arrives slowly, or never, keeps nobody waiting.
func whole(limit int64, next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		data, err := io.ReadAll(http.MaxBytesReader(w, r.Body, limit))
		r.Body = io.NopCloser(io.MultiReader(bytes.NewReader(data), unread{err}))
		next.ServeHTTP(w, r)
	})
}

// unread ends a body as its reading ended.
type unread struct{ err error }

func (u unread) Read([]byte) (int, error) {
	if u.err == nil {
		return 0, io.EOF
	}
	return 0, u.err
}

// inLine lets as many requests through at once as the line is wide.
func inLine(line chan struct{}, next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		select {
		case line <- struct{}{}:
			defer func() { <-line }()
			next.ServeHTTP(w, r)
		case <-r.Context().Done():
		}
	})
}

var templates = sync.OnceValue(func() *template.Template {
	return template.Must(template.New("").Funcs(funcs()).ParseFS(files, "templates/*.html"))
})

// index is the empty form. It is the same for everybody, made once.
func (s *server) index(w http.ResponseWriter, _ *http.Request) {
	w.Header().Set("Content-Type", "text/html; charset=utf-8")
	w.Write(emptyForm())
}

var emptyForm = sync.OnceValue(func() []byte {
	var b bytes.Buffer
	err := templates().ExecuteTemplate(&b, "index.html", map[string]any{
		"Groups": formGroups(), "Version": dose.Version,
	})
	if err != nil {
		panic(err) // the template is part of the program
	}
	return b.Bytes()
})

var contentTypes = map[string]string{
	"page.css": "text/css; charset=utf-8",
	"page.js":  "text/javascript; charset=utf-8",
	"icon.svg": "image/svg+xml",
}

func (s *server) static(w http.ResponseWriter, r *http.Request) {
	name := r.PathValue("name")
	data, err := files.ReadFile("static/" + name)
	if err != nil || contentTypes[name] == "" {
		http.NotFound(w, r)
		return
	}
	w.Header().Set("Content-Type", contentTypes[name])
	w.Write(data)
}

// reply writes a value as JSON.
func reply(w http.ResponseWriter, status int, v any) {
	b, err := json.Marshal(v)
	if err != nil {
		http.Error(w, "the answer cannot be written: "+err.Error(), http.StatusInternalServerError)
		return
	}
	w.Header().Set("Content-Type", "application/json")
	w.WriteHeader(status)
	w.Write(b)
}
