// Opens report pages in headless Chromium and measures them: node check.mjs FOLDER_FOR_PICTURES PAGE.html...
// Chromium is driven over its own pipe (DevTools protocol, null-terminated JSON on file descriptors 3 and 4); no package is needed.
import { spawn, execFileSync } from "node:child_process";
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { basename, join, resolve } from "node:path";
import { tmpdir } from "node:os";

const [pictures, ...pages] = process.argv.slice(2);
if (!pictures || pages.length === 0) {
  console.error("use: node check.mjs FOLDER_FOR_PICTURES PAGE.html...");
  process.exit(2);
}
mkdirSync(pictures, { recursive: true });
const profile = mkdtempSync(join(tmpdir(), "page-check-"));
const chromium = spawn(
  process.env.CHROMIUM ?? "chromium",
  ["--headless", "--no-sandbox", "--disable-gpu", "--hide-scrollbars", "--remote-debugging-pipe", `--user-data-dir=${profile}`, "about:blank"],
  { stdio: ["ignore", "ignore", "ignore", "pipe", "pipe"] },
);

let last = 0;
const waiting = new Map();
const listeners = new Set();
let rest = "";
chromium.stdio[4].setEncoding("utf8");
chromium.stdio[4].on("data", (data) => {
  rest += data;
  for (let end; (end = rest.indexOf("\0")) >= 0; rest = rest.slice(end + 1)) {
    const message = JSON.parse(rest.slice(0, end));
    if (message.id) {
      const { done, fail } = waiting.get(message.id);
      waiting.delete(message.id);
      message.error ? fail(new Error(message.error.message)) : done(message.result);
    } else {
      listeners.forEach((listener) => listener(message));
    }
  }
});
const send = (method, params = {}, sessionId) =>
  new Promise((done, fail) => {
    last += 1;
    waiting.set(last, { done, fail });
    chromium.stdio[3].write(JSON.stringify({ id: last, method, params, sessionId }) + "\0");
  });

// What is measured inside the page; returns faults in words.
const measure = () => {
  const faults = [];
  const width = document.documentElement.clientWidth;
  const name = (e) => `<${e.tagName.toLowerCase()}> "${(e.textContent ?? "").trim().slice(0, 40)}"`;
  if (document.documentElement.scrollWidth > width) faults.push(`the page is ${document.documentElement.scrollWidth} px wide`);
  if (document.querySelector("script, iframe, object, embed, link[rel=stylesheet], img")) faults.push("it holds a script, frame, image or style sheet");
  for (const e of document.querySelectorAll("body *")) {
    if (e.closest(".wide") && !e.matches(".wide")) continue;
    const box = e.getBoundingClientRect();
    if (box.width > 0 && (box.right > width + 1 || box.left < -1)) faults.push(`${name(e)} ends at ${box.right.toFixed(0)} px`);
  }
  for (const section of document.querySelectorAll("main, section")) {
    let above = null;
    for (const e of section.children) {
      const box = e.getBoundingClientRect();
      if (above && box.top < above.bottom - 1) faults.push(`${name(e)} overlaps what stands above it`);
      above = box;
    }
  }
  for (const cell of document.querySelectorAll("td, th")) {
    if (cell.scrollWidth > cell.clientWidth + 2) faults.push(`${name(cell)} runs out of its cell`);
  }
  const ids = [...document.querySelectorAll("[id]")].map((e) => e.id);
  const twice = ids.filter((id, at) => ids.indexOf(id) !== at);
  if (twice.length) faults.push(`ids that stand twice: ${twice.join(", ")}`);
  for (const link of document.querySelectorAll("a[href]")) {
    const to = link.getAttribute("href");
    if (!to.startsWith("#") || !document.getElementById(decodeURIComponent(to.slice(1)))) faults.push(`link to ${to} leads nowhere`);
  }
  const figures = [...document.querySelectorAll("figure")];
  if (figures.length === 0) faults.push("no figure");
  for (const figure of figures) {
    const svg = figure.querySelector("svg");
    const box = svg?.getBoundingClientRect();
    if (!svg || box.width < 300 || box.height < 60) faults.push(`${figure.id} has no size`);
    else {
      if (!svg.querySelector("title")?.textContent || !svg.querySelector("desc")?.textContent) faults.push(`${figure.id} has no words`);
      const words = [...svg.querySelectorAll("text")].map((e) => [e, e.getBoundingClientRect()]);
      for (const [e, b] of words) {
        if (b.left < box.left - 1 || b.right > box.right + 1 || b.top < box.top - 1 || b.bottom > box.bottom + 1) faults.push(`${figure.id}: ${name(e)} leaves the drawing`);
      }
      // boxes of letters hold some air above and below: a fifth of the height may be shared
      words.forEach(([e, a], at) =>
        words.slice(at + 1).forEach(([f, b]) => {
          const across = Math.min(a.right, b.right) - Math.max(a.left, b.left);
          const down = Math.min(a.bottom, b.bottom) - Math.max(a.top, b.top);
          if (across > 0.5 && down > 0.25 * Math.min(a.height, b.height)) faults.push(`${figure.id}: ${name(e)} and ${name(f)} overlap`);
        }),
      );
    }
  }
  return faults;
};

// Marks the first and the last cell of each table, to find them again in the printed pages.
const mark = (inches) => {
  const page = inches * 96;
  return [...document.querySelectorAll("table")].map((table, at) => {
    const cells = table.querySelectorAll("th, td");
    [["a", cells[0]], ["z", cells[cells.length - 1]]].forEach(([end, cell]) => {
      const tag = document.createElement("span");
      tag.style.cssText = "font-size:1px;position:absolute";
      tag.textContent = `QQ${at}${end}QQ`;
      cell.append(tag);
    });
    return { at, words: table.caption?.textContent ?? "", fits: table.getBoundingClientRect().height < 0.9 * page };
  });
};

