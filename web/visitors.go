package web

// enter counts a browser in before its connection is taken over. It tells whether there is room; then
// s.serving.Done counts it out.
func (s *Server) enter() bool {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.closing || s.entered >= maxBrowsers {
		return false
	}
	s.entered++
	s.serving.Add(1)
	return true
}

// leave counts a browser out.
func (s *Server) leave() {
	s.mu.Lock()
	s.entered--
	s.mu.Unlock()
	s.serving.Done()
}

// add lists b to be told when the server closes. It returns false when that has happened.
func (s *Server) add(b *browser) bool {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.closing {
		return false
	}
	s.browsers[b] = true
	return true
}

func (s *Server) remove(b *browser) {
	s.mu.Lock()
	delete(s.browsers, b)
	s.mu.Unlock()
}
