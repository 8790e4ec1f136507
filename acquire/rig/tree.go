package rig

import (
	"bytes"
	"errors"
	"sort"
	"strings"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2/unstable"
)

// A table is a TOML table, however it is written.
type table struct {
	label string // for messages: "[source]", "[[force]]"; empty for the top of the file
	line  int
	keys  []string // in file order
	nodes map[string]*node
}

// A node is what stands behind one key, or one item of an array.
type node struct {
	line  int
	kind  unstable.Kind // InlineTable for every table and Array for every array, however written
	text  string        // of a scalar: a string's content, else as written
	table *table        // InlineTable only
	items []*node       // Array only
	made  manner
	twice bool // an array only because a table was given again, which was reported
}

// A manner is how a table or array came about, which decides what may be added to it later.
type manner int

const (
	byValue  manner = iota // key = ...: complete as it stands
	byDots                 // a in a.b = ...: more dotted keys may follow
	byPath                 // a in [a.b]: may get its own header once
	byHeader               // [a] or [[a]]
)

func newTable(label string, line int) *table {
	return &table{label: label, line: line, nodes: map[string]*node{}}
}

func (t *table) put(key string, n *node) {
	t.keys = append(t.keys, key)
	t.nodes[key] = n
}

// in names a key of t for messages.
func (t *table) in(key string) string {
	if t.label == "" {
		return quote(key)
	}
	return t.label + ": " + quote(key)
}

// A grower builds the tree expression by expression. The parser checks the grammar only; that no
// key or table is defined twice is checked here. What is defined twice is reported and kept as
// far as it goes, so that one mistake does not hide or cause others.
type grower struct {
	rep     *report
	parser  unstable.Parser
	starts  []int // offset of the start of each line
	root    *table
	current *table
}

// parseTree reads text into a tree and reports what breaks the rules of TOML.
func parseTree(text []byte, rep *report) *table {
	// A byte order mark says nothing in UTF-8, and some editors write one.
	text = bytes.TrimPrefix(text, []byte("\xef\xbb\xbf"))
	text = text[:len(text):len(text)]
	g := &grower{rep: rep, starts: []int{0}, root: newTable("", 1)}
	for i, c := range text {
		if c == '\n' {
			g.starts = append(g.starts, i+1)
		}
	}
	g.current = g.root
	g.parser.Reset(text)
	for g.parser.NextExpression() {
		switch e := g.parser.Expression(); e.Kind {
		case unstable.Table:
			g.current = g.header(e, false)
		case unstable.ArrayTable:
			g.current = g.header(e, true)
		case unstable.KeyValue:
			g.keyValue(g.current, e)
		}
	}
	g.syntax(g.parser.Error())
	return g.root
}

// again reports that key of t stands in the file a second time.
func (r *report) again(t *table, key string, line int, first *node) {
	r.add(line, "%s is given again, first on line %d: keep one", t.in(key), first.line)
}

// syntax reports the error at which the parser stopped, if it did.
func (g *grower) syntax(err error) {
	if err == nil {
		return
	}
	g.rep.unread = true
	line, advice := 1, "correct this; the rest of the file was not read"
	var where *unstable.ParserError
	if errors.As(err, &where) {
		r := g.parser.Range(where.Highlight)
		line = g.lineOf(r)
		if int(r.Offset) == firstNotUTF8(g.parser.Data()) {
			advice = "save the file as UTF-8; the rest of it was not read"
		}
	}
	g.rep.add(line, "not TOML, %s: %s", err, advice)
}

// firstNotUTF8 is the offset of the first byte that is not UTF-8, or -1.
func firstNotUTF8(text []byte) int {
	for i := 0; i < len(text); {
		r, size := utf8.DecodeRune(text[i:])
		if r == utf8.RuneError && size == 1 {
			return i
		}
		i += size
	}
	return -1
}

func (g *grower) lineOf(r unstable.Range) int {
	return sort.Search(len(g.starts), func(i int) bool { return g.starts[i] > int(r.Offset) })
}

// header opens the table that [a.b] or [[a.b]] names.
func (g *grower) header(e *unstable.Node, array bool) *table {
	t := g.root
	for it := e.Key(); it.Next(); {
		key, line := string(it.Node().Data), g.lineOf(it.Node().Raw)
		switch {
		case !it.IsLast():
			t = g.through(t, key, line)
		case array:
			t = g.openItem(t, key, line)
		default:
			t = g.openTable(t, key, line)
		}
	}
	return t
}

