import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';

/**
 * A judged day with only those margins that the words of a brief are made of: the cause of the day, and of each hour the
 * first cause and the first thing unknown. A fraction of the size, so that messages for twenty subscribers can be put into
 * words in one go. That it says the same is tested, not hoped.
 */
export function digestOf(day: JudgedDay): JudgedDay {
  return { ...day, hours: day.hours.map((hour) => ({ ...hour, airspeed: null, wind: null, ensemble: null, margins: spoken(day, hour) })) };
}

function spoken(day: JudgedDay, hour: JudgedHour): JudgedHour['margins'] {
  const firstUnknown = hour.margins.find((margin) => margin.status === 'unknown');
  const isCause = (id: string): boolean => id === hour.causes[0] || (day.cause?.validAt === hour.validAt && id === day.cause.id);
  return hour.margins.filter((margin) => margin === firstUnknown || isCause(margin.id));
}
