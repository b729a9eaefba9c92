package run

import (
	"axisfold/configs"
	"axisfold/pca/retain"
	"axisfold/pca/table"
)

// readOptions translates the read section.
func readOptions(cfg *configs.File, threads int) table.Options {
	r := cfg.Read
	o := table.Options{Dir: cfg.Dir(), Files: r.Files, Format: r.Format, Separator: r.Separator,
		DecimalComma: r.Decimal == "comma", Comment: r.Comment, Missing: r.Missing, NoHeader: r.Header == "false",
		UnitsRow: r.UnitsRow, Time: r.Time, Groups: r.Groups, LeaveOut: r.LeaveOut, Sheet: r.Sheet, Query: r.Query, Connection: r.Connection,
		Encoding: r.Encoding, ChannelsInRows: r.Orientation == "channels-in-rows", Thousands: r.Thousands, ShortRows: r.ShortRows == "missing"}
	if r.Header == "auto" || r.Header == "double" {
		o.Header = r.Header
	}
	return o
}

// settingsOf translates the parameters of a rule.
func settingsOf(r configs.Rule) retain.Settings {
	return retain.Settings{Components: r.Components, AtLeast: r.AtLeast, Value: r.Value,
		Reference: r.Reference, Percentile: r.Percentile, Rows: r.Rows, Replicates: r.Replicates,
		Power: r.Power, Alpha: r.Alpha, Noise: r.Noise}
}
