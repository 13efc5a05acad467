// Who may talk to the page:
//
//   - Only requests that name this machine by the address printed at the start.
//     Another name that resolves to it (DNS rebinding) is refused, whatever it
//     asks for.
//   - Only the page itself. A request that a browser marks as another page's is
//     refused, except the plain opening of the page: the page holds nothing.
//   - The page may load and reach nothing but this server, run no script that
//     is not one of its files, stand in no frame, send no form, and is kept in
//     no cache.

package page

import (
	"net"
	"net/http"
	"strings"
)

// policy is the content security policy of every answer.
var policy = strings.Join([]string{
	"default-src 'none'",
	"script-src 'self'",
	"style-src 'self'",
	"img-src 'self'",
	"connect-src 'self'",
	"base-uri 'none'",
	"form-action 'none'",
	"frame-ancestors 'none'",
}, "; ")

func (s *server) guard(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		h := w.Header()
		h.Set("Content-Security-Policy", policy)
		h.Set("X-Content-Type-Options", "nosniff")
		h.Set("X-Frame-Options", "DENY")
		h.Set("Referrer-Policy", "no-referrer")
		h.Set("Cross-Origin-Opener-Policy", "same-origin")
		h.Set("Cross-Origin-Resource-Policy", "same-origin")
		h.Set("Permissions-Policy", "camera=(), geolocation=(), microphone=()")
		h.Set("Cache-Control", "no-store")
		if why := s.foreign(r); why != "" {
			http.Error(w, why, http.StatusForbidden)
			return
		}
		next.ServeHTTP(w, r)
	})
}

// foreign says why a request is not this page's, or "".
func (s *server) foreign(r *http.Request) string {
	if !s.ours(r.Host) {
		return "refused: this page answers only to its own address on this machine"
	}
	if o := r.Header["Origin"]; len(o) > 1 || len(o) == 1 && o[0] != "http://"+r.Host {
		return "refused: the request comes from another page"
	}
	switch r.Header.Get("Sec-Fetch-Site") {
	case "", "same-origin", "none":
		return ""
	}
	if r.Method == http.MethodGet && r.URL.Path == "/" && r.Header.Get("Sec-Fetch-Mode") == "navigate" && r.Header.Get("Sec-Fetch-Dest") == "document" {
		return ""
	}
	return "refused: the request comes from another page"
}

// ours says whether a Host is the address that the server was started on.
func (s *server) ours(host string) bool {
	if host == s.host {
		return true
	}
	name, port, err := net.SplitHostPort(host)
	_, own, ownErr := net.SplitHostPort(s.host)
	return err == nil && ownErr == nil && name == "localhost" && port == own
}
