package configs

import (
	"strconv"
	"strings"
	"unicode"
)

// clip keeps what is quoted from a file from filling the screen.
func clip(s string) string {
	const most = 60
	if r := []rune(s); len(r) > most {
		return string(r[:most]) + "…"
	}
	return s
}

// shown is a path as it stands in a message: on one line, whatever a channel is called.
func shown(path string) string {
	path = clip(path)
	if strings.ContainsFunc(path, func(r rune) bool { return !unicode.IsPrint(r) }) {
		return strconv.Quote(path)
	}
	return path
}

// in and prefix word a path; the whole file needs no words.
func in(path string) string {
	if path == "" {
		return ""
	}
	return " in " + shown(path)
}

func prefix(path string) string {
	if path == "" {
		return ""
	}
	return shown(path) + ": "
}
