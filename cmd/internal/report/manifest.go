package report

import (
	"io"

	"axisfold/pca"
)

// Manifest is manifest.json: what went in, what came out, and how, so that the run can be
// done again and compared. It is written last: a folder without it is not a run folder.
type Manifest struct {
	Axisfold int        `json:"axisfold"`
	Version  string     `json:"version"` // of the program
	Go       string     `json:"go"`
	Platform string     `json:"platform"`
	RunFile  RunFile    `json:"run_file"`
	Inputs   []File     `json:"inputs"`  // paths relative to the run file's folder
	Outputs  []File     `json:"outputs"` // paths relative to the folder
	Seed     uint64     `json:"seed"`
	Threads  int        `json:"threads"` // the numbers do not depend on it
	Route    pca.Route  `json:"route"`
	Reason   string     `json:"reason"`
	Matrix   pca.Matrix `json:"matrix"`
}

// RunFile identifies the run file: its path relative to the folder, and its content.
type RunFile struct {
	Path   string   `json:"path"`
	SHA256 string   `json:"sha256"`
	Set    []string `json:"set,omitempty"` // --set overrides
}

// WriteManifest writes manifest.json.
func WriteManifest(m *Manifest, out io.Writer) error { return writeJSON(out, m) }
