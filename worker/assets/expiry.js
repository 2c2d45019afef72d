// A page left open, or kept by a browser, must not show a verdict after its time: it says that it expired instead.
(() => {
  const words = document.body.dataset.expired ?? 'Expired.';
  const expire = () => {
    for (const part of document.querySelectorAll('[data-valid-until]')) {
      const until = Date.parse(part.dataset.validUntil ?? '');
      if (Date.now() < until) continue;
      const notice = document.createElement('p');
      notice.className = 'day';
      notice.textContent = words;
      part.replaceWith(notice);
      document.title = words;
    }
  };
  expire();
  setInterval(expire, 30_000);
  addEventListener('pageshow', expire);
  document.addEventListener('visibilitychange', expire);
})();
