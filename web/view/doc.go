// Package view draws the pages. Its models are made of strings that are ready to
// be read: it knows no store, no physics and no formatting of numbers, so that
// what a page says is decided, and tested, where the figures are.
//
// Every value is escaped by the templates; none of them writes raw HTML.
package view
