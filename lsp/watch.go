package lsp

import (
	"fmt"
	"time"
)

// watchEvery is how often the client's process is looked for. Its death ends the server within two looks and a bit; the
// end of the input usually comes first.
const watchEvery = 500 * time.Millisecond

// watchClient ends the server when the client's process is no more. A process that cannot be seen at the start lives
// elsewhere (in another container, say) and is not watched.
func (s *server) watchClient(pid int) {
	if !alive(pid) {
		s.log.Warn("the client's process is not visible from here and is not watched", "process", pid)
		return
	}
	tick := time.NewTicker(watchEvery)
	defer tick.Stop()
	for {
		select {
		case <-s.root.Done():
			return
		case <-tick.C:
			if !alive(pid) {
				s.finish(1, fmt.Errorf("the client's process %d has ended", pid))
				return
			}
		}
	}
}
