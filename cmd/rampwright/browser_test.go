package main

import (
	"context"
	"encoding/json"
	"net/url"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/chromedp/cdproto/cdp"
	"github.com/chromedp/cdproto/emulation"
	"github.com/chromedp/cdproto/log"
	"github.com/chromedp/cdproto/network"
	"github.com/chromedp/cdproto/runtime"
	"github.com/chromedp/chromedp"
)

// browser opens pages in headless Chromium. The test is skipped on a machine
// without it.
type browser struct {
	ctx context.Context
}

// browserPatience ends a browser that hangs; it judges no speed.
const browserPatience = 3 * time.Minute

func openBrowser(t *testing.T, more ...chromedp.ExecAllocatorOption) *browser {
	t.Helper()
	path, err := exec.LookPath("chromium")
	if err != nil {
		t.Skip("no page is opened: this machine has no chromium (Debian package chromium)")
	}
	patience, cancel := context.WithTimeout(context.Background(), browserPatience)
	t.Cleanup(cancel)
	options := []chromedp.ExecAllocatorOption{
		chromedp.ExecPath(path), chromedp.UserDataDir(t.TempDir()), chromedp.NoSandbox, chromedp.NoFirstRun,
	}
	for _, flag := range []string{
		"headless", "hide-scrollbars", "disable-gpu", "disable-quic", "disable-background-networking",
		"disable-component-update", "disable-sync", "disable-dev-shm-usage",
	} {
		options = append(options, chromedp.Flag(flag, true))
	}
	allocator, stop := chromedp.NewExecAllocator(patience, append(options, more...)...)
	t.Cleanup(stop)
	ctx, end := chromedp.NewContext(allocator)
	t.Cleanup(end)
	if err := chromedp.Do(ctx); err != nil {
		t.Fatal(err)
	}
	return &browser{ctx}
}

// tab is a page in a browser with what it complained of and asked for.
type tab struct {
	t        *testing.T
	ctx      context.Context
	console  []string
	requests []string
}

// open loads a file into a new tab, with its fonts.
func (b *browser) open(t *testing.T, file string) *tab {
	t.Helper()
	ctx, end := chromedp.NewContext(b.ctx)
	t.Cleanup(end)
	p := &tab{t: t, ctx: ctx}
	p.do(chromedp.Func(func(ctx context.Context, target *chromedp.Target) error {
		if _, err := cdp.Call(ctx, target, log.Enable, cdp.Empty{}); err != nil {
			return err
		}
		_, err := cdp.Call(ctx, target, network.Enable, network.EnableParams{})
		return err
	}))
	if err := chromedp.Listen(ctx, p.listen); err != nil {
		t.Fatal(err)
	}
	absolute, err := filepath.Abs(file)
	if err != nil {
		t.Fatal(err)
	}
	p.do(chromedp.Navigate((&url.URL{Scheme: "file", Path: filepath.ToSlash(absolute)}).String()))
	const lettered = `document.documentElement.getBoundingClientRect(), document.fonts.ready.then(() => true)`
	if _, err := chromedp.Run(p.ctx, chromedp.Evaluate[bool](lettered, chromedp.EvalAwaitPromise)); err != nil {
		t.Fatal(err)
	}
	return p
}

// listen keeps complaints and requests; a page asks for itself. What it carries as
// data asks for nothing.
func (p *tab) listen(event any) {
	switch e := event.(type) {
	case *log.EventEntryAdded:
		p.console = append(p.console, e.Entry.Text+" "+e.Entry.URL)
	case *runtime.EventConsoleAPICalled:
		p.console = append(p.console, "console."+string(e.Type))
	case *runtime.EventExceptionThrown:
		p.console = append(p.console, e.ExceptionDetails.Text)
	case *network.EventRequestWillBeSent:
		if !strings.HasPrefix(e.Request.URL, "data:") {
			p.requests = append(p.requests, e.Request.URL)
		}
	}
}

func (p *tab) do(steps ...chromedp.Action[chromedp.Void]) {
	p.t.Helper()
	if err := chromedp.Do(p.ctx, steps...); err != nil {
		p.t.Fatal(err)
	}
}

// show lays the page out for a medium, a scheme of colours and a width; a height
// of zero shows all of it.
func (p *tab) show(medium, scheme string, width, height int64) {
	p.t.Helper()
	p.do(chromedp.Func(func(ctx context.Context, target *chromedp.Target) error {
		_, err := cdp.Call(ctx, target, emulation.SetEmulatedMedia, emulation.SetEmulatedMediaParams{
			Media: medium, Features: []*emulation.MediaFeature{{Name: "prefers-color-scheme", Value: scheme}},
		})
		return err
	}), chromedp.EmulateViewport(width, max(height, 800)))
	if height == 0 {
		all, err := chromedp.Run(p.ctx, chromedp.Evaluate[int64]("document.documentElement.scrollHeight"))
		if err != nil {
			p.t.Fatal(err)
		}
		p.do(chromedp.EmulateViewport(width, all))
	}
}

// ask runs a script that answers in JSON.
func (p *tab) ask(script string, into any) {
	p.t.Helper()
	text, err := chromedp.Run(p.ctx, chromedp.Evaluate[string](script))
	if err != nil {
		p.t.Fatal(err)
	}
	if err := json.Unmarshal([]byte(text), into); err != nil {
		p.t.Fatal(err)
	}
}

// look runs the probe.
func (p *tab) look() *probed {
	p.t.Helper()
	found := new(probed)
	p.ask(probe, found)
	return found
}

