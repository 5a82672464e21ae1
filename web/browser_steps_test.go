package web

import (
	"fmt"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp"
)

// chord presses a letter while modifiers are held: 2 is Ctrl, 4 is ⌘, 8 is Shift. The
// browser does of itself what the command says, unless the page prevents it.
func (b *tab) chord(letter string, modifiers int64, command string) {
	b.t.Helper()
	code := int64(strings.ToUpper(letter)[0])
	down := input.DispatchKeyEventParams{Type: input.DispatchKeyEventTypeRawKeyDown, Key: letter, Code: "Key" + strings.ToUpper(letter),
		WindowsVirtualKeyCode: code, Modifiers: modifiers}
	if command != "" {
		down.Commands = []string{command}
	}
	up := down
	up.Type, up.Commands = input.DispatchKeyEventTypeKeyUp, nil
	for _, event := range []input.DispatchKeyEventParams{down, up} {
		if _, err := chromedp.Call(b.ctx, input.DispatchKeyEvent, event); err != nil {
			b.t.Fatal(err)
		}
	}
}

// put replaces what an entry holds at once, as a paste does: on a busy machine keys may
// come so slowly that they are several steps.
func (b *tab) put(path, value string) {
	b.t.Helper()
	evaluate[chromedp.Void](b, fmt.Sprintf(`(e => { e.focus(); e.select() })(document.querySelector('%s'))`, field(path)))
	if _, err := chromedp.Call(b.ctx, input.InsertText, input.InsertTextParams{Text: value}); err != nil {
		b.t.Fatal(err)
	}
}

func (b *tab) ctrlZ()      { b.t.Helper(); b.chord("z", 2, "undo") }
func (b *tab) ctrlShiftZ() { b.t.Helper(); b.chord("Z", 10, "redo") }

// holds waits until an entry shows the text and the focus.
func (b *tab) holds(path, text string) {
	b.t.Helper()
	b.wait(fmt.Sprintf(`(e => e?.value === %q && document.activeElement === e)(document.querySelector('%s'))`, text, field(path)))
}

// inSight is the condition that an element can be seen whole, with nothing before it.
func inSight(selector string) string {
	return fmt.Sprintf(`(e => (r => [r.top + 2, r.bottom - 2].every(y => document.elementFromPoint(r.left + 5, y) === e))(e.getBoundingClientRect()))(document.querySelector('%s'))`, selector)
}

func TestUndoByKeys(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	before := b.text(efficiency)
	b.put("switch.rds_on", "20m")
	h.awaitKept("switch.rds_on", "20m")
	b.says("#undo", "20m → 11")
	after := b.text(efficiency)
	b.put("frequency", "180k")
	h.awaitKept("frequency", "180k")
	b.says("#undo", "180k")
	b.ctrlZ()
	b.holds("frequency", h.kept("frequency"))
	b.says("#said", "Undone: Switching frequency 180k → 250")
	want(b, `document.activeElement.closest('.f').classList.contains('flash')`, true)
	b.ctrlZ() // from there on to the entry before
	b.holds("switch.rds_on", "11 mΩ")
	b.wait(`document.querySelector('` + efficiency + `').textContent.trim() === '` + before + `'`)
	h.awaitKept("switch.rds_on", "11 mΩ")
	b.chord("y", 2, "redo")
	b.holds("switch.rds_on", "20m")
	b.wait(`document.querySelector('` + efficiency + `').textContent.trim() === '` + after + `'`)
	b.chord("Z", 12, "redo") // ⌘
	b.holds("frequency", "180k")
	b.chord("z", 4, "undo")
	b.holds("frequency", "250 kHz")
	b.do(chromedp.Reload())
	b.drawn()
	b.says("#redo", "180k")
	b.ctrlShiftZ() // nothing has the focus
	b.holds("frequency", "180k")
	b.put("frequency", "170k") // and one goes on typing
	h.awaitKept("frequency", "170k")
}

