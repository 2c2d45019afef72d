import type { TerminalStore } from '../store/terminal.ts';
import type { Channel } from './channel.ts';

/** The terminal of the machine that runs a local Dawnmargin: a row that the start command prints. */
export function terminalChannel(store: TerminalStore): Channel {
  return {
    lane: () => 'terminal',
    async send(message, _address, { nowMs }) {
      await store.write({ messageId: message.id, title: message.title, text: message.text }, nowMs);
      return { state: 'sent' };
    },
  };
}
