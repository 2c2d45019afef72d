// The part of web-push that the bench calls.
declare module 'web-push' {
  interface Keys { readonly publicKey: string; readonly privateKey: string }
  interface Details { readonly endpoint: string; readonly method: string; readonly headers: Readonly<Record<string, string | number>>; readonly body: Buffer | null }
  const webPush: {
    generateVAPIDKeys(): Keys;
    encrypt(p256dh: string, auth: string, payload: string, contentEncoding: 'aes128gcm'): { readonly cipherText: Buffer };
    generateRequestDetails(
      subscription: { readonly endpoint: string; readonly keys: { readonly p256dh: string; readonly auth: string } }, payload: string,
      options: { readonly vapidDetails: Keys & { readonly subject: string }; readonly contentEncoding: 'aes128gcm'; readonly TTL: number },
    ): Details;
  };
  export default webPush;
}
