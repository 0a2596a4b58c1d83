package view

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"

	"bandwright/render/typeset"
	"bandwright/ui/present"
)

// Theme dresses Fyne's widgets in the colours of a present.Theme and in the
// project's own font.
type Theme struct {
	Colours *present.Theme
}

var fonts = [...]fyne.Resource{
	fyne.NewStaticResource("text-regular", typeset.File(typeset.Regular)),
	fyne.NewStaticResource("text-italic", typeset.File(typeset.Italic)),
	fyne.NewStaticResource("text-bold", typeset.File(typeset.Bold)),
	fyne.NewStaticResource("text-bold-italic", typeset.File(typeset.BoldItalic)),
	fyne.NewStaticResource("text-signs", typeset.File(typeset.Signs)),
}

// Font implements fyne.Theme.
func (t *Theme) Font(s fyne.TextStyle) fyne.Resource {
	switch {
	case s.Symbol:
		return fonts[4]
	case s.Bold && s.Italic:
		return fonts[3]
	case s.Bold:
		return fonts[2]
	case s.Italic:
		return fonts[1]
	}
	return fonts[0]
}

// Icon implements fyne.Theme.
func (t *Theme) Icon(n fyne.ThemeIconName) fyne.Resource { return theme.DefaultTheme().Icon(n) }

// Size implements fyne.Theme: a dense window of work, not a telephone.
func (t *Theme) Size(n fyne.ThemeSizeName) float32 {
	switch n {
	case theme.SizeNameText:
		return 13
	case theme.SizeNameCaptionText:
		return 11
	case theme.SizeNameSubHeadingText:
		return 15
	case theme.SizeNameHeadingText:
		return 19
	case theme.SizeNamePadding:
		return 4
	case theme.SizeNameInnerPadding:
		return 6
	case theme.SizeNameInputRadius, theme.SizeNameSelectionRadius:
		return 5
	case theme.SizeNameInlineIcon:
		return 16
	case theme.SizeNameModalBlurRadius:
		return 0 // a blur behind dialogs takes most of a second without a graphics card
	case theme.SizeNameScrollBar:
		return 10
	}
	return theme.DefaultTheme().Size(n)
}

// Color implements fyne.Theme. The variant is that of Colours, not Fyne's.
func (t *Theme) Color(n fyne.ThemeColorName, _ fyne.ThemeVariant) color.Color {
	c := t.Colours
	faded := func(x color.NRGBA, a uint8) color.NRGBA { x.A = a; return x }
	switch n {
	case theme.ColorNameBackground:
		return c.Paper
	case theme.ColorNameForeground:
		return c.Ink
	case theme.ColorNameButton:
		return c.Raised
	case theme.ColorNameInputBackground:
		return faded(c.Ink, 16)
	case theme.ColorNameOverlayBackground, theme.ColorNameMenuBackground, theme.ColorNameHeaderBackground:
		return c.Panel
	case theme.ColorNameInputBorder, theme.ColorNameSeparator:
		return c.Rule
	case theme.ColorNameDisabled, theme.ColorNamePlaceHolder:
		return c.Soft
	case theme.ColorNameDisabledButton:
		return c.Paper
	case theme.ColorNamePrimary, theme.ColorNameHyperlink:
		return c.Held
	case theme.ColorNameForegroundOnPrimary:
		return c.Panel
	case theme.ColorNameFocus:
		return faded(c.Held, 70)
	case theme.ColorNameHover:
		return faded(c.Held, 22)
	case theme.ColorNamePressed:
		return faded(c.Held, 50)
	case theme.ColorNameSelection:
		return faded(c.Held, 60)
	case theme.ColorNameScrollBar:
		return faded(c.Soft, 120)
	case theme.ColorNameScrollBarBackground:
		return faded(c.Soft, 20)
	case theme.ColorNameShadow:
		return color.NRGBA{A: 40}
	case theme.ColorNameError:
		return c.Bad
	case theme.ColorNameWarning:
		return c.Caution
	case theme.ColorNameSuccess:
		return c.Good
	}
	variant := theme.VariantLight
	if c.Dark {
		variant = theme.VariantDark
	}
	return theme.DefaultTheme().Color(n, variant)
}

func ringColour() color.Color {
	return theme.Color(theme.ColorNameFocus)
}
