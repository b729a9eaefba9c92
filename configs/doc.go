// Package configs is the run file: what it may say, what it says, and what holds where it
// says nothing.
//
// [Load] reads a run file and returns a [File] in which every setting has a value; or all
// that is wrong with it, each problem with its line and column. [File.Resolved] writes it
// back with every default filled in, [File.Settings] lists every setting for a reader,
// [File.Resolve] turns its relative paths into paths that can be opened.
//
// # One description
//
// [Keys] describes every section and key once: kind of value, range, default, meaning.
// Loading, checks, messages and what is written back all follow from it. A new key is
// one line in the description and one field of the struct of its section; a new rule is
// one line in the list of rules.
//
// # Strictness
//
// An unknown key, a key written twice, a value of the wrong type and an impossible value
// are errors; so are aliases, merge keys and tags, which YAML has and a run file does not
// need. Whole numbers are plain decimal digits, switches are true or false, and names and
// codes keep the text that was written: 010, 1e5 and no are such texts.
package configs
