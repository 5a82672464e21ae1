package web

import (
	"fmt"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp"
)

// keys that a person presses, by name. A key types its text only if the page lets
// it through, as on a keyboard. (chromedp.KeyEvent types it regardless.)
var keys = map[string]input.DispatchKeyEventParams{
	"Tab":       {Key: "Tab", Code: "Tab", WindowsVirtualKeyCode: 9},
	"Shift+Tab": {Key: "Tab", Code: "Tab", WindowsVirtualKeyCode: 9, Modifiers: 8},
	"Enter":     {Key: "Enter", Code: "Enter", WindowsVirtualKeyCode: 13, Text: "\r"},
	"Backspace": {Key: "Backspace", Code: "Backspace", WindowsVirtualKeyCode: 8},
	"Down":      {Key: "ArrowDown", Code: "ArrowDown", WindowsVirtualKeyCode: 40},
	"Up":        {Key: "ArrowUp", Code: "ArrowUp", WindowsVirtualKeyCode: 38},
	"Left":      {Key: "ArrowLeft", Code: "ArrowLeft", WindowsVirtualKeyCode: 37},
	"Right":     {Key: "ArrowRight", Code: "ArrowRight", WindowsVirtualKeyCode: 39},
	"Escape":    {Key: "Escape", Code: "Escape", WindowsVirtualKeyCode: 27},
	"Home":      {Key: "Home", Code: "Home", WindowsVirtualKeyCode: 36},
}

// press presses one key after another.
func (b *tab) press(names ...string) {
	b.t.Helper()
	for _, name := range names {
		down, known := keys[name]
		if !known {
			b.t.Fatalf("there is no key %q", name)
		}
		up := down
		up.Type, up.Text = input.DispatchKeyEventTypeKeyUp, ""
		down.Type = input.DispatchKeyEventTypeRawKeyDown
		if down.Text != "" {
			down.Type = input.DispatchKeyEventTypeKeyDown
		}
		for _, event := range []input.DispatchKeyEventParams{down, up} {
			if _, err := chromedp.Call(b.ctx, input.DispatchKeyEvent, event); err != nil {
				b.t.Fatal(err)
			}
		}
	}
}

// types writes at the caret.
func (b *tab) types(text string) {
	b.t.Helper()
	b.do(chromedp.KeyEvent(text))
}

// tabTo walks by Tab until it stands at an element e that the condition holds for.
func (b *tab) tabTo(condition string) { b.t.Helper(); b.walk("Tab", condition) }

// backTo walks the other way.
func (b *tab) backTo(condition string) { b.t.Helper(); b.walk("Shift+Tab", condition) }

func (b *tab) walk(key, condition string) {
	b.t.Helper()
	there := fmt.Sprintf(`(e => Boolean(%s))(document.activeElement)`, condition)
	for range 400 {
		b.press(key)
		if evaluate[bool](b, there) {
			return
		}
	}
	b.t.Fatalf("no %s leads to %s", key, condition)
}

// entry is the condition of standing in a sheet's entry.
func entry(path string) string { return fmt.Sprintf(`e.id === 'f-%s'`, path) }

// enter walks to an entry and types its value in place of what is there: arriving
// by Tab selects it all.
func (b *tab) enter(path, value string) {
	b.t.Helper()
	b.tabTo(entry(path))
	b.types(value)
}

// field is the selector of a sheet's entry.
func field(path string) string { return fmt.Sprintf(`[id="f-%s"]`, path) }

// replace puts the focus into an entry and types a value in place of its own.
func (b *tab) replace(path, value string) {
	b.t.Helper()
	evaluate[chromedp.Void](b, fmt.Sprintf(`(e => { e.focus(); e.select() })(document.querySelector('%s'))`, field(path)))
	if value == "" {
		b.press("Backspace")
		return
	}
	b.types(value)
}

// value is what an entry holds.
func (b *tab) value(path string) string {
	b.t.Helper()
	return evaluate[string](b, fmt.Sprintf(`document.querySelector('%s').value`, field(path)))
}

// click clicks where an element that the condition holds for is seen.
func (b *tab) click(condition string) {
	b.t.Helper()
	spot := evaluate[[]float64](b, fmt.Sprintf(`(() => {
		const e = [...document.querySelectorAll('a, button, summary')].find(e => %s);
		if (!e) return [];
		e.scrollIntoView({block: 'center', behavior: 'instant'});
		const r = e.getClientRects()[0];
		return [r.x + r.width / 2, r.y + r.height / 2] })()`, condition))
	if len(spot) != 2 {
		b.t.Fatalf("nothing to click: %s", condition)
	}
	b.do(chromedp.MouseClickXY(spot[0], spot[1]))
}

// saying is the condition that an element says just that.
func saying(text string) string { return fmt.Sprintf(`e.textContent.trim() === %q`, text) }
