// The desk's pages: asks this browser for a push address when a button is pressed, and looks again at what is under way.
(() => {
  const bytesOf = (base64Url) => Uint8Array.from(atob(base64Url.replaceAll('-', '+').replaceAll('_', '/')), (character) => character.charCodeAt(0));

  // Push: permission is asked for on a press of the button, never before.
  const addressOf = async (key) => {
    // A page registers it by itself only after some seconds.
    await navigator.serviceWorker.register('/sw.js');
    const registration = await navigator.serviceWorker.ready;
    const ask = () => registration.pushManager.subscribe({ userVisibleOnly: true, applicationServerKey: bytesOf(key) });
    try {
      return await ask();
    } catch (error) {
      // An address that was made for another key stands in the way.
      const old = error.name === 'InvalidStateError' ? await registration.pushManager.getSubscription() : null;
      if (old === null) throw error;
      await old.unsubscribe();
      return ask();
    }
  };

  const choose = async (part, say) => {
    say('Your browser asks you.');
    if ((await Notification.requestPermission()) !== 'granted') return say('This browser does not let this page show messages; its settings can change that.');
    say('This browser asks its push service for an address.');
    const { endpoint, keys } = (await addressOf(part.dataset.browser)).toJSON();
    for (const [name, value] of Object.entries({ endpoint, p256dh: keys.p256dh, auth: keys.auth })) part.querySelector(`[name=${name}]`).value = value;
    say('This browser is chosen.');
    if (part instanceof HTMLFormElement) part.submit();
  };

  for (const part of document.querySelectorAll('[data-browser]')) {
    const [button, status] = [part.querySelector('button[type=button]'), part.querySelector('[role=status]')];
    const say = (text) => { status.textContent = text; };
    part.hidden = false;
    if (!('serviceWorker' in navigator && 'PushManager' in window && 'Notification' in window)) {
      button.hidden = true;
      say('This browser cannot be told. On a phone or tablet it often can once this page stands on the home screen.');
      continue;
    }
    button.hidden = false;
    if (part.querySelector('[name=endpoint]').value === '') say('It is told also when no page is open. You are asked first.');
    button.addEventListener('click', () => { choose(part, say).catch(() => say('This browser got no address from its push service. Try again later, or take mail.')); });
  }

  // What is under way is looked at again; forms are left as they are, and what is typed in them.
  const look = async () => {
    const answer = await fetch(location.pathname, { headers: { accept: 'text/html' } }).catch(() => null);
    if (answer === null || !answer.ok) return;
    const fresh = new DOMParser().parseFromString(await answer.text(), 'text/html');
    for (const part of document.querySelectorAll('[data-live]')) {
      const next = fresh.querySelector(`[data-live="${CSS.escape(part.dataset.live)}"]`);
      if (next !== null) part.replaceWith(document.importNode(next, true));
    }
  };
  let looks = 0;
  const timer = setInterval(() => {
    looks += 1;
    if (looks > 20 || document.querySelector('[data-open]') === null) clearInterval(timer);
    else void look();
  }, 3000);
  navigator.serviceWorker?.addEventListener('message', ({ data }) => { if ((data?.shown ?? data?.confirmed) !== undefined && document.querySelector('[data-live]') !== null) void look(); });
  // The messages that came while this script was on its way.
  navigator.serviceWorker?.startMessages();

  // Places far from here are set up too, so a zone that stands there stays.
  for (const zone of document.querySelectorAll('input[data-zone]')) if (zone.value === '') zone.value = Intl.DateTimeFormat().resolvedOptions().timeZone;

  // Computed anew while somebody types: the same form, answered by the same page.
  for (const form of document.querySelectorAll('form[data-preview]')) {
    let wait = 0;
    let newest = 0;
    form.addEventListener('input', () => {
      clearTimeout(wait);
      wait = setTimeout(async () => {
        const mine = (newest += 1);
        const body = new URLSearchParams(new FormData(form));
        body.set('to', 'look');
        const answer = await fetch(form.action, { method: 'POST', body, headers: { accept: 'text/html' } }).catch(() => null);
        if (answer === null || mine !== newest || ![200, 400].includes(answer.status)) return;
        const next = new DOMParser().parseFromString(await answer.text(), 'text/html').querySelector('[data-computed]');
        if (next !== null) form.querySelector('[data-computed]').replaceWith(document.importNode(next, true));
      }, 350);
    });
  }
})();