// through goes into the table key of t on the way to a deeper header.
func (g *grower) through(t *table, key string, line int) *table {
	n := t.nodes[key]
	switch {
	case n == nil:
		n = &node{line: line, kind: unstable.InlineTable, table: newTable(t.below(key), line), made: byPath}
		t.put(key, n)
	case n.made == byValue:
		g.rep.again(t, key, line, n)
	}
	return n.last()
}

func (g *grower) openTable(t *table, key string, line int) *table {
	n := t.nodes[key]
	switch {
	case n == nil:
		n = &node{line: line, kind: unstable.InlineTable, table: newTable(t.below(key), line), made: byHeader}
		t.put(key, n)
		return n.table
	case n.made == byPath:
		n.made, n.line, n.table.line = byHeader, line, line
		return n.table
	case n.kind == unstable.Array && n.made == byHeader && !n.twice:
		g.rep.add(line, "%s is [%s] on line %d: write it in double brackets here too", t.in(key), t.below(key), n.line)
	default:
		g.rep.again(t, key, line, n)
	}
	return n.grow(newTable(t.below(key), line))
}

func (g *grower) openItem(t *table, key string, line int) *table {
	n := t.nodes[key]
	if n == nil {
		n = &node{line: line, kind: unstable.Array, made: byHeader}
		t.put(key, n)
	} else if n.kind != unstable.Array || n.made != byHeader {
		g.rep.again(t, key, line, n)
	}
	return n.grow(newTable("["+t.below(key)+"]", line))
}

// keyValue puts a value behind the possibly dotted key of e, below t.
func (g *grower) keyValue(t *table, e *unstable.Node) {
	for it := e.Key(); it.Next(); {
		key, line := string(it.Node().Data), g.lineOf(it.Node().Raw)
		n := t.nodes[key]
		if it.IsLast() {
			if n != nil {
				g.rep.again(t, key, line, n)
				return
			}
			t.put(key, g.value(e.Value(), line, t.below(key)))
			return
		}
		switch {
		case n == nil:
			n = &node{line: line, kind: unstable.InlineTable, table: newTable(t.below(key), line), made: byDots}
			t.put(key, n)
		case n.made != byDots:
			g.rep.again(t, key, line, n)
		}
		t = n.last()
	}
}

// value turns a value of the syntax tree into a node. The syntax tree gives no position for an
// array, so the line is that of the key in front unless the value has its own.
func (g *grower) value(v *unstable.Node, line int, label string) *node {
	if v.Raw.Length > 0 {
		line = g.lineOf(v.Raw)
	}
	n := &node{line: line, kind: v.Kind}
	switch v.Kind {
	case unstable.InlineTable:
		n.table = newTable(label, line)
		for it := v.Children(); it.Next(); {
			g.keyValue(n.table, it.Node())
		}
	case unstable.Array:
		if !strings.HasPrefix(label, "[[") {
			label = "[" + label + "]"
		}
		for it := v.Children(); it.Next(); {
			n.items = append(n.items, g.value(it.Node(), line, label))
		}
	default:
		n.text = string(v.Data)
	}
	return n
}

// below labels the table that stands behind key of t: "[a]", and "[a.b]" one step deeper.
func (t *table) below(key string) string {
	path := shorten(strings.Trim(t.label, "[]"))
	if path != "" {
		path += "."
	}
	return "[" + path + printable(key) + "]"
}

// last is the table that n stands for: of an array, its last item. Behind anything else lies an
// empty table of its own, so that what is put there is out of the way.
func (n *node) last() *table {
	if n.kind == unstable.Array && len(n.items) > 0 {
		return n.items[len(n.items)-1].last()
	}
	if n.kind == unstable.InlineTable {
		return n.table
	}
	return newTable("", n.line)
}

// grow adds t to n as one more item and returns t. A table becomes an array for it, marked as
// given twice; to a scalar nothing can be added.
func (n *node) grow(t *table) *table {
	if n.kind == unstable.InlineTable {
		first := *n
		*n = node{line: n.line, kind: unstable.Array, items: []*node{&first}, made: byHeader, twice: true}
	}
	if n.kind == unstable.Array {
		n.items = append(n.items, &node{line: t.line, kind: unstable.InlineTable, table: t, made: byHeader})
	}
	return t
}
