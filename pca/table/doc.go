// Package table reads tables of numeric channels into blocks of rows.
//
// [Open] looks at the head of the files, decides what every column is, and returns a
// [Table]; [Table.Each] goes through its rows in blocks, parsing in parallel and handing
// the blocks over in row order, in memory that does not grow with the number of rows.
// [Held] keeps rows in memory and can be gone through the same way; both are [Rows].
//
// # Missing values
//
// A cell that reads as one of Options.Missing becomes NaN. Any other text that is not a
// finite decimal number is an error where the column holds numbers; columns of text are
// left out with a note.
//
// # Boundaries
//
// Blocks end where the bytes of the file say, whatever the number of threads.
package table
