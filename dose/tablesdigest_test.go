package dose

import (
	"crypto/sha256"
	"encoding/hex"
	"io/fs"
	"os"
	"path/filepath"
	"testing"
)

// The digest in the record is that of the tables as they are: after a change
// of a table the constant must follow, and old worksheets say so.
func TestTablesDigest(t *testing.T) {
	h := sha256.New()
	for _, dir := range []string{"../metabolic/data", "../species/data"} {
		err := filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
			if err != nil || d.IsDir() {
				return err
			}
			b, err := os.ReadFile(path)
			if err != nil {
				return err
			}
			h.Write([]byte(filepath.ToSlash(path) + "\n"))
			h.Write(b)
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
	if got := hex.EncodeToString(h.Sum(nil))[:12]; got != TablesDigest {
		t.Errorf("the tables have changed: write TablesDigest = %q", got)
	}
}
