package monitor

// marks remember which source frames something happened to, as stretches in ascending order.
type marks struct {
	spans []span
}

// A span is frames from to before.
type span struct{ from, before int64 }

// add marks frames from to before, which must not lie before what is marked already.
func (m *marks) add(from, before int64) {
	if n := len(m.spans); n > 0 && m.spans[n-1].before >= from {
		m.spans[n-1].before = max(m.spans[n-1].before, before)
		return
	}
	m.spans = append(m.spans, span{from, before})
}

// in is the first marked stretch that has a frame in from to before.
func (m *marks) in(from, before int64) (span, bool) {
	for _, s := range m.spans {
		if s.from >= before {
			break
		}
		if s.before > from {
			return s, true
		}
	}
	return span{}, false
}

// forget drops the stretches that end before a frame.
func (m *marks) forget(frame int64) {
	n := 0
	for n < len(m.spans) && m.spans[n].before <= frame {
		n++
	}
	if n > 0 {
		m.spans = m.spans[:copy(m.spans, m.spans[n:])]
	}
}
