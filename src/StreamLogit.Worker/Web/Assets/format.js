// Writes cells of tables as people read them.

const counts = new Intl.NumberFormat("en", { maximumFractionDigits: 0 });
const amounts = new Intl.NumberFormat("en", { maximumFractionDigits: 1 });
const figures = new Intl.NumberFormat("en", { maximumSignificantDigits: 4 });
const shares = new Intl.NumberFormat("en", { maximumFractionDigits: 1 });
const smallShares = new Intl.NumberFormat("en", { maximumSignificantDigits: 2 });
const none = "–";
const months = ["January", "February", "March", "April", "May", "June", "July", "August", "September", "October", "November", "December"];

const two = (number) => String(number).padStart(2, "0");

export const seconds = (time) => (time === null ? null : Date.parse(time) / 1000);

export function time(value) {
  if (!value) return none;
  const date = new Date(value);
  const clock = `${two(date.getUTCHours())}:${two(date.getUTCMinutes())}`;
  return `${date.getUTCDate()} ${months[date.getUTCMonth()].slice(0, 3)} ${date.getUTCFullYear()}, ${clock}`;
}

export function share(value) {
  if (value === null) return none;
  const percent = value * 100;
  return `${percent !== 0 && Math.abs(percent) < 0.95 ? smallShares.format(percent) : shares.format(percent)} %`;
}

export function duration(value) {
  if (value === null) return none;
  if (value < 1) return `${figures.format(value * 1000)} ms`;
  if (value < 120) return `${amounts.format(value)} s`;
  if (value < 7200) return `${amounts.format(value / 60)} min`;
  if (value < 172800) return `${amounts.format(value / 3600)} h`;
  return `${amounts.format(value / 86400)} d`;
}

export function cell(kind, value) {
  if (value === null || value === undefined) return none;
  switch (kind) {
    case "time": return time(value);
    case "count": return counts.format(value);
    case "amount": return amounts.format(value);
    case "share": return share(value);
    case "figure": return figures.format(value);
    case "seconds": return duration(value);
    default: return String(value);
  }
}
