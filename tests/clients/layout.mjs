// How a page with charts must look, whatever it shows: asked of a browser.
import assert from 'node:assert/strict';

// A phone and a desktop, on light and on dark.
export const screens = [360, 1280].flatMap((width) => ['light', 'dark'].map((colorScheme) => (
  { viewport: { width, height: 800 }, colorScheme })));

// Runs in the page: what is wrong with its layout, in words.
function faults() {
  const found = [];
  const told = (text) => `'${text.slice(0, 60)}'`;
  const root = document.documentElement;
  if (root.scrollWidth > innerWidth) found.push(`the page is ${root.scrollWidth} wide on ${innerWidth}`);
  const ids = [...document.querySelectorAll('[id]')].map((element) => element.id);
  if (new Set(ids).size < ids.length) found.push('an id occurs twice');

  // Colours as they are painted, over the page's own background.
  const probe = document.body.appendChild(document.createElement('div'));
  probe.style.background = 'Canvas';
  const canvas = getComputedStyle(probe).backgroundColor;
  probe.remove();
  const luminance = (colour) => {
    const [r, g, b] = colour.match(/[\d.]+/g).map((part) => {
      const c = part / 255;
      return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
    });
    return 0.2126 * r + 0.7152 * g + 0.0722 * b;
  };
  const contrast = (colour) => {
    const [low, high] = [luminance(colour), luminance(canvas)].sort((a, b) => a - b);
    return (high + 0.05) / (low + 0.05);
  };

  for (const svg of document.querySelectorAll('svg')) {
    const name = svg.querySelector('title').textContent;
    const box = svg.getBoundingClientRect();
    const texts = [...svg.querySelectorAll('text')];
    const boxes = texts.map((text) => text.getBoundingClientRect());
    boxes.forEach((a, i) => {
      const text = texts[i].textContent;
      if (a.left < box.left - 0.5 || a.right > box.right + 0.5 || a.top < box.top - 0.5
          || a.bottom > box.bottom + 0.5) found.push(`${told(name)}: ${told(text)} is clipped`);
      const size = parseFloat(getComputedStyle(texts[i]).fontSize) * box.width / 360;
      if (size < 10) found.push(`${told(name)}: ${told(text)} is ${size} pixels high`);
      // WCAG 2.2, 1.4.3 and 1.4.11.
      if (contrast(getComputedStyle(texts[i]).fill) < 4.5) found.push(`${told(text)} is too faint`);
      boxes.slice(0, i).forEach((b, j) => {
        if (a.left < b.right && b.left < a.right && a.top < b.bottom - 0.5 && b.top < a.bottom - 0.5)
          found.push(`${told(name)}: ${told(text)} lies on ${told(texts[j].textContent)}`);
      });
    });
    for (const mark of svg.querySelectorAll('circle, rect')) {
      if (contrast(getComputedStyle(mark).fill) < 3) found.push(`${told(name)}: marks are too faint`);
      const place = mark.getBoundingClientRect();
      if (place.left < box.left - 0.5 || place.right > box.right + 0.5 || place.top < box.top - 0.5
          || place.bottom > box.bottom + 0.5) found.push(`${told(name)}: a mark is clipped`);
    }
    if (svg.getAttribute('role') !== 'img') found.push(`${told(name)}: has no role`);
    const told_by = [name, svg.querySelector('desc').textContent].filter((part) => part).join('. ');
    if (svg.getAttribute('aria-label') !== told_by) found.push(`${told(name)}: is not named by what it says`);
  }
  return found;
}

// Opens `open(page)` on every screen and asks `ask(page)` of it there too. Anything that the page
// asks of the network, says on the console or pops up is a fault.
export async function onEveryScreen(browser, open, ask = async () => {}) {
  for (const screen of screens) {
    const context = await browser.newContext(screen);
    const page = await context.newPage();
    const events = [];
    page.on('request', (request) => {
      if (!request.isNavigationRequest()) events.push(`asks for ${request.url()}`);
    });
    page.on('dialog', (dialog) => { events.push(`pops up ${dialog.message()}`); dialog.dismiss(); });
    page.on('console', (message) => events.push(`says ${message.text()}`));
    page.on('pageerror', (error) => events.push(`fails: ${error}`));
    await open(page);
    assert.deepEqual(await page.evaluate(faults), [], JSON.stringify(screen));
    await ask(page, screen);
    assert.deepEqual(events, []);
    await context.close();
  }
}
