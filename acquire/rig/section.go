package rig

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// A section reads the keys of one table and remembers which were asked for: the others are
// unknown. Its methods report what is wrong and go on.
type section struct {
	rep   *report
	kind  string // "force", "response" or "point" for one of several
	label string // for messages
	line  int
	table *table // nil when the file has none
	blind bool   // there is something else in its place: nothing more to say about keys
	asked []string
}

func (s *section) find(key string) *node {
	s.asked = append(s.asked, key)
	if s.table == nil {
		return nil
	}
	return s.table.nodes[key]
}

// lineOf is the line of key, or of the table where the key is absent.
func (s *section) lineOf(key string) int {
	if s.table != nil && s.table.nodes[key] != nil {
		return s.table.nodes[key].line
	}
	return s.line
}

func (s *section) has(key string) bool { return s.table != nil && s.table.nodes[key] != nil }

// add reports a mistake at key, or at the table when key is empty.
func (s *section) add(key, format string, args ...any) {
	text := fmt.Sprintf(format, args...)
	if s.label != "" {
		text = s.label + ": " + text
	}
	s.rep.add(s.lineOf(key), "%s", text)
}

// missing reports a required key that is absent.
func (s *section) missing(key, want string) {
	if !s.has(key) && !s.blind && !s.rep.unread {
		s.add("", "%s is missing: %s", key, want)
	}
}

// A bound is a range of numbers, and how to name it.
type bound struct {
	holds func(v float64) bool
	want  string
}

var (
	positive   = bound{func(v float64) bool { return v > 0 }, "give a number above 0"}
	notBelow0  = bound{func(v float64) bool { return v >= 0 }, "give 0 or more"}
	notZero    = bound{func(v float64) bool { return v != 0 }, "give a number other than 0"}
	share      = bound{func(v float64) bool { return v > 0 && v <= 1 }, "give a number above 0 and at most 1"}
	belowOne   = bound{func(v float64) bool { return v >= 0 && v < 1 }, "give 0 or more, below 1"}
	inside0to1 = bound{func(v float64) bool { return v > 0 && v < 1 }, "give a number above 0 and below 1"}
)

// number reads a number into dst: unchanged when key is absent, NaN when it is wrong.
func (s *section) number(key string, dst *float64, b bound) {
	n := s.find(key)
	if n == nil {
		return
	}
	v, wrong, want := n.number()
	if wrong == "" && !b.holds(v) {
		wrong, want = n.is(), b.want
	}
	if wrong != "" {
		s.add(key, "%s %s: %s", key, wrong, want)
		v = math.NaN()
	}
	*dst = v
}

// whole reads an integer of lo to hi into dst: unchanged when key is absent, -1 when it is wrong.
func (s *section) whole(key string, dst *int, lo, hi int64) {
	n := s.find(key)
	if n == nil {
		return
	}
	v, wrong, want := n.whole()
	if wrong == "" && (v < lo || v > hi) {
		wrong, want = n.is(), fmt.Sprintf("give a whole number from %d to %d", lo, hi)
	}
	if wrong != "" {
		s.add(key, "%s %s: %s", key, wrong, want)
		v = -1
	}
	*dst = int(v)
}

// words reads text into dst: unchanged when key is absent, empty when it is wrong.
func (s *section) words(key string, dst *string) {
	n := s.find(key)
	if n == nil {
		return
	}
	v, wrong, want := n.words()
	if wrong != "" {
		s.add(key, "%s %s: %s", key, wrong, want)
	}
	*dst = v
}

// name reads text that has to say something into dst, as words does. Blanks around it are
// refused, because " 7" and "7" look alike and are not the same point.
func (s *section) name(key string, dst *string) {
	s.words(key, dst)
	switch v := *dst; {
	case strings.TrimSpace(v) != v:
		s.add(key, "%s is %s: leave out the blanks around it", key, quote(v))
		*dst = ""
	case s.has(key) && s.table.nodes[key].kind == unstable.String && s.table.nodes[key].text == "":
		s.add(key, "%s is empty: give one", key)
	}
}

// choice reads one of options into dst: unchanged when key is absent, empty when it is wrong.
func (s *section) choice(key string, dst *string, options ...string) {
	n := s.find(key)
	if n == nil {
		return
	}
	if n.kind == unstable.String && slices.Contains(options, n.text) {
		*dst = n.text
		return
	}
	*dst = ""
	found := n.is()
	if n.kind == unstable.String {
		found = "is " + quote(n.text)
	}
	s.add(key, "%s %s: choose %s", key, found, either(options))
}

// either joins options as in "a, b or c", each in quotation marks.
func either(options []string) string {
	var b strings.Builder
	for i, o := range options {
		switch {
		case i == 0:
		case i == len(options)-1:
			b.WriteString(" or ")
		default:
			b.WriteString(", ")
		}
		b.WriteString(quote(o))
	}
	return b.String()
}

// done reports the keys that nobody asked for.
func (s *section) done() {
	if s.table == nil {
		return
	}
	for _, key := range s.table.keys {
		if slices.Contains(s.asked, key) {
			continue
		}
		what := "key"
		if n := s.table.nodes[key]; n.kind == unstable.InlineTable || n.kind == unstable.Array {
			what = "table"
		}
		s.add(key, "unknown %s %s: known here are %s", what, quote(key), strings.Join(s.asked, ", "))
	}
}

// section opens the table key, which has to stand in the file once at most.
func (s *section) section(key string) *section {
	n := s.find(key)
	sub := &section{rep: s.rep, label: "[" + key + "]", line: 1}
	if n == nil {
		return sub
	}
	sub.line, sub.table = n.line, n.table
	if n.kind == unstable.InlineTable {
		return sub
	}
	if !n.twice {
		s.add(key, "%s %s: write it as the table [%s], once", key, n.is(), key)
	}
	sub.table = n.merged(s.rep)
	sub.blind = sub.table == nil
	return sub
}

// merged puts the keys of all tables in the array n together, or returns nil when there are none.
func (n *node) merged(rep *report) *table {
	var all *table
	for _, item := range n.items {
		switch {
		case item.kind != unstable.InlineTable:
		case all == nil:
			all = item.table
		default:
			for _, key := range item.table.keys {
				if first := all.nodes[key]; first != nil {
					rep.again(all, key, item.table.nodes[key].line, first)
				} else {
					all.put(key, item.table.nodes[key])
				}
			}
		}
	}
	return all
}

// sections opens the tables of the array key.
func (s *section) sections(key string) []*section {
	n := s.find(key)
	if n == nil {
		return nil
	}
	items := n.items
	if n.kind != unstable.Array {
		items = []*node{n}
	}
	if n.kind != unstable.Array || n.twice {
		s.rep.add(items[0].line, "%s %s: write [[%s]] in double brackets, once for each", key, items[0].is(), key)
	}
	var subs []*section
	for i, item := range items {
		label := fmt.Sprintf("[[%s]] %d", key, i+1)
		if item.kind == unstable.InlineTable {
			subs = append(subs, &section{rep: s.rep, kind: key, label: label, line: item.line, table: item.table})
		} else if n.kind == unstable.Array {
			s.rep.add(item.line, "item %d of %s %s: write it as a table [[%s]]", i+1, key, item.is(), key)
		}
	}
	return subs
}
