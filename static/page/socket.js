// The WebSocket to the program: it reconnects by itself, and says how old the newest message is.

const firstDelayMs = 500; // before the second try; doubled for each further one
const longestDelayMs = 10000;
const tickMs = 250;

// connect opens the socket and keeps it open. heard gets each message as an object; told gets, several
// times a second, { open, ageS, nextS }: whether the socket is open, the age of the newest message
// (since loading the page, without one) and the time to the next try.
export function connect(heard, told) {
  let socket = null;
  let delayMs = firstDelayMs;
  let tryAt = 0;
  let newest = performance.now();

  function open() {
    const address = new URL("live", document.baseURI);
    address.protocol = address.protocol === "https:" ? "wss:" : "ws:";
    const opened = new WebSocket(address);
    socket = opened;
    opened.onmessage = (event) => {
      newest = performance.now();
      delayMs = firstDelayMs;
      heard(JSON.parse(event.data));
    };
    opened.onclose = () => {
      // The longest wait is spread, so that many pages do not all come back at once.
      tryAt = performance.now() + delayMs * (0.8 + 0.4 * Math.random());
      delayMs = Math.min(2 * delayMs, longestDelayMs);
      socket = null;
    };
  }

  function isOpen() {
    return socket !== null && socket.readyState === WebSocket.OPEN;
  }

  function tick() {
    const now = performance.now();
    if (socket === null && now >= tryAt) {
      open();
    }
    told({ open: isOpen(), ageS: (now - newest) / 1000, nextS: Math.max(0, tryAt - now) / 1000 });
  }

  open();
  setInterval(tick, tickMs);
  return {
    // send tells the program something; it is dropped while the socket is not open.
    send(request) {
      if (isOpen()) {
        socket.send(JSON.stringify(request));
      }
    },
  };
}
