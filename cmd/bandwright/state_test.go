package main_test

// state is what one line of the debug log tells: the whole state of the
// session after a change. A line that lacks a field leaves its last value.
type state struct {
	Title       string     `json:"title"`
	Set         string     `json:"set"`
	SpinOrbit   bool       `json:"spin_orbit"`
	A           float64    `json:"a"` // lattice constant, Å
	Held        [3]float64 `json:"held"`
	HeldLabel   string     `json:"held_label"`
	FocusFirst  int        `json:"focus_first"`
	FocusSize   int        `json:"focus_size"`
	FocusEnergy float64    `json:"focus_energy"`
	LedgerSum   float64    `json:"ledger_sum"`
	Gap         float64    `json:"gap"`
	Kind        string     `json:"kind"` // direct, indirect, semimetal, metal
	PinA        string     `json:"pin_a"`
	PinB        string     `json:"pin_b"`
	Revision    int        `json:"revision"`
	UndoDepth   int        `json:"undo_depth"`
	File        string     `json:"file"`
	Busy        bool       `json:"busy"`

	Crystal  string           `json:"crystal"`
	LagMS    float64          `json:"lag_ms"`
	Fermi    float64          `json:"fermi"`
	Contrast int              `json:"contrast"` // rows
	Path     string           `json:"path"`
	Camera   [5]float64       `json:"camera"`
	Window   [2]float64       `json:"window"`
	Colour   string           `json:"colour"`
	Modified bool             `json:"modified"`
	Notice   string           `json:"notice"`
	Problem  string           `json:"problem"`
	Drawings map[string]int   `json:"drawings"` // finished, by panel
	Panels   map[string]place `json:"panels"`
	Points   map[string]place `json:"points"` // special points of the Zone as seen, by label
}

// ready: the program has computed what its study asks for.
func (s state) ready() bool { return s.Revision > 0 && !s.Busy && s.Kind != "" }
