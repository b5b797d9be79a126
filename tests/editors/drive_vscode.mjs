// node drive_vscode.mjs SCENARIO JOB: does what a person would in the window of code-server and prints, as JSON, what
// that person would have seen. JOB is JSON: url, folder, chromium, modules, screenshots, and what the scenario needs.
import { readFile, rm } from 'node:fs/promises';
import { createRequire } from 'node:module';

const [scenario, text] = process.argv.slice(2);
const job = JSON.parse(text);
const { chromium } = createRequire(job.modules)('playwright-core');

const browser = await chromium.launch({
  executablePath: job.chromium,
  args: [
    '--no-sandbox', // root has none
    '--disable-gpu',
    '--disable-dev-shm-usage',
    '--disable-background-networking',
    '--disable-component-update',
    '--host-resolver-rules=MAP * ~NOTFOUND , EXCLUDE 127.0.0.1', // stays on this machine
  ],
});
const page = await browser.newPage({ viewport: { width: 1180, height: 720 } });
page.setDefaultTimeout(20_000);

const picture = (name) =>
  page.screenshot({ path: `${job.screenshots}/vscode-${name}.png`, animations: 'disabled' });
const line = (locator) => locator.innerText().then((shown) => shown.replace(/\s+/g, ' ').trim());

/** Waits for what the window does not show. */
async function until(holds) {
  const end = Date.now() + 20_000;
  while (!(await holds())) {
    if (Date.now() > end) throw new Error(`not within 20 s: ${holds}`);
    await page.waitForTimeout(50);
  }
}

/** Opens the job's band file in a window on its folder. */
async function openFile() {
  const file = `vscode-remote://${new URL(job.url).host}${job.folder}/${job.file}`;
  const payload = JSON.stringify([['openFile', file]]);
  await page.goto(`${job.url}/?folder=${job.folder}&payload=${encodeURIComponent(payload)}`);
  await page.locator(`.tab[data-resource-name="${job.file}"]`).waitFor();
  await page.locator('.view-lines').first().waitFor();
}

/** Types into the line that a key opens at the top, takes the first offer with a text, and sees the line go. */
async function quickInput(key, typed, offer) {
  const widget = page.locator('.quick-input-widget');
  await page.keyboard.press(key);
  await widget.locator('input.input').fill(typed);
  await widget.locator('.monaco-list-row').filter({ hasText: offer }).first().waitFor();
  await page.keyboard.press('Enter');
  await widget.waitFor({ state: 'hidden' });
}

/** Runs a command by its title, from the list of all commands. */
const command = (title) => quickInput('F1', `>${title}`, title);

/** Puts the cursor at a place, as with "Go to Line". */
async function goTo({ line, column }) {
  await quickInput('Control+g', `:${line}:${column}`, `line ${line}`);
  await page.locator('.statusbar').getByText(`Ln ${line}, Col ${column}`).waitFor();
}

/** The hover at a place, once it holds a text. The window may close one that it was still filling: then once more. */
async function hoverAt(place, expected) {
  for (let attempt = 1; ; attempt++) {
    await page.keyboard.press('Escape');
    await goTo(place);
    await page.keyboard.press('Control+Alt+F9');
    const hover = page.locator('.monaco-hover:visible').filter({ hasText: expected }).first();
    try {
      await hover.waitFor({ timeout: 4_000 });
      return hover;
    } catch (problem) {
      if (attempt === 3) throw problem;
    }
  }
}

const scenarios = {
  /** Squiggle, problem, hovers, quick fix. */
  async trouble() {
    const seen = {};
    await openFile();
    await page.locator('.squiggly-error').first().waitFor();
    seen.status = await line(page.locator('.statusbar-item').filter({ hasText: /bandwright \d/ }));

    await page.keyboard.press('Control+Alt+F10');
    const problem = page
      .locator('.markers-panel-container .monaco-list-row')
      .filter({ hasText: job.message });
    seen.problem = await line(problem.first());
    await picture('problems');
    await page.keyboard.press('Control+j'); // closes the panel

    await page.keyboard.press('Control+b'); // and the side bar: the file is what matters
    const hover = await hoverAt(job.name, job.family);
    seen.hover = await hover.innerText();
    await picture('hover');
    const findingHover = await hoverAt(job.finding, job.message);
    seen.findingHover = await findingHover.innerText();
    await picture('finding');

    await page.keyboard.press('Escape');
    await goTo(job.finding);
    await page.keyboard.press('Control+.');
    const rows = page.locator('.action-widget .monaco-list-row');
    await rows.filter({ hasText: job.remedy }).first().waitFor();
    seen.offered = await rows.allInnerTexts();
    await picture('remedies');
    await rows.filter({ hasText: job.remedy }).first().click();
    await page.locator(`.tab.dirty[data-resource-name="${job.file}"]`).waitFor();

    await page.keyboard.press('Control+Alt+F10');
    await problem.first().waitFor({ state: 'detached' });
    await picture('after');
    return seen;
  },

  /** The message where the server is not found, the page that its button opens; then the cause goes, and a restart. */
  async missing() {
    const seen = {};
    await openFile();
    const message = page.locator('.notification-toast').filter({ hasText: 'bandwright' });
    seen.message = await line(message.locator('.notification-list-item-message'));
    seen.buttons = await message
      .locator('.notification-list-item-buttons-container .monaco-button')
      .allInnerTexts();
    seen.status = await line(page.locator('.statusbar-item').filter({ hasText: 'bandwright' }));
    await picture('missing');
    await message.getByText('How to Set Up').click();
    const preview = page.frameLocator('iframe.webview.ready').frameLocator('iframe#active-frame');
    await preview.getByRole('heading', { name: 'Set up' }).waitFor();
    await picture('set-up');

    await rm(job.settings);
    await page.locator(`.tab[data-resource-name="${job.file}"]`).click();
    const running = page.locator('.statusbar-item').filter({ hasText: /bandwright \d/ });
    await running.waitFor();
    await command('bandwright: Show the Log');
    await page.locator('.panel').getByRole('combobox').filter({ hasText: 'bandwright' }).waitFor();
    await command('bandwright: Restart the Server');
    await until(async () => (await readFile(job.starts, 'utf8')).split('\n').length > 2);
    await running.waitFor();
    await picture('log');
    return seen;
  },
};

try {
  console.log(JSON.stringify(await scenarios[scenario]()));
} catch (problem) {
  await picture(`${scenario}-failed`);
  console.error(String(problem));
  process.exitCode = 1;
} finally {
  await browser.close();
}
