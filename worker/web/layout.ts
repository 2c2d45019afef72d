/** The frame of every page: head, masthead, foot. Nothing in it comes from a third party, and it works without scripts. */
import { CLOSING, EXPIRED } from '../../lib/brief/words/index.ts';
import { html, type Html, type Piece } from './html.ts';
import { HATCHES } from './pictures/hatches.ts';

export interface Page {
  /** The most restrictive statement first: a tab shows its beginning. */
  readonly title: string;
  readonly description: string;
  readonly body: Html;
  readonly demo: boolean;
  readonly credits: readonly { readonly text: string; readonly href: string }[];
  /** Query that keeps the reader's units on links to other pages: "" or "?speed=kt". */
  readonly keep: string;
}

/** Everything a page may load, send to or be framed by. */
export const CONTENT_SECURITY_POLICY = [
  "default-src 'none'", "style-src 'self'", "script-src 'self'", "img-src 'self'", "connect-src 'self'", "manifest-src 'self'", "worker-src 'self'",
  "form-action 'self'", "base-uri 'none'", "frame-ancestors 'none'",
].join('; ');

function creditLinks(page: Page): Piece {
  if (page.credits.length === 0) return null;
  const links = page.credits.map(({ text, href }) => html` <a href="${href}" rel="external">${text}</a> (<a href="https://creativecommons.org/licenses/by/4.0/" rel="license external">CC BY 4.0</a>, margins computed from it).`);
  return html`<p>${links}</p>`;
}

export function layout(page: Page): string {
  const demo = page.demo ? html`<p class="invented"><strong>Invented weather.</strong> A demonstration, about no real place or day.</p>` : null;
  return `<!doctype html>\n${html`<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1">
<title>${page.title}</title><meta name="description" content="${page.description}"><meta name="color-scheme" content="light dark">
<meta name="theme-color" content="#f7f2e6" media="(prefers-color-scheme: light)"><meta name="theme-color" content="#14171c" media="(prefers-color-scheme: dark)">
<link rel="stylesheet" href="/dawnmargin.css"><link rel="icon" href="/icon.svg" type="image/svg+xml"><link rel="apple-touch-icon" href="/icon-192.png"><link rel="manifest" href="/dawnmargin.webmanifest"><script src="/expiry.js" defer></script></head>
<body data-expired="${EXPIRED}"><a class="skip" href="#main">To the content</a>${HATCHES}
<header class="mast"><a class="name" href="/${page.keep}"><svg width="22" height="22" viewBox="0 0 22 22" aria-hidden="true"><path class="slate-fill" d="M3 2h7v7H3z"/><path class="plum-fill" d="M3 9h7v4H3z"/><path class="edge" d="M3 2h7v18H3z"/><path class="line" d="M0 20.5h22M14 2v18"/></svg>Dawnmargin</a><nav aria-label="Pages"><a href="/${page.keep}">Board</a><a href="/plan">Training day</a><a href="/subscribe">Subscribe</a></nav></header>
<main id="main">${demo}${page.body}</main>
<footer class="foot"><p>${CLOSING}</p>${creditLinks(page)}${page.demo ? html`<p>Invented weather.</p>` : null}</footer></body></html>`.toString()}\n`;
}
