import type { JudgedDay } from '../../lib/brief/day.ts';

/**
 * A judged day with only those margins that the words of a brief are made of: the causes of each hour and what is
 * unknown. A twentieth of the size, so that a message for twenty subscribers can be put into words in one go.
 */
export function digestOf(day: JudgedDay): JudgedDay {
  return {
    ...day,
    hours: day.hours.map((hour) => ({
      ...hour,
      airspeed: null,
      margins: hour.margins.filter((margin) => hour.causes.includes(margin.id) || margin.status === 'unknown'),
    })),
  };
}
