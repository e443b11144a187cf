import { describe, expect, it } from 'vitest';
import { axisLabel, axisUnit, linearTicks, logTicks, numberText, sampleText } from './axis';
import { plotSvg } from './svg';

describe('axes', () => {
  it('write quantity and unit as a quotient, ISO 80000-1 7.1', () => {
    expect(axisLabel('I', 'pA')).toBe('I / pA');
    expect(axisLabel('G', 'A/V')).toBe('G / (A/V)');
    expect(axisLabel('n', '1')).toBe('n');
    expect(axisLabel('I', null)).toBe('I (unit not stated)');
  });

  it('choose an SI prefix', () => {
    expect(axisUnit('A', 8.7e-11)).toEqual({ unit: 'pA', factor: 1e12 });
    expect(axisUnit('mV', 362)).toEqual({ unit: 'mV', factor: 1 });
    expect(axisUnit('Ohm', 25812.8)).toMatchObject({ unit: 'kOhm' });
    expect(axisUnit('min', 5000)).toEqual({ unit: 'min', factor: 1 });
    expect(axisUnit(null, 5000)).toEqual({ unit: null, factor: 1 });
  });

  it('group digits by thin spaces and use a true minus, SI Brochure 5.4.4', () => {
    expect(numberText(-12345.67891, 5)).toBe('\u221212\u2009345.678\u200991');
    expect(numberText(1234, 0)).toBe('1234');
    expect(numberText(-0.0001, 2)).toBe('0.00');
    expect(numberText(NaN, 2)).toBe('–');
    expect(sampleText(8.696993e-11)).toBe('8.696\u200999\u2009×\u200910⁻¹¹');
  });

  it('place ticks on 1, 2 and 5', () => {
    expect(linearTicks(-0.31, 0.29, 6).map(({ text }) => text)).toEqual(['−0.3', '−0.2', '−0.1', '0.0', '0.1', '0.2']);
    expect(linearTicks(1, 1, 6)).toEqual([]);
    expect(logTicks(0.5, 60, 6).map(({ text }) => text)).toContain('10');
    expect(logTicks(-1, 60, 6)).toEqual([]);
  });
});

describe('SVG export', () => {
  const plot = {
    title: 'I <script>alert(1)</script>',
    description: 'a "line"',
    xLabel: 't / s',
    yLabel: 'I / pA',
    xRange: [0, 10] as [number, number],
    yRange: [1, 100] as [number, number],
    logX: false,
    logY: true,
    series: [{ label: 'I', x: [0, 5, 10], min: [1, -3, 100], max: [1, -3, 100] }],
    spans: [{ label: 'on', intervals: [[2, 4]] as [number, number][] }],
  };

  it('stands alone, escapes every text and has no NaN', () => {
    const svg = plotSvg(plot);
    expect(svg).not.toMatch(/<script|href|url\((?!#frame)|NaN|Infinity/);
    expect(svg).toContain('&lt;script&gt;');
    expect(svg).toContain('>on</text>');
    // The negative sample has no place on a logarithmic axis: the curve breaks there.
    expect(svg.match(/ d="([^"]*)"/)?.[1]?.match(/M/g)).toHaveLength(2);
  });
});