// While text is typed that the server has not taken, Ctrl+Z is the browser's, as it
// is in an input that is no entry.
func TestUndoOfWhatIsBeingTyped(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	b.put("frequency", "180k")
	h.awaitKept("frequency", "180k")
	b.says("#undo", "180k")

	b.expect("Failed to fetch", "ERR_CONNECTION_REFUSED")
	h.stop()
	b.put("switch.rds_on", "20m")
	b.says("#trouble", "Lossbook does not answer")
	b.ctrlZ()
	b.wait(`document.querySelector('` + field("switch.rds_on") + `').value !== '20m'`)
	if got := b.value("frequency"); got != "180k" {
		t.Errorf("the other entry was undone too: %s", got)
	}
	b.ctrlShiftZ()
	b.holds("switch.rds_on", "20m")
	h.start()
	h.awaitKept("switch.rds_on", "20m")
	b.wait(`!document.querySelector('#trouble').textContent.trim()`)
	b.says("#undo", "20m")
	b.ctrlZ() // now it is taken
	b.holds("switch.rds_on", "11 mΩ")

	b.put("note.revision", "words")
	b.ctrlZ()
	b.wait(`document.querySelector('` + field("note.revision") + `').value === ''`)
	if got := h.kept("frequency"); got != "180k" {
		t.Errorf("undoing a note undid an entry: %s", got)
	}
}

// Many presses in quick succession are as many steps, and what is typed while an
// answer is under way is not lost to it.
func TestUndoOnABusyMachine(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	for _, typed := range [][2]string{{"frequency", "180k"}, {"input.nominal", "13"}, {"diode.r_d", "13m"}, {"inductor.dcr", "14m"}} {
		b.put(typed[0], typed[1])
		h.awaitKept(typed[0], typed[1])
		b.says("#undo", typed[1])
	}
	h.pause = 100 * 1e6
	b.ctrlZ()
	b.ctrlZ()
	b.ctrlZ()
	h.awaitKept("input.nominal", "12 V")
	b.holds("input.nominal", "12 V")
	if got := h.kept("frequency"); got != "180k" {
		t.Errorf("three presses undid four steps: frequency %s", got)
	}
	b.ctrlShiftZ()
	b.put("switch.rds_on", "15m") // before the answer
	h.awaitKept("switch.rds_on", "15m")
	b.wait(`document.querySelector('` + field("switch.rds_on") + `').value === '15m' && !document.querySelector('#trouble').textContent.trim()`)
	if got := b.value("input.nominal"); got != h.kept("input.nominal") || got != "13" {
		t.Errorf("the sheet shows %s, and %s is kept: the redo was overwritten", got, h.kept("input.nominal"))
	}
}

// The buttons keep the focus, to be pressed again, and the entry is brought in sight.
func TestUndoByButton(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	b.click(saying("more entries"))
	opened := `[...document.querySelectorAll('#fields details.more')].map(d => Number(d.open)).join('')`
	before := evaluate[string](b, opened)
	b.put("frequency", "180k")
	h.awaitKept("frequency", "180k")
	b.put("controller.on_time_min", "120n")
	h.awaitKept("controller.on_time_min", "120n")
	b.says("#undo", "120n")
	b.picture("sheet-undo")
	evaluate[chromedp.Void](b, `document.querySelector('.inputs').scrollTop = 0; document.getElementById('undo').focus()`)
	b.press("Enter")
	b.says("#said", "Undone: Controller: Shortest on-time 120n")
	want(b, `document.activeElement.id`, "undo")
	want(b, inSight(field("controller.on_time_min")), true)
	b.picture("sheet-undone")
	b.press("Enter")
	h.awaitKept("frequency", "250 kHz")
	b.wait(`document.getElementById('undo').getAttribute('aria-disabled') === 'true'`)
	want(b, `document.activeElement.id`, "undo")
	if got := evaluate[string](b, opened); got != before {
		t.Errorf("open was %s and is %s", before, got)
	}
	b.press("Enter")
	b.says("#said", "There is nothing to undo.")
}

