package run

import (
	"axisfold/configs"
	"axisfold/pca/table"
)

// ReadOptions are how the read section of a run file has its table read, for commands that
// look at tables without a run.
func ReadOptions(cfg *configs.File) table.Options { return readOptions(cfg, 0) }
