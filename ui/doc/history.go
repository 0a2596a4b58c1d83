package doc

// deepest bounds the steps that a History keeps.
const deepest = 500

// History is the past and the future of a study, as whole documents. It belongs
// to one goroutine.
type History struct {
	docs []Document
	keys []string // by document: what merged into it
	at   int
}

// NewHistory returns a history that begins with d.
func NewHistory(d Document) *History {
	return &History{docs: []Document{d}, keys: []string{""}}
}

// Push adds d as the newest step. With a merge key that is not empty and equals
// that of the newest step, d takes its place: a drag is one step. Whatever was
// undone before is gone.
func (h *History) Push(d Document, merge string) {
	h.docs, h.keys = h.docs[:h.at+1:h.at+1], h.keys[:h.at+1:h.at+1]
	if merge != "" && h.keys[h.at] == merge {
		h.docs[h.at] = d
		return
	}
	h.docs, h.keys = append(h.docs, d), append(h.keys, merge)
	if len(h.docs) > deepest+1 {
		h.docs, h.keys = h.docs[1:], h.keys[1:]
	}
	h.at = len(h.docs) - 1
}

// Undo goes a step back and returns the document there; ok is false at the
// beginning.
func (h *History) Undo() (d Document, ok bool) {
	if !h.CanUndo() {
		return Document{}, false
	}
	h.at--
	return h.docs[h.at], true
}

// Redo goes a step forward and returns the document there; ok is false at the
// end.
func (h *History) Redo() (d Document, ok bool) {
	if !h.CanRedo() {
		return Document{}, false
	}
	h.at++
	return h.docs[h.at], true
}

// CanUndo says whether there is a step back.
func (h *History) CanUndo() bool { return h.at > 0 }

// CanRedo says whether there is a step forward.
func (h *History) CanRedo() bool { return h.at < len(h.docs)-1 }

// Depth is the number of steps that can be undone.
func (h *History) Depth() int { return h.at }
