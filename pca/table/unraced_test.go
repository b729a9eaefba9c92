//go:build !race

package table

const raced = false
