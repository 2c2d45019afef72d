// The service worker: shows a push, never an old one as current; keeps no page, so that it can never show an old verdict.
const STATE = 'dawnmargin-pushes';
const SHELL = 'dawnmargin-shell-1';
const FILES = ['/offline.html', '/dawnmargin.css', '/icon.svg'];
const EXPIRED = { title: 'Expired', body: 'A brief has passed its time. Look at the board for what holds now.' };

self.addEventListener('install', (event) => {
  event.waitUntil(caches.open(SHELL).then((cache) => cache.addAll(FILES.map((file) => new Request(file, { cache: 'reload' })))).then(() => self.skipWaiting()));
});

self.addEventListener('activate', (event) => {
  event.waitUntil((async () => {
    for (const name of await caches.keys()) if (name !== SHELL && name !== STATE) await caches.delete(name);
    await self.clients.claim();
    await inLine(expire);
  })());
});

/** Pages come from the network or not at all; without it there is a page that says so. */
self.addEventListener('fetch', (event) => {
  const { request } = event;
  if (request.method !== 'GET') return;
  if (request.mode === 'navigate') {
    event.respondWith(fetch(request).catch(async () => (await caches.match('/offline.html')) ?? Response.error()));
    event.waitUntil(Promise.all([inLine(expire), renew()]));
  } else if (FILES.includes(new URL(request.url).pathname)) {
    event.respondWith(fetch(request).catch(async () => (await caches.match(request)) ?? Response.error()));
  }
});

// What the newest brief of a thread was, kept beyond its notification: it may have been wiped away before an older one comes.
const key = (name) => new Request(`/push-state/${encodeURIComponent(name)}`);

async function recall(name) {
  const kept = await (await caches.open(STATE)).match(key(name));
  return kept === undefined ? null : kept.json().catch(() => null);
}

async function keep(name, value) {
  await (await caches.open(STATE)).put(key(name), new Response(JSON.stringify(value)));
}

const instant = (text) => (typeof text === 'string' ? Date.parse(text) : NaN);
/** Without a time until which it holds, nothing holds. */
const isPast = (brief) => !(instant(brief.validUntil) > Date.now());
const clock = (text) => new Date(text).toLocaleTimeString([], { hour: '2-digit', minute: '2-digit' });

function read(event) {
  try {
    const value = event.data.json();
    return typeof value === 'object' && value !== null && typeof value.title === 'string' && !Number.isNaN(instant(value.issuedAt)) ? value : null;
  } catch {
    return null;
  }
}

// One after the other: two pushes that come at once would each find no newer one, and a notification that is put up while
// the list of notifications is read may drop out of that list (Chromium 156), where nothing could take it away any more.
let line = Promise.resolve();

function inLine(work) {
  line = line.catch(() => undefined).then(work);
  return line;
}

self.addEventListener('push', (event) => {
  const push = read(event);
  event.waitUntil(inLine(() => arrived(push)));
});

async function arrived(push) {
  await expire();
  if (push === null) return show({ ...EXPIRED, tag: 'unreadable', title: 'Cannot say: a message came that cannot be read', silent: true });
  if (push.kind === 'confirm') return confirm(push);
  const tag = push.kind === 'test' ? 'test' : `brief ${push.thread ?? ''}`;
  const newest = await recall(tag);
  const isNew = newest === null || instant(push.issuedAt) > instant(newest.issuedAt);
  const current = isNew ? push : newest;
  if (isNew) await keep(tag, push);
  // Each push has to show something; one that is late, old or a repeat shows quietly what holds, or that nothing does.
  if (isPast(current)) return show({ ...EXPIRED, tag, silent: true, current });
  await show({ title: current.title, body: `As of ${clock(current.issuedAt)}, until ${clock(current.validUntil)}. ${current.body ?? ''}`, tag, silent: !isNew, current });
  if (isNew) await report(push);
  if (isNew && push.kind !== 'test') await tell({ newer: push.issuedAt });
}

async function tell(message) {
  for (const page of await self.clients.matchAll({ includeUncontrolled: true })) page.postMessage(message);
}

const post = (path, body) => fetch(path, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) }).catch(() => null);

/** What a push service has taken is seen by nobody yet; only who showed it can say so. */
async function report({ id }) {
  if (typeof id !== 'string' || !id.startsWith('msg_')) return;
  if ((await post('/api/v1/push/shown', { id }))?.ok) await tell({ shown: id });
}

