//go:build race

package table

const raced = true