// Rows that a curve was pasted into, the kind of rectifier and a reopened revision
// come and go with their step.
func TestUndoOfRowsAndRevisions(t *testing.T) {
	h := serve(t)
	h.call(201, "POST", frostSheet+"/revisions", map[string]string{"note": "first"})
	b := h.visit(frostSheet)
	b.click(`e.id === 'add-switch.rds_on_curve'`)
	b.wait(`document.getElementById('f-switch.rds_on_curve[0][0]')`)
	b.says("#undo", "rows")
	want(b, paste+`('f-switch.rds_on_curve[0][0]', '25\t1\n100\t1.4\n150\t1.8\n160\t1.9\n170\t2')`, true)
	h.awaitKept("switch.rds_on_curve[4][1]", "2")
	b.says("#undo", "5 rows → 4 rows")
	b.ctrlZ()
	b.wait(`!document.getElementById('f-switch.rds_on_curve[4][0]') && document.getElementById('f-switch.rds_on_curve[0][0]')?.value === ''`)
	b.ctrlZ()
	b.wait(`!document.getElementById('f-switch.rds_on_curve[0][0]')`)
	b.ctrlShiftZ()
	b.wait(`document.getElementById('f-switch.rds_on_curve[0][0]')`)
	b.ctrlShiftZ()
	b.wait(`document.getElementById('f-switch.rds_on_curve[4][1]')?.value === '2'`)
	b.choose("rectifier", "Down", "synchronous")
	b.wait(`document.querySelector('` + field("sync_switch.rds_on") + `')`)
	b.says("#undo", "synchronous")
	b.ctrlZ()
	b.wait(`document.querySelector('` + field("diode.v_f0") + `') && document.activeElement.id === 'f-rectifier' && document.activeElement.value === 'diode'`)

	b.open(frostSheet + "/revisions/1")
	b.click(saying("Reopen as the draft"))
	b.says(".notice", "Revision 1 is open as the draft.")
	b.drawn()
	want(b, `document.getElementById('f-switch.rds_on_curve[0][0]') === null`, true)
	b.click(`e.id === 'undo'`)
	b.wait(`document.getElementById('f-switch.rds_on_curve[4][1]')?.value === '2'`)
}

func TestUndoWithoutScripts(t *testing.T) {
	h := serve(t)
	b := h.tab()
	b.scriptless()
	b.open(frostSheet)
	b.enter("frequency", "180k")
	b.press("Enter")
	b.wait(`document.querySelector('#undo')?.textContent.includes('180k')`)
	b.drawn()
	b.tabTo(`e.id === 'undo'`)
	b.press("Enter")
	b.wait(`location.hash === '#f-frequency' && document.querySelector('#said')?.textContent.includes('Undone: Switching frequency')`)
	b.drawn()
	want(b, `document.querySelector(':target').value`, "250 kHz")
	want(b, inSight(":target"), true)
	b.picture("sheet-undone-scriptless")
	b.tabTo(entry("output.voltage")) // the Tab key goes on from there
	b.backTo(`e.id === 'redo'`)
	b.press("Enter")
	b.wait(`document.querySelector('#said')?.textContent.includes('Redone') && document.querySelector(':target')?.value === '180k'`)
}

// An undo in one window is a change like any other to the one beside it.
func TestUndoInTwoTabs(t *testing.T) {
	h := serve(t)
	mine := h.visit(frostSheet)
	mine.put("frequency", "180k")
	h.awaitKept("frequency", "180k")
	mine.says("#undo", "180k")
	theirs := h.visit(frostSheet)
	theirs.click(`e.id === 'undo'`)
	theirs.says("#said", "Undone")
	mine.expect("status of 409")
	mine.ctrlZ()
	mine.says("#trouble", "This design was changed in another window")
	mine.click(saying("Load the other and drop mine"))
	mine.wait(`document.readyState === 'complete' && document.querySelector('` + field("frequency") + `').value === '250 kHz'`)
	if got := h.kept("frequency"); got != "250 kHz" {
		t.Errorf("kept %s", got)
	}
}
