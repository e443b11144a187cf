import { describe, expect, it } from 'vitest';
import { checkTiming } from './timing';

const drive = (given: Partial<Parameters<typeof checkTiming>[0]>) =>
  checkTiming({ frequency: null, waveform: null, amplitude: null, load: null, wait: null, eject: null, ...given });

describe('timing of a drive cycle', () => {
  it('is well where the parts fill the period or less', () => {
    expect(drive({ frequency: '200 kHz', load: '1 µs', wait: '3 µs', eject: '1 µs' })).toBeNull();
    expect(drive({ frequency: '200 kHz exactly', load: '1.0(1) µs', wait: '2 µs' })).toBeNull();
    expect(drive({ frequency: '3 MHz', wait: '0.1 µs' })).toBeNull();
  });

  it('says where they do not fit', () => {
    const sentence = drive({ frequency: '200 kHz', load: '1 µs', wait: '4 µs', eject: '1 µs' });
    expect(sentence).toContain('6\u2009µs');
    expect(sentence).toContain('1/f = 5\u2009µs');
  });

  it('asks nothing about what is not filled in', () => {
    expect(drive({})).toBeNull();
    expect(drive({ frequency: '200 kHz' })).toBeNull();
    expect(drive({ load: '1 s', wait: '' })).toBeNull();
  });

  it.each([
    [{ frequency: 'fast' }, 'The drive frequency'],
    [{ frequency: '200' }, 'The drive frequency'],
    [{ frequency: '0 Hz' }, 'not positive'],
    [{ wait: '3 V' }, 'The waiting time'],
    [{ eject: '-1 µs' }, 'negative'],
    [{ load: 'x*2' }, 'The load time'],
  ])('says what cannot be read in %j', (given, part) => {
    expect(drive(given)).toContain(part);
  });
});
