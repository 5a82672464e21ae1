package assets

import (
	"context"
	"testing"

	"github.com/chromedp/chromedp"
)

// makeLink puts a link that was just made on the page, as the pages draw it, and
// runs the script that belongs to it after the given one.
func makeLink(t *testing.T, ctx context.Context, before string) {
	t.Helper()
	done := eval[bool](t, ctx, `new Promise((done, fail) => {
		`+before+`
		const add = (name, attributes) => {
			const e = document.querySelector('main').appendChild(document.createElement(name));
			for (const [key, value] of Object.entries(attributes)) e.setAttribute(key, value);
			return e;
		};
		add('input', {id: 'link', 'aria-label': 'Link', readonly: '', value: 'http://127.0.0.1:8470/share/ABC', 'data-link': ''});
		add('button', {id: 'copy', 'data-copy': '', hidden: ''}).textContent = 'Copy';
		add('span', {id: 'copied', role: 'status', 'data-copied': ''});
		const script = add('script', {src: '`+URL("share.js")+`'});
		script.onload = () => done(true);
		script.onerror = () => fail(new Error('no script'));
	})`)
	if !done {
		t.Fatal("no link on the page")
	}
}

const selected = `(link => link.value.slice(link.selectionStart, link.selectionEnd))(document.querySelector('#link'))`

// clipboard stands in for the browser's, which asks for a permission that a
// browser without windows has nobody to give.
const clipboard = `Object.defineProperty(navigator, 'clipboard', {configurable: true, value: `

func TestLinkSelectsItself(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	makeLink(t, ctx, clipboard+`undefined});`)
	want(t, ctx, selected, "http://127.0.0.1:8470/share/ABC")
	want(t, ctx, `document.querySelector('#copy').hidden`, true)
	// Whoever comes back to it by mouse or by key has it selected again.
	for _, back := range []string{`document.querySelector('#link').focus()`, `document.querySelector('#link').click()`} {
		do(t, ctx, chromedp.Evaluate[chromedp.Void](`document.querySelector('#vin').focus(); getSelection().removeAllRanges(); document.querySelector('#link').setSelectionRange(0, 0)`),
			chromedp.Evaluate[chromedp.Void](back))
		want(t, ctx, selected, "http://127.0.0.1:8470/share/ABC")
	}
}

func TestCopyWhereTheBrowserCan(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	makeLink(t, ctx, clipboard+`{writeText: async (text) => { document.title = text }}});`)
	want(t, ctx, `document.querySelector('#copy').hidden`, false)
	do(t, ctx, chromedp.Click(chromedp.CSS("#copy")))
	wait(t, ctx, `document.querySelector('#copied').textContent === 'Copied.'`)
	want(t, ctx, `document.title`, "http://127.0.0.1:8470/share/ABC")
}

func TestCopyThatIsRefused(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	makeLink(t, ctx, clipboard+`{writeText: async () => { throw new Error('denied') }}});`)
	do(t, ctx, chromedp.Click(chromedp.CSS("#copy")))
	wait(t, ctx, `document.querySelector('#copied').textContent.includes('copy it by keys')`)
	want(t, ctx, `document.activeElement.id + ' ' + getSelection().toString()`, "link http://127.0.0.1:8470/share/ABC")
}
