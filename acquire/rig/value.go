package rig

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2/unstable"
)

// Each of the following reads a node as one type. What is wrong with it comes back as "is ...",
// to be put behind the key, and as what to give instead; both are empty when nothing is wrong.

// number reads an integer or a float; infinite and NaN are wrong.
func (n *node) number() (v float64, wrong, want string) {
	const need = "give a number"
	switch n.kind {
	case unstable.Integer:
		i, wrong, _ := n.whole()
		return float64(i), wrong, need
	case unstable.Float:
		v, err := strconv.ParseFloat(strings.ReplaceAll(n.text, "_", ""), 64)
		if errors.Is(err, strconv.ErrRange) {
			return 0, "is " + shorten(n.text) + ", out of range", need
		}
		if err != nil || math.IsNaN(v) || math.IsInf(v, 0) {
			return 0, "is " + shorten(n.text), "give a finite number"
		}
		return v, "", ""
	}
	return 0, n.is(), need
}

// whole reads an integer.
func (n *node) whole() (v int64, wrong, want string) {
	const need = "give a whole number"
	if n.kind != unstable.Integer {
		return 0, n.is(), need
	}
	v, err := strconv.ParseInt(n.text, 0, 64)
	if err != nil {
		return 0, "is " + shorten(n.text) + ", out of range", need
	}
	return v, "", ""
}

// words reads a string of one line. What cannot be seen is refused: it would spoil tables and
// hide differences between names.
func (n *node) words() (s, wrong, want string) {
	if n.kind != unstable.String {
		return "", n.is(), "give text in quotation marks"
	}
	if strings.ContainsFunc(n.text, func(r rune) bool { return !unicode.IsGraphic(r) }) {
		return "", "is " + quote(n.text) + " with characters that cannot be seen", "leave them out"
	}
	return n.text, "", ""
}

// is says what n is instead of what it should be.
func (n *node) is() string {
	switch n.kind {
	case unstable.String:
		return "is the text " + quote(n.text)
	case unstable.Integer, unstable.Float, unstable.Bool:
		return "is " + shorten(n.text)
	case unstable.Array:
		return "is a list"
	case unstable.InlineTable:
		return "is a table"
	default:
		return "is a date or time"
	}
}

// maxEcho bounds how much of the file is repeated in a message, in characters.
const maxEcho = 40

func shorten(s string) string {
	if utf8.RuneCountInString(s) <= maxEcho {
		return s
	}
	return string([]rune(s)[:maxEcho]) + "..."
}

func quote(s string) string { return strconv.Quote(shorten(s)) }

// printable is a key as it would stand in a file: bare where it can be.
func printable(key string) string {
	bare := func(r rune) bool {
		return r == '-' || r == '_' || '0' <= r && r <= '9' || 'a' <= r && r <= 'z' || 'A' <= r && r <= 'Z'
	}
	if key == "" || strings.ContainsFunc(key, func(r rune) bool { return !bare(r) }) {
		return quote(key)
	}
	return shorten(key)
}