/** This browser asked to be told: what it was sent goes back, and shows that the address is its own. */
async function confirm({ nonce, validUntil, issuedAt }) {
  const answer = isPast({ validUntil }) ? null : await post('/api/v1/subscriptions/confirm-push', { nonce });
  const subscription = await self.registration.pushManager.getSubscription().catch(() => null);
  if (answer?.ok && subscription !== null) await keep('told', { at: Date.now(), ...subscription.toJSON() });
  const words = answer?.ok
    ? { title: 'This browser is told from now on', body: 'It has answered by itself.' }
    : { title: 'Not confirmed: this browser is not told', body: 'The page of your subscription can ask it again.' };
  await show({ ...words, tag: 'confirm', silent: true, current: { issuedAt, validUntil } });
  if (answer?.ok) await tell({ confirmed: true });
}

function show({ title, body, tag, silent, current = {} }) {
  const { url = '/', validUntil = null, issuedAt = null, id = null } = current;
  return self.registration.showNotification(title, {
    body, tag, silent, renotify: !silent, icon: '/icon-192.png', badge: '/badge.png', data: { url, validUntil, issuedAt, id },
    ...(issuedAt === null ? {} : { timestamp: instant(issuedAt) }),
  });
}

/** Takes away every notification whose time has passed, and forgets what has long passed. */
async function expire() {
  for (const shown of await self.registration.getNotifications()) if (shown.data?.validUntil && isPast(shown.data)) shown.close();
  const cache = await caches.open(STATE);
  for (const request of await cache.keys()) {
    const kept = await (await cache.match(request))?.json().catch(() => null);
    if (kept?.validUntil && instant(kept.validUntil) < Date.now() - 2 * 86_400_000) await cache.delete(request);
  }
}

self.addEventListener('message', (event) => { if (event.data === 'expire') event.waitUntil(inLine(expire)); });

self.addEventListener('notificationclick', (event) => {
  event.notification.close();
  const asked = new URL(event.notification.data?.url ?? '/', self.location.origin);
  const url = asked.origin === self.location.origin ? asked.href : self.location.origin;
  event.waitUntil((async () => {
    const pages = await self.clients.matchAll({ type: 'window' });
    const open = pages.find((page) => page.url === url);
    // An open page may be old: it is loaded anew.
    if (open !== undefined) await (await open.focus()).navigate(url);
    else await self.clients.openWindow(url);
  })());
});

/** The browser has changed its address with the push service: the new one is told, now or at the next visit. */
self.addEventListener('pushsubscriptionchange', (event) => event.waitUntil((async () => {
  const old = event.oldSubscription?.toJSON() ?? null;
  const options = event.oldSubscription?.options;
  const fresh = event.newSubscription ?? (options === undefined ? null : await self.registration.pushManager.subscribe({ userVisibleOnly: true, applicationServerKey: options.applicationServerKey }));
  if (old === null || fresh === null) return;
  await keep('renew', { old, fresh: fresh.toJSON() });
  await renew();
})()));

/** At a visit: the address of this browser as it is now, where it was told under another one, or under another key. */
async function renew() {
  await moved().catch(() => undefined);
  const waiting = await recall('renew');
  if (waiting === null) return;
  const answer = await post('/api/v1/push/renew', waiting);
  // Kept until somebody has taken it, or says that there is nobody to renew.
  if (answer === null || !(answer.ok || answer.status === 410)) return;
  const cache = await caches.open(STATE);
  await cache.delete(key('renew'));
  if (answer.ok) await keep('told', { at: Date.now(), ...waiting.fresh });
  else await cache.delete(key('told'));
}

const LOOKED_AT_MS = 86_400_000;

async function moved() {
  const told = await recall('told');
  if (told === null || Date.now() - told.at < LOOKED_AT_MS || Notification.permission !== 'granted') return;
  const answer = await fetch('/api/v1/push/key');
  if (!answer.ok) return;
  const { publicKey } = await answer.json();
  const wanted = Uint8Array.from(atob(publicKey.replaceAll('-', '+').replaceAll('_', '/')), (character) => character.charCodeAt(0));
  let now = await self.registration.pushManager.getSubscription();
  const its = new Uint8Array(now?.options.applicationServerKey ?? []);
  if (now !== null && its.length > 0 && its.join() !== wanted.join()) {
    await now.unsubscribe();
    now = null;
  }
  const fresh = (now ?? await self.registration.pushManager.subscribe({ userVisibleOnly: true, applicationServerKey: wanted })).toJSON();
  const old = { endpoint: told.endpoint, keys: told.keys };
  if ((await recall('renew')) === null) await keep('renew', { old, fresh });
}