// tooWide lists what reaches beyond the right edge of a window that would then
// have to be scrolled, and cells whose words leave them; empty where all fits.
func (p *tab) tooWide() []string {
	p.t.Helper()
	var found []string
	p.ask(`JSON.stringify([
...(document.documentElement.scrollWidth <= window.innerWidth ? [] : [...document.body.querySelectorAll('*')]
  .filter(e => e.getBoundingClientRect().right > window.innerWidth + 0.5 && !e.closest('svg'))),
...[...document.querySelectorAll('th, td, dt, dd')].filter(e => e.scrollWidth > e.clientWidth + 1),
].map(e => e.tagName + ' ' + e.textContent.slice(0, 40)))`, &found)
	return found
}

// probed is what the probe found on a page as it is shown.
type probed struct {
	Texts   int      `json:"texts"`
	Least   float64  `json:"least"` // contrast
	Faint   []string `json:"faint"` // text below a contrast of 4.5
	Covered []string `json:"covered"`
	Clashes []string `json:"clashes"` // words of one drawing over each other
	Outside []string `json:"outside"` // words beyond their drawing
}

// probe measures the contrast of every line of text with what is painted under
// its middle (WCAG 2.2, success criterion 1.4.3, relative luminance), and looks
// for words that are covered or outside their drawing.
const probe = `(() => {
const found = {texts: 0, least: 99, faint: [], covered: [], clashes: [], outside: []};
const parse = c => { const m = c.match(/[\d.]+/g); return m && c.startsWith('rgb') ? [+m[0], +m[1], +m[2], m.length > 3 ? +m[3] : 1] : null; };
const over = (top, under) => [0, 1, 2].map(i => top[i] * top[3] + under[i] * (1 - top[3])).concat(1);
const channel = v => (v /= 255) <= 0.04045 ? v / 12.92 : Math.pow((v + 0.055) / 1.055, 2.4);
const luminance = c => 0.2126 * channel(c[0]) + 0.7152 * channel(c[1]) + 0.0722 * channel(c[2]);
const contrast = (a, b) => { const x = luminance(a), y = luminance(b); return (Math.max(x, y) + 0.05) / (Math.min(x, y) + 0.05); };
const inDrawing = e => e instanceof SVGElement;
// paints lists the colours an element may have at a point: of a pattern, each.
const paints = e => {
  const style = getComputedStyle(e);
  if (!inDrawing(e) || e.tagName === 'svg') return [parse(style.backgroundColor)];
  if (e.tagName === 'text' || e.tagName === 'tspan') return [null];
  const strength = style.fillOpacity * style.opacity;
  const pattern = style.fill.match(/url\("?#([^")]+)/);
  const list = pattern ? [...document.getElementById(pattern[1]).children].flatMap(c => [getComputedStyle(c).fill, getComputedStyle(c).stroke]) : [style.fill];
  return list.map(parse).map(c => c && [c[0], c[1], c[2], c[3] * strength]);
};
const grounds = under => {
  let list = [[255, 255, 255, 1]];
  for (const e of under.reverse()) {
    const tops = paints(e).filter(c => c && c[3] > 0);
    if (tops.length) list = list.flatMap(g => tops.map(c => over(c, g)));
  }
  return list;
};
const measure = (element, node, box) => {
  const stack = document.elementsFromPoint(box.x + box.width / 2, box.y + box.height / 2);
  const at = stack.indexOf(element);
  const words = node.textContent.trim().slice(0, 40);
  if (at < 0) return false;
  for (const e of stack.slice(0, at))
    if (!element.contains(e) && !e.contains(element) && paints(e).some(c => c && c[3] > 0)) found.covered.push(words);
  const ink = parse(inDrawing(element) ? getComputedStyle(element).fill : getComputedStyle(element).color);
  found.texts++;
  for (const ground of grounds(stack.slice(at))) {
    const c = contrast(over(ink, ground), ground);
    found.least = Math.min(found.least, c);
    if (c < 4.5) found.faint.push(words + ': ' + c.toFixed(2));
  }
  return true;
};
const walker = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
for (let node; node = walker.nextNode();) {
  const element = node.parentElement;
  if (!node.textContent.trim() || element.closest('title, desc')) continue;
  const range = document.createRange();
  range.selectNodeContents(node);
  for (const box of range.getClientRects()) {
    if (box.width < 1 || measure(element, node, box)) continue;
    // It is scrolled out of its frame: bring it in.
    element.scrollIntoView({block: 'nearest', inline: 'center'});
    const moved = range.getClientRects()[0];
    if (!measure(element, node, moved)) found.covered.push(node.textContent.trim().slice(0, 40));
    break;
  }
}
for (const drawing of document.querySelectorAll('svg')) {
  const frame = drawing.getBoundingClientRect();
  const boxes = [...drawing.querySelectorAll('text')].map(e => {
    const b = e.getBoundingClientRect();
    return {words: e.textContent, x: b.x, y: b.y + b.height * 0.15, w: b.width, h: b.height * 0.7};
  });
  boxes.forEach((a, i) => {
    if (a.x < frame.left - 0.5 || a.x + a.w > frame.right + 0.5 || a.y < frame.top || a.y + a.h > frame.bottom) found.outside.push(a.words);
    for (const b of boxes.slice(i + 1))
      if (a.x + a.w > b.x + 0.5 && b.x + b.w > a.x + 0.5 && a.y + a.h > b.y && b.y + b.h > a.y) found.clashes.push(a.words + ' | ' + b.words);
  });
}
return JSON.stringify(found);
})()`
