// Package ui is the window. It shows what session.View says and turns what
// the user does into study edits and session calls; it holds no fact about the
// study of its own.
//
// Read it in this order: tokens.go and theme.go (colours, sizes, fonts), kit.go
// and the small controls (press.go, prose.go, column.go, …), frame.go (where
// things stand), window.go (what is wired to what), command.go (the one table
// behind menus, shortcuts, tips and the finder), then one file per panel.
package ui
