package page

import (
	"embed"
	"io/fs"
	"net/http"
	"path"
)

//go:embed assets
var assets embed.FS

// kinds are the content types of the assets.
func kinds() map[string]string {
	return map[string]string{".html": "text/html; charset=utf-8", ".css": "text/css; charset=utf-8", ".js": "text/javascript; charset=utf-8", ".svg": "image/svg+xml"}
}

// assets serves the files that are built in, each at an address of its own: no
// address is ever made into a path.
func (s *Server) assets() {
	err := fs.WalkDir(assets, "assets", func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		text, err := assets.ReadFile(name)
		address := "/" + path.Base(name)
		if address == "/page.html" {
			address = "/{$}"
		}
		s.mux.HandleFunc("GET "+address, func(w http.ResponseWriter, _ *http.Request) {
			w.Header().Set("Content-Type", kinds()[path.Ext(name)])
			_, _ = w.Write(text) // the browser went away: nobody is left to tell
		})
		return err
	})
	if err != nil { // of a file system inside the program
		s.mux.HandleFunc("GET /{$}", func(w http.ResponseWriter, _ *http.Request) {
			http.Error(w, err.Error(), http.StatusInternalServerError)
		})
	}
}
