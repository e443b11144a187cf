/** Every page, for axe, both themes and 360 px. `find` gives an address with real ids in the demonstration notebook. */
export type PageUnderTest = {
  /** Path with its parameters, as the folders under app/ spell it. */
  pattern: string;
  /** Who looks at it; null signed out. */
  as: 'ines' | 'tomas' | 'priya' | 'oskar' | 'ada' | null;
  /** A path, or where a link's name on a first page leads, with an ending. */
  address: string | { on: string; link: string; ending?: string };
};

export const pagesUnderTest: PageUnderTest[] = [
  { pattern: '/sign-in', as: null, address: '/sign-in' },
  { pattern: '/forgotten', as: null, address: '/forgotten' },
  { pattern: '/reset', as: null, address: '/reset?token=none' },
  { pattern: '/join', as: null, address: '/join?token=none' },
  { pattern: '/', as: 'ines', address: '/' },
  { pattern: '/new-entry', as: 'ines', address: '/new-entry' },
  { pattern: '/notebooks', as: 'tomas', address: '/notebooks' },
  { pattern: '/notebooks/[code]', as: 'tomas', address: '/notebooks/NB-03' },
  { pattern: '/notebooks/[code]/members', as: 'ines', address: '/notebooks/NB-03/members' },
  { pattern: '/notebooks/[code]/log', as: 'oskar', address: '/notebooks/NB-03/log' },
  { pattern: '/notebooks/[code]/new', as: 'tomas', address: '/notebooks/NB-03/new' },
  { pattern: '/notebooks/[code]/new-device', as: 'tomas', address: '/notebooks/NB-03/new-device' },
  { pattern: '/notebooks/[code]/new-cooldown', as: 'tomas', address: '/notebooks/NB-03/new-cooldown' },
  { pattern: '/devices', as: 'tomas', address: '/devices' },
  { pattern: '/devices/[id]', as: 'tomas', address: { on: '/devices', link: 'GA1-B3' } },
  { pattern: '/cooldowns', as: 'tomas', address: '/cooldowns' },
  { pattern: '/cooldowns/[id]', as: 'tomas', address: { on: '/cooldowns', link: 'Tern 24' } },
  {
    pattern: '/entries/[id]',
    as: 'priya',
    address: { on: '/notebooks/NB-03', link: 'Escape over the exit barrier, day two' },
  },
  { pattern: '/entries/[id]', as: 'tomas', address: { on: '/notebooks/NB-03', link: 'Escape at −606 mV' } },
  {
    pattern: '/entries/[id]/versions',
    as: 'tomas',
    address: { on: '/notebooks/NB-03', link: 'Escape at −606 mV', ending: '/versions' },
  },
  {
    pattern: '/entries/[id]/versions/[seq]',
    as: 'priya',
    address: { on: '/notebooks/NB-03', link: 'Escape over the exit barrier, day two', ending: '/versions/1' },
  },
  {
    pattern: '/entries/[id]/sign',
    as: 'tomas',
    address: { on: '/notebooks/NB-03', link: 'Escape at −606 mV', ending: '/sign' },
  },
  {
    pattern: '/entries/[id]/countersign',
    as: 'priya',
    address: { on: '/notebooks/NB-03', link: 'Waiting-time scans, higher barrier', ending: '/countersign' },
  },
  {
    pattern: '/traces/[id]',
    as: 'priya',
    address: { on: '/notebooks/NB-03', link: 'Escape over the exit barrier, day two', ending: 'first trace' },
  },
  { pattern: '/countersign', as: 'priya', address: '/countersign' },
  { pattern: '/account', as: 'tomas', address: '/account' },
  { pattern: '/administration', as: 'ada', address: '/administration' },
  { pattern: '/mailbox', as: 'tomas', address: '/mailbox' },
];
