// A page left open, or kept by a browser, must not show a verdict after its time: it says that it expired instead.
(() => {
  const words = document.body.dataset.expired ?? 'Expired.';
  // How far this clock is behind the server's. One that is ahead only expires a page early.
  let behindMs = 0;
  const replace = (part, text) => {
    const notice = document.createElement('p');
    notice.className = 'day';
    notice.textContent = text;
    part.replaceWith(notice);
    document.title = text;
  };
  const expire = () => {
    for (const part of document.querySelectorAll('[data-valid-until]')) {
      const until = Date.parse(part.dataset.validUntil ?? '');
      if (!(Date.now() + behindMs < until)) {
        replace(part, words);
        navigator.serviceWorker?.controller?.postMessage('expire');
      }
    }
  };
  const measure = async () => {
    const asked = await fetch('/icon.svg', { method: 'HEAD', cache: 'no-store' }).catch(() => null);
    const at = Date.parse(asked?.headers.get('date') ?? '');
    if (!Number.isNaN(at)) behindMs = Math.max(0, at - Date.now());
    expire();
  };
  // A newer brief has come while the page stood open.
  const superseded = ({ data }) => {
    const newer = Date.parse(data?.newer ?? '');
    for (const part of document.querySelectorAll('[data-valid-until]')) {
      if (!(Date.parse(part.dataset.issuedAt ?? '') >= newer)) replace(part, 'Expired: a newer brief has come. Load this page again.');
    }
  };
  const register = () => { navigator.serviceWorker?.register('/sw.js').catch(() => undefined); };
  expire();
  setInterval(expire, 30_000);
  addEventListener('pageshow', expire);
  document.addEventListener('visibilitychange', expire);
  // The first moments of a page are for reading it. The service worker comes some seconds later; not with a touch, which may
  // be on its way to another page.
  addEventListener('load', () => setTimeout(() => {
    if (document.querySelector('[data-valid-until]') !== null) void measure();
    navigator.serviceWorker?.addEventListener('message', superseded);
    setTimeout(register, 5000);
  }, 200));
})();
