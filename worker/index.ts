export default {
  fetch(): Response {
    return new Response('Dawnmargin', { headers: { 'content-type': 'text/plain; charset=utf-8' } });
  },
  scheduled(): void {},
  queue(): void {},
} satisfies ExportedHandler;