const faults = [];
try {
  for (const page of pages.map((page) => resolve(page))) {
    const name = basename(page, ".html");
    const { targetId } = await send("Target.createTarget", { url: "about:blank" });
    const { sessionId } = await send("Target.attachToTarget", { targetId, flatten: true });
    const ask = (method, params) => send(method, params, sessionId);
    const found = (words) => faults.push(`${name}: ${words}`);
    let loaded;
    const listener = ({ method, params, sessionId: of }) => {
      if (of !== sessionId) return;
      if (method === "Page.loadEventFired") loaded?.();
      if (method === "Runtime.exceptionThrown") found(`exception: ${params.exceptionDetails.text}`);
      if (method === "Runtime.consoleAPICalled" && ["error", "warning"].includes(params.type)) found(`console: ${JSON.stringify(params.args)}`);
      if (method === "Log.entryAdded" && params.entry.level === "error") found(`log: ${params.entry.text}`);
      if (method === "Network.requestWillBeSent" && params.request.url !== `file://${page}` && !params.request.url.startsWith("data:")) {
        found(`asks for ${params.request.url}`);
      }
    };
    listeners.add(listener);
    for (const domain of ["Page", "Runtime", "Network", "Log"]) await ask(`${domain}.enable`);
    const evaluate = async (code) => {
      const { result, exceptionDetails } = await ask("Runtime.evaluate", { expression: code, returnByValue: true });
      if (exceptionDetails) throw new Error(exceptionDetails.exception?.description ?? exceptionDetails.text);
      return result.value;
    };
    const open = async () => {
      const load = new Promise((done) => (loaded = done));
      await ask("Page.navigate", { url: `file://${page}` });
      await load;
    };
    for (const width of [1200, 400]) {
      await ask("Emulation.setDeviceMetricsOverride", { width, height: 900, deviceScaleFactor: 1, mobile: false });
      await open();
      for (const fault of await evaluate(`(${measure})()`)) found(`at ${width} px ${fault}`);
      const height = await evaluate("document.documentElement.scrollHeight");
      const { data } = await ask("Page.captureScreenshot", {
        captureBeyondViewport: true,
        clip: { x: 0, y: 0, width, height: Math.min(height, 15000), scale: 1 },
      });
      writeFileSync(join(pictures, `${name}-${width}.png`), Buffer.from(data, "base64"));
      // each entry of the contents, clicked, brings its section to the top
      const lost = await evaluate(`(${() =>
        [...document.querySelectorAll("nav a")].filter((link) => {
          link.click();
          const target = document.getElementById(decodeURIComponent(link.hash.slice(1)));
          const box = target?.getBoundingClientRect();
          return !(box && box.top > -5 && box.bottom < window.innerHeight);
        }).map((link) => link.textContent)})()`);
      for (const link of lost) found(`the link "${link}" does not arrive`);
    }
    for (const [paper, width, height] of [["a4", 8.27, 11.69], ["letter", 8.5, 11]]) {
      await ask("Emulation.setDeviceMetricsOverride", { width: Math.round((width - 1.1) * 96), height: 900, deviceScaleFactor: 1, mobile: false });
      await ask("Emulation.setEmulatedMedia", { media: "print" });
      await open();
      const wide = await evaluate("[...document.querySelectorAll('table, svg')].filter((e) => e.getBoundingClientRect().right > document.documentElement.clientWidth + 2).map((e) => e.textContent.trim().slice(0, 50))");
      for (const fault of wide) found(`on ${paper} a table or figure is too wide: ${fault}`);
      const tables = await evaluate(`(${mark})(${height - 1.25})`);
      const { data } = await ask("Page.printToPDF", { paperWidth: width, paperHeight: height, preferCSSPageSize: false });
      const file = join(pictures, `${name}-${paper}.pdf`);
      writeFileSync(file, Buffer.from(data, "base64"));
      const printed = execFileSync("pdftotext", ["-raw", file, "-"], { maxBuffer: 1 << 28 }).toString().split("\f");
      const on = (tag) => printed.findIndex((text) => text.includes(tag));
      for (const { at, words, fits } of tables) {
        const [first, end] = [on(`QQ${at}aQQ`), on(`QQ${at}zQQ`)];
        if (first < 0 || end < 0) found(`on ${paper} table ${at} is not printed: ${words}`);
        else if (fits && first !== end) found(`on ${paper} table ${at} is torn between pages ${first + 1} and ${end + 1}: ${words}`);
      }
      await ask("Emulation.setEmulatedMedia", { media: "" });
    }
    listeners.delete(listener);
    await send("Target.closeTarget", { targetId });
    console.log(`${name}: opened at 1200 and 400 px, printed on A4 and Letter`);
  }
} finally {
  const gone = new Promise((done) => chromium.once("exit", done));
  await send("Browser.close").catch(() => chromium.kill());
  await Promise.race([gone, new Promise((done) => setTimeout(done, 5000))]);
  chromium.kill();
  try {
    rmSync(profile, { recursive: true, force: true, maxRetries: 5, retryDelay: 200 });
  } catch (error) {
    console.error(`the profile in ${profile} stays: ${error.code}`);
  }
}
for (const fault of faults) console.error(fault);
process.exit(faults.length ? 1 : 0);
