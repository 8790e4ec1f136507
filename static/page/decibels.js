// Levels as shares of a channel's limit, in words and along a bar.

const bottomDB = -60;
const limit = 1 - 2 ** -15; // where a channel counts as at its limit
const nearDB = 3; // "close" from here on; common practice, no source

function decibels(level) {
  return 20 * Math.log10(level);
}

// share is where a level stands between the bottom of the bar and the limit, 0 to 1.
export function share(level) {
  return level > 0 ? Math.min(Math.max(1 - decibels(level) / bottomDB, 0), 1) : 0;
}

// grade is "unknown", "limit", "near", "silent" or "fine".
export function grade(peak) {
  if (peak === null || peak === undefined) {
    return "unknown";
  }
  return peak >= limit ? "limit" : peak === 0 ? "silent" : decibels(peak) > -nearDB ? "near" : "fine";
}

// headroom is what a peak leaves to the limit, in words.
export function headroom(peak) {
  switch (grade(peak)) {
    case "unknown": return "unknown";
    case "limit": return "0 dB";
    case "silent": return "○ silent";
    case "near": return `△ ${(-decibels(peak)).toFixed(1)} dB`;
  }
  return `${(-decibels(peak)).toFixed(0)} dB`;
}
