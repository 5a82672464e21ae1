package assets

import (
	"context"
	"fmt"
	"testing"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp"
)

const paste = `(text => {
	const data = new DataTransfer();
	data.setData('text/plain', text);
	const event = new ClipboardEvent('paste', {clipboardData: data, bubbles: true, cancelable: true});
	return !document.querySelector('#c00').dispatchEvent(event); // whether it was taken
})`

const curveRows = `[...document.querySelectorAll('[data-rows] tr')].map(r => [...r.querySelectorAll('input')].map(i => i.name + '=' + i.value).join(' ')).join(' | ')`

func TestPasteFillsAndAddsRows(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	for separator, text := range map[string]string{
		"tab": "0\t22\n5\t20.5\n9\t15", "semicolon": "0;22\r\n5;20.5\r\n9;15\r\n", "comma": "0, 22\n5, 20.5\n9, 15",
		"blanks": "0 22\n5   20.5\n\n9 15", "comma, with a header": "I (A),L (µH)\n0,22\n5,20.5\n9,15",
	} {
		do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelectorAll('[data-rows] tr:not(:first-child)').forEach(r => r.remove())`))
		t.Log(separator)
		want(t, ctx, fmt.Sprintf("%s(%q)", paste, text), true)
		want(t, ctx, curveRows, "l.0.0=0 l.0.1=22 | l.1.0=5 l.1.1=20.5 | l.2.0=9 l.2.1=15")
	}
	wait(t, ctx, `document.querySelector('#got')?.textContent === '15'`) // the answer knows the new row
}

func TestPasteOfOneValueIsLeftAlone(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	want(t, ctx, paste+"('4k7')", false)
	want(t, ctx, curveRows, "l.0.0=0 l.0.1=22")
}

func TestTypingIsAnsweredInPlace(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`{ const vin = document.querySelector('#vin'); vin.focus(); vin.setSelectionRange(2, 2);
		document.querySelector('#stack svg').id = 'before' }`), chromedp.KeyEvent("7"))
	wait(t, ctx, `document.querySelector('#eta').textContent === '90.00 %'`)
	// Focus and caret stayed, what changed is marked, and only for a moment.
	want(t, ctx, `document.activeElement.id + ' ' + document.activeElement.value + ' ' + document.activeElement.selectionStart`, "vin 107.5 3")
	want(t, ctx, `document.querySelector('#eta').className`, "flash")
	wait(t, ctx, `document.querySelector('#eta').className === ''`)
	// The chart was kept by the morph and drawn anew from its attribute.
	want(t, ctx, `[...document.querySelectorAll('#stack svg text')].some(e => e.textContent === '7.77') && !document.querySelector('#before')`, true)
	// The way from the key to the picture was measured.
	want(t, ctx, `['answer', 'typing-to-answer'].every(n => performance.getEntriesByName(n).length === 1 && performance.getEntriesByName(n)[0].duration > 0)`, true)
	t.Logf("typing to answer, with a pause of 20 ms: %.0f ms", eval[float64](t, ctx, `performance.getEntriesByName('typing-to-answer')[0].duration`))
}

func TestMessageTakesFocusOnLoad(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	want(t, ctx, `document.activeElement.className`, "errors")
}

func TestEnterSendsNoSheet(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#sheet').addEventListener('submit', e => { e.preventDefault(); document.title = 'sent' })`),
		chromedp.Focus(chromedp.CSS("#vin")), pressEnter)
	want(t, ctx, `document.title`, "Gallery of components · Lossbook")
	do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#vin').dataset.enter = ''`), pressEnter)
	want(t, ctx, `document.title`, "sent")
}

// pressEnter presses Enter as a keyboard does: the character follows only if the
// page lets the key through. (chromedp.KeyEvent sends the character regardless.)
func pressEnter(ctx context.Context, t *chromedp.Target) (chromedp.Void, error) {
	key := input.DispatchKeyEventParams{Key: "Enter", Code: "Enter", WindowsVirtualKeyCode: 13, NativeVirtualKeyCode: 13}
	down, up := key, key
	down.Type, down.Text = input.DispatchKeyEventTypeKeyDown, "\r"
	up.Type = input.DispatchKeyEventTypeKeyUp
	for _, params := range []input.DispatchKeyEventParams{down, up} {
		if _, err := cdp.Call(ctx, t, input.DispatchKeyEvent, params); err != nil {
			return chromedp.Void{}, err
		}
	}
	return chromedp.Void{}, nil
}
