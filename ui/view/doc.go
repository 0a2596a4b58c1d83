// Package view holds the widgets that Bandwright adds to Fyne: a panel that
// shows a recorded picture and reports what the pointer does over it, number
// fields with a slider, tooltips, and the theme.
//
// Sizes are in Fyne's device-independent units; one unit is one point of a
// picture. Everything here belongs to the UI goroutine, except the drawing of
// a panel, which runs in the background and hands over a finished image. A
// picture given to a panel must not be changed afterwards.
package view
