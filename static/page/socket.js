// The WebSocket to the program: it reconnects by itself, and says how old the newest news is.

const firstDelayMs = 500; // before the second try; doubled for each further one
const longestDelayMs = 10000;
const tickMs = 250;
const quietMs = 5000; // of silence, then the program is asked whether it is there
const answerMs = 5000; // then the connection is given up: it stands on this side alone
const sleptMs = 4000; // a tick that late means that this computer slept

let highest = 0;
let before = performance.now();

// now is a time in ms that goes on while this computer sleeps, which performance.now need not do, and does not
// go back when the clock on the wall is set.
function now() {
  const clock = performance.now();
  highest = Math.max(highest + clock - before, Date.now());
  before = clock;
  return highest;
}

// connect opens the socket and keeps it open. heard gets each message as an object and returns whether it is
// news of the run; told gets, several times a second, { open, ageS, nextS }: whether the socket is open, the age
// of the newest news (since loading the page, without any) and the time to the next try.
export function connect(heard, told) {
  let socket = null;
  let delayMs = firstDelayMs;
  let tryAt = 0;
  let newest = now(); // news
  let sign = now(); // anything at all from the program
  let askedAt = 0; // whether it is there, 0 without a question open
  let ticked = now();

  function open() {
    const address = new URL("live", document.baseURI);
    address.protocol = address.protocol === "https:" ? "wss:" : "ws:";
    const opened = new WebSocket(address);
    socket = opened;
    sign = now();
    askedAt = 0;
    opened.onmessage = (event) => {
      if (socket !== opened) {
        return; // given up, and it woke again
      }
      sign = now();
      askedAt = 0;
      delayMs = firstDelayMs;
      if (heard(JSON.parse(event.data))) {
        newest = sign;
      }
    };
    opened.onclose = () => {
      if (socket === opened) {
        // The longest wait is spread, so that many pages do not all come back at once.
        tryAt = now() + delayMs * (0.8 + 0.4 * Math.random());
        delayMs = Math.min(2 * delayMs, longestDelayMs);
        socket = null;
      }
    };
  }

  // giveUp leaves a connection that nothing comes from any more, and tries another at once.
  function giveUp() {
    const silent = socket;
    socket = null;
    tryAt = 0;
    delayMs = firstDelayMs;
    silent?.close();
  }

  function isOpen() {
    return socket !== null && socket.readyState === WebSocket.OPEN;
  }

  function send(request) {
    if (isOpen()) {
      socket.send(JSON.stringify(request));
    }
  }

  function tick() {
    const at = now();
    if (socket === null) {
      // nothing to give up
    } else if (at - ticked > sleptMs && at - sign > sleptMs) {
      giveUp(); // a connection does not outlive sleep, but may not know it yet
    } else if (askedAt > 0 && at - askedAt > answerMs || !isOpen() && at - sign > longestDelayMs) {
      giveUp();
    } else if (isOpen() && askedAt === 0 && at - sign > quietMs) {
      askedAt = at;
      send({ type: "alive" });
    }
    ticked = at;
    if (socket === null && at >= tryAt) {
      open();
    }
    told({ open: isOpen(), ageS: (at - newest) / 1000, nextS: Math.max(0, tryAt - at) / 1000 });
  }

  open();
  setInterval(tick, tickMs);
  addEventListener("online", () => {
    tryAt = 0;
  });
  document.addEventListener("visibilitychange", tick);
  return { send }; // tells the program something; it is dropped while the socket is not open
}
