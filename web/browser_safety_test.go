package web

import (
	"strings"
	"testing"
	"time"

	"github.com/chromedp/chromedp"
)

// A name that somebody else made lead to this machine shows no design, neither
// to the person nor to a script of that page.
func TestForeignNameShowsNothing(t *testing.T) {
	h := serve(t)
	b := h.tab()
	_, port, _ := strings.Cut(h.address, ":")
	evil := "evil.test:" + port
	b.ears.hosts = []string{evil}
	// The page that refuses gets no style and no script either.
	b.expect("status of 403", "Cross-Origin-Opener-Policy header has been ignored", "Refused to apply style", "Refused to execute script")
	answer, err := chromedp.Run(b.ctx, chromedp.NavigateResponse("http://"+evil+"/"))
	if err != nil {
		t.Fatal(err)
	}
	if answer.Status != 403 {
		t.Errorf("status %d", answer.Status)
	}
	want(b, `location.host`, evil)
	want(b, `document.body.textContent.includes('Open Lossbook under the address')`, true)
	want(b, `document.documentElement.textContent.includes('Night-frost')`, false)
	for _, path := range []string{"/designs/2", "/api/v1/designs", "/designs/2/design.json"} {
		want(b, `fetch('`+path+`').then(r => r.text().then(t => r.status + ' ' + t.includes('Night-frost')))`, "403 false")
	}
}

// A session through all pages, by every link there is. That it logs no violation
// and asks no other host is what every tab is listened to for; here it is shown
// that a violation would be heard.
func TestSessionStaysWithinThePolicy(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	h.unfinished()
	b := h.tab()
	seen, left := map[string]bool{"/": true}, []string{"/"}
	for ; len(left) > 0 && len(seen) < 60; left = left[1:] {
		b.open(left[0])
		for _, path := range evaluate[[]string](b, `[...document.links].filter(a => a.origin === location.origin && !a.download && !a.hasAttribute('download') && !/load=(?!50)|vin=|scale=/.test(a.search)).map(a => a.pathname + a.search)`) {
			if !seen[path] {
				seen[path] = true
				left = append(left, path)
			}
		}
	}
	if len(seen) < 9 {
		t.Errorf("only %d pages were seen: %v", len(seen), seen)
	}
	b.expect("violates the following Content Security Policy")
	b.ears.hosts = []string{"other.test"} // the attempt is seen, though it never leaves
	evaluate[chromedp.Void](b, `{ const s = document.createElement('script'); s.textContent = 'window.ran = 1'; document.body.append(s);
		document.body.append(Object.assign(new Image(), {src: 'http://other.test/x.png'})) }`)
	want(b, `window.ran === undefined`, true)
}

// payload would run in any place that takes text for markup or for script.
const payload = `"'><img src=x onerror="__pwned=1"><script>__pwned=1</script>{{7*7}}`

func TestHostileNamesRunNothing(t *testing.T) {
	h := serve(t)
	d := sample(t, "frost")
	d.Name, d.Note, d.Switch.Part, d.Diode.Part, d.Inductor.Part = payload, payload, payload, payload, payload
	d.Series[0].Name = payload
	d.Sources = map[string]string{"switch.rds_on": payload, "inductor.dcr": payload}
	h.call(201, "POST", "/designs", designRequest{d})
	h.call(201, "POST", "/designs/4/revisions", map[string]string{"note": payload})
	b := h.tab()
	b.expect("status of 422")
	for _, page := range []struct {
		path  string
		least int // how often it is read there
	}{{"/", 2}, {"/designs/4", 8}, {"/designs/4/revisions/1", 7}, {"/designs/4/rename", 2}} {
		b.open(page.path)
		b.harmless(page.path, page.least)
	}
	b.open("/designs/4")
	b.replace("frequency", payload) // in the words of an error, and with live answers
	b.says(".stale", "Last good answer")
	b.replace("name", payload+"!")
	b.says("h1", payload+"!")
	b.replace("note.revision", payload)
	b.harmless("live", 8)
	b.click(`e.matches('.go') && e.textContent.includes('Keep as')`) // refused
	b.says(".errors", "This can’t be kept")
	b.harmless("refused", 8)
	b.open("/")
	b.replace("name", payload)
	b.replace("input.max", payload)
	b.press("Enter")
	b.wait(`document.title.startsWith('Error:')`)
	b.harmless("refused specification", 3)
	b.click(`e.getAttribute('aria-label')?.startsWith('Delete') && e.getAttribute('aria-label').includes('img')`)
	b.says(".notice", "Removed")
	b.harmless("removed", 1)
}

// harmless checks that nothing of the payload text has become an element or has
// run, and that it is read as it was written.
func (b *tab) harmless(where string, least int) {
	b.t.Helper()
	b.drawn()
	time.Sleep(50 * time.Millisecond) // an image that fails to load takes its time to say so
	if evaluate[bool](b, `'__pwned' in window || [...document.querySelectorAll('img, [onerror], [onload], script:not([src])')].length > 0`) {
		b.t.Errorf("%s: the text became markup", where)
	}
	got := evaluate[int](b, `(document.documentElement.textContent + [...document.querySelectorAll('input, textarea')].map(i => ' ' + i.value).join('')).split(`+"`"+payload+"`"+`).length - 1`)
	if got < least {
		b.t.Errorf("%s: the text is read %d times, want at least %d", where, got, least)
	}
}
