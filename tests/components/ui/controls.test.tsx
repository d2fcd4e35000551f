import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import { Button } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import { itemAfterKey } from '@/components/ui/menu';
import { Pager } from '@/components/ui/pager';
import { Quantity } from '@/components/ui/quantity';
import { StateBead, type BeadState } from '@/components/ui/state-bead';
import { HeadCell } from '@/components/ui/table';
import { tabAfterKey } from '@/components/ui/tabs';

describe('fields', () => {
  it('says what is wrong to whoever can not see the border', () => {
    const html = renderToStaticMarkup(
      <Field id="t" label="Temperature" unit="K" error="Enter 1.30 to 2.15 K." />,
    );
    expect(html).toContain('<label for="t"');
    expect(html).toContain('aria-invalid="true"');
    expect(html).toContain('aria-describedby="t-words"');
    expect(html).toMatch(/id="t-words"[^>]*>Enter 1\.30 to 2\.15 K\.</);
  });

  it('shows the error rather than the help, and points at nothing without words', () => {
    const both = renderToStaticMarkup(<Field label="a" help="from run 7" error="Too large." />);
    expect(both).not.toContain('from run 7');
    expect(renderToStaticMarkup(<Field label="a" />)).not.toContain('aria-describedby');
  });
});

describe('buttons', () => {
  it('stand beside the reason when they can not be pressed, and never send a form by accident', () => {
    const html = renderToStaticMarkup(<Button reason="Only a principal investigator can.">Sign off</Button>);
    expect(html).toContain('disabled=""');
    expect(html).toContain('Only a principal investigator can.');
    expect(html).toContain('type="button"');
  });
});

describe('choices', () => {
  it('are one radio group with the chosen one checked', () => {
    const options = [
      { value: 'linear', label: 'linear' },
      { value: 'log', label: 'log' },
    ];
    const html = renderToStaticMarkup(
      <Segment label="Scale" name="scale" options={options} defaultValue="log" />,
    );
    expect(html.match(/name="scale"/g)).toHaveLength(2);
    expect(html).toMatch(/<input type="radio"[^>]*checked=""[^>]*value="log"|value="log"[^>]*checked=""/);
    expect(html).toContain('<legend class="sr-only">Scale</legend>');
  });
});

describe('quantities', () => {
  it('tell screen readers that an unknown one was not measured', () => {
    expect(renderToStaticMarkup(<Quantity value={null} unit="K" />)).toContain('not measured');
  });

  it('raise exponents of the unit', () => {
    expect(renderToStaticMarkup(<Quantity value={3} unit="m^-2" />)).toContain('<sup>\u22122</sup>');
  });
});

describe('states', () => {
  it('have a shape of their own without any colour', () => {
    const states: BeadState[] = [
      'waiting',
      'running',
      'done',
      'failed',
      'stopped',
      'stale',
      'signed',
      'warning',
      'caution',
    ];
    const shapes = states.map((state) =>
      renderToStaticMarkup(<StateBead state={state} />).replace(/(fill|stroke)-(?!none)[\w-]+/g, '$1'),
    );
    expect(new Set(shapes).size).toBe(states.length);
  });
});

describe('tables', () => {
  it('say by which column and in which direction they are sorted', () => {
    const cell = (current: 'ascending' | null) =>
      renderToStaticMarkup(
        <table>
          <thead>
            <tr>
              <HeadCell sort={{ href: '?sort=name', current }}>Name</HeadCell>
            </tr>
          </thead>
        </table>,
      );
    expect(cell('ascending')).toContain('aria-sort="ascending"');
    expect(cell(null)).toContain('aria-sort="none"');
  });

  it('have no pager where everything fits on one page', () => {
    expect(
      renderToStaticMarkup(<Pager label="runs" backHref={null} nextHref={null} summary="3 runs" />),
    ).toBe('');
  });
});

describe('keys', () => {
  it('wrap around tabs and menus and leave other keys alone', () => {
    expect(tabAfterKey('ArrowRight', 2, 3)).toBe(0);
    expect(tabAfterKey('ArrowLeft', 0, 3)).toBe(2);
    expect(tabAfterKey('x', 0, 3)).toBeNull();
    expect(itemAfterKey('ArrowDown', -1, 4)).toBe(0);
    expect(itemAfterKey('ArrowUp', -1, 4)).toBe(3);
    expect(itemAfterKey('End', 0, 4)).toBe(3);
    expect(itemAfterKey('ArrowDown', 0, 0)).toBeNull();
  });
});
