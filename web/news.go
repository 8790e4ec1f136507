package web

// news returns the messages that a page which has s lacks, except results, and enters them in s. With
// events, those behind number after, or behind s, are among them.
func (h *Hub) news(s *sent, events bool, after int64) [][]byte {
	var list [][]byte
	h.mu.Lock()
	defer h.mu.Unlock()
	if events {
		if after <= h.events.newest { // else it is a number of another run
			s.event = max(s.event, after)
		}
		if text := h.events.message(s.event); text != nil {
			list = append(list, text)
			s.event = h.events.newest
		}
	}
	for _, kind := range []struct {
		newest *numbered
		sent   *int64
	}{
		{&h.acknowledged.message, &s.acknowledged}, // behind the events that it is about
		{&h.markings.message, &s.marks},
		{&h.levels, &s.levels},
		{&h.held.message, &s.held},
		{&h.setup.state, &s.setup},
		{&h.setup.findings, &s.findings},
		{&h.commands.broken, &s.broken},
		{&h.commands.asked, &s.asked},
		{&h.run, &s.run},
	} {
		if kind.newest.number != *kind.sent {
			*kind.sent = kind.newest.number
			list = append(list, kind.newest.text)
		}
	}
	return list
}

// ownNews are answers to this page alone. b.mu is held.
func (b *browser) ownNews() (list [][]byte) {
	if b.alive {
		list = append(list, []byte(`{"type":"alive"}`))
	}
	if b.refused != "" {
		list = append(list, mustMarshal(struct {
			Type string `json:"type"` // "refused"
			Text string `json:"text"`
		}{"refused", b.refused}))
	}
	return list
}

// accessMessage says whether the page may have the run do anything.
func accessMessage(mayControl bool) []byte {
	return mustMarshal(struct {
		Type    string `json:"type"` // "access"
		Control bool   `json:"control"`
	}{"access", mayControl})
}
