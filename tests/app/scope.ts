/** What Next's own request scope answers to an action in a test: the headers of whoever asks. */
export const scope = { headers: new Headers() };
