package window

import (
	"bandwright/ui/present"
	"bandwright/ui/session"
	"bandwright/ui/view"
)

func (w *Window) ledgerHandler() view.Handler {
	return view.Handler{
		Click: func(p view.Pointer) {
			if t := present.TargetOf(p.ID); t.Kind == present.Row && w.sn.Focus != nil && t.I < len(w.sn.Focus.Rows) {
				w.tools.choose(present.FactorKey(w.sn.Focus.Rows[t.I]))
			}
		},
		Drag:  func(_ view.Pointer, _, dy float64) { w.scrollLedger(-dy) },
		Wheel: func(_ view.Pointer, steps float64) { w.scrollLedger(-36 * steps) },
		Key:   w.key, Rune: w.rune,
	}
}

func (w *Window) scrollLedger(d float64) {
	_, height := plotSize(w.ledger)
	w.v.Scroll = max(0, min(w.v.Scroll+d, w.ledgerEnd-height))
	w.drawLedger()
}

// copyLedger puts the Ledger on the clipboard as text.
func (w *Window) copyLedger() {
	text := present.LedgerText(w.sn)
	if text == "" {
		w.say("There is no Ledger to copy: focus a level first.")
		return
	}
	w.app.Clipboard().SetContent(text)
	w.say("The Ledger is on the clipboard as text, columns separated by tabs.")
}

// pin keeps the focused level.
func (w *Window) pin(slot byte) {
	if w.sn.Focus == nil {
		w.say("There is no level to pin: hold a k point first.")
		return
	}
	w.do(session.PinLevel{Slot: slot})
}

func (w *Window) clearPins() {
	for _, slot := range []byte{'A', 'B'} {
		if slot == 'A' && w.sn.PinA != nil || slot == 'B' && w.sn.PinB != nil {
			w.do(session.ClearPin{Slot: slot})
		}
	}
}
