/**
 * The one wording of the caution block. General on purpose: it reminds, and leaves procedure to those who answer for
 * the place. Changing it changes what earlier acknowledgements were given for, so a new wording takes a new number.
 */
export const cautionText = {
  edition: 1,
  title: 'Before you start.',
  points: [
    {
      about: 'Cold burns',
      text: 'Protect eyes and hands; no loose gloves, nothing that holds liquid against the skin.',
    },
    {
      about: 'Oxygen',
      text: 'Helium and nitrogen displace air: ventilate, watch the oxygen monitor, never ride a lift with a dewar.',
    },
    {
      about: 'Trapped gas',
      text: 'Ice plugs and closed volumes burst: keep relief valves free, never seal a vessel that holds cold liquid or gas.',
    },
    { about: 'Magnets', text: 'Keep pacemakers, implants and loose iron away from a magnet and its stray field.' },
    { about: 'Lifting', text: 'Dewars, inserts and magnets are heavy: use the hoist, and not alone.' },
    {
      about: 'Electricity',
      text: 'Mains and high-frequency power: switch off and make safe before opening or reconnecting.',
    },
    {
      about: 'The device',
      text: 'Static discharge destroys it: ground yourself, the lines and the sample before connecting.',
    },
  ],
  ending:
    'Follow the laboratory’s own rules, the local law and the advice of those licensed for this work; they decide, this text does not. It is a reminder, not a procedure.',
} as const;
