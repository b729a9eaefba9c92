//go:build race

package symeig

const raced = true
